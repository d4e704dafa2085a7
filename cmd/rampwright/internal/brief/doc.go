// Package brief reads a design brief: YAML bytes become a tree of nodes with
// positions, the tree becomes library values, and everything wrong on the way
// is collected, so one reading reports every problem of a file.
//
// The table in keys.go is the single statement of what a brief may contain; it
// feeds the reading, its messages and the documentation.
package brief
