package main

import (
	"errors"
	"fmt"
	"strings"

	"rampwright/cmd/rampwright/internal/brief"
	"rampwright/cmd/rampwright/internal/runstore"
)

// Exit codes of the built binary.
const (
	exitDone        = 0
	exitError       = 1
	exitUsage       = 3
	exitNotMet      = 4
	exitStopped     = 5
	exitInterrupted = 130
	exitTerminated  = 143
)

// exitTable is the one table behind help, README and tests.
var exitTable = []struct {
	Code    int
	Meaning string
}{
	{exitDone, "done"},
	{exitError, "error, also when writing"},
	{exitUsage, "bad usage, bad brief, or a search that is refused"},
	{exitNotMet, "finished, but infeasible, not verified, or the exact routes disagree"},
	{exitStopped, "stopped by the time limit with a usable best"},
	{exitInterrupted, "interrupted (Ctrl-C)"},
	{exitTerminated, "interrupted (termination signal)"},
}

// exitHelp is the table as help prints it.
func exitHelp() string {
	var text strings.Builder
	for _, row := range exitTable {
		fmt.Fprintf(&text, "  %3d  %s\n", row.Code, row.Meaning)
	}
	return text.String()
}

// usageError is a command line that asks for what there is not.
type usageError struct {
	message string
	hint    string
}

func (e *usageError) Error() string { return e.message }

// endedWith is a command that finished its work with a code other than 0; what
// there is to say has been said.
type endedWith struct {
	code int
}

func (e *endedWith) Error() string { return fmt.Sprintf("ended with code %d", e.code) }

// finish reports an error once and returns the exit code.
func (a *app) finish(err error) int {
	var ended *endedWith
	var usage *usageError
	var problems brief.Problems
	var hinted interface{ Hint() string }
	switch {
	case err == nil:
		return exitDone
	case errors.As(err, &ended):
		return ended.code
	case errors.As(err, &problems) && a.form == jsonLines:
		for _, p := range problems {
			a.complain(strings.TrimSpace(brief.Problems{p}.Format()), "")
		}
		return exitUsage
	case errors.As(err, &problems):
		fmt.Fprint(a.messages, problems.Format())
		fmt.Fprintf(a.messages, "\n%s\n", count(len(problems), "problem"))
		return exitUsage
	case errors.As(err, &usage):
		a.complain(usage.message, usage.hint)
		return exitUsage
	case errors.As(err, &hinted):
		a.complain(err.Error(), hinted.Hint())
		return exitError
	}
	a.complain(err.Error(), "")
	return exitError
}

// count returns "1 problem", "2 problems".
func count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}

var (
	_ error = (*runstore.Busy)(nil)
	_ error = (*runstore.Refused)(nil)
)
