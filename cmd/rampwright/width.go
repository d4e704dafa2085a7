package main

import (
	"os"
	"strconv"
)

const (
	plainWidth = 100 // of output that goes to a file or pipe
	leastWidth = 72
	mostWidth  = 140
)

// width is the number of columns text is laid out in: those of the terminal,
// within what reads well, and a fixed number elsewhere, so that a saved output
// does not depend on the window it was made in.
func (a *app) width() int {
	if !terminal(a.out) {
		return plainWidth
	}
	columns, ok := terminalColumns(a.out)
	if !ok {
		var err error
		if columns, err = strconv.Atoi(os.Getenv("COLUMNS")); err != nil {
			return plainWidth
		}
	}
	return min(max(columns, leastWidth), mostWidth)
}
