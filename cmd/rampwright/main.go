// Command rampwright sizes planar high-speed air inlets in early design: it
// searches surrogates of the exact shock relations under the limits of a brief,
// verifies what it finds exactly, and writes the geometry.
package main

import (
	"io"
	"os"
)

func main() {
	os.Exit(run(os.Args[1:], os.Stdin, os.Stdout, os.Stderr))
}

// run executes one command line and returns its exit code.
func run(args []string, in io.Reader, out, messages io.Writer) int {
	app := &app{in: in, out: out, messages: messages, form: autoProgress}
	command := app.root()
	command.SetArgs(args)
	err := command.Execute()
	return app.finish(err)
}
