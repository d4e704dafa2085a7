// Package handoff writes what leaves the tool for other programs: the mold line
// for CAD and the flow states for CFD. It knows formats only; the numbers come
// from the caller, in the unit their column names.
package handoff
