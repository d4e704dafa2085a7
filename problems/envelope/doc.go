// Package envelope surveys one frozen inlet over Mach number and incidence: the
// state at every point of a grid, and the boundaries between them, each followed
// along the zero of its signed margin rather than read off the grid. It also
// schedules the angle of a movable ramp or cowl over a range of Mach numbers.
//
// How a boundary is found. A margin changes sign along edges of the grid and
// diagonals of its cells; on each such edge a bracketed root is taken to
// Settings.Tolerance. The roots of the two edges that a line crosses in a triangle
// are joined, chains are refined between their points until the chord leaves the
// line by no more than Settings.Flatness, and an end inside the map is followed
// on to where the margin ceases to be defined. Every point of a line lies on the
// side where the margin holds. What is not seen: a line that enters and leaves a
// cell between two neighbouring points of the grid.
//
// Where the captured stream ceases to reach the throat without a margin that tells,
// as behind a Mach reflection in the duct, the change is bisected in the same way.
package envelope
