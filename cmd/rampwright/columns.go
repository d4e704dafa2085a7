package main

import (
	"os"

	"golang.org/x/term"
)

// terminalColumns asks the terminal behind a stream for its width.
func terminalColumns(stream any) (columns int, ok bool) {
	f, ok := stream.(*os.File)
	if !ok {
		return 0, false
	}
	columns, _, err := term.GetSize(int(f.Fd()))
	return columns, err == nil && columns > 0
}
