package main

import (
	"encoding/json"
	"fmt"
	"os"
	"strings"

	"rampwright/cmd/rampwright/internal/report"
	"rampwright/cmd/rampwright/internal/runstore"
)

// progressForm is how the stream of messages is written: --progress.
type progressForm string

const (
	autoProgress progressForm = "auto" // a line that moves on a terminal, else plain
	plainLines   progressForm = "lines"
	jsonLines    progressForm = "json"
)

// String implements pflag.Value.
func (f *progressForm) String() string { return string(*f) }

// Type implements pflag.Value.
func (f *progressForm) Type() string { return "FORM" }

// Set implements pflag.Value.
func (f *progressForm) Set(text string) error {
	switch form := progressForm(text); form {
	case autoProgress, plainLines, jsonLines:
		*f = form
		return nil
	}
	return fmt.Errorf("there are %s, %s and %s", autoProgress, plainLines, jsonLines)
}

// messageLine is one JSON line of the stream of messages. Progress has every
// field but text and hint, what is not known being null; a message has its text,
// an error a text and perhaps a hint.
type messageLine struct {
	Format int    `json:"format"`
	Event  string `json:"event"` // "progress", "message" or "error"
	*progressLine
	Text string `json:"text,omitempty"`
	Hint string `json:"hint,omitempty"`
}

// progressLine is what a JSON line says of a phase.
type progressLine struct {
	Phase       string        `json:"phase"`
	Done        int           `json:"done"`
	Total       int           `json:"total"` // at most; a search may need less
	Unit        string        `json:"unit"`  // what is counted
	Best        report.Number `json:"best"`  // aim of the best that holds every limit
	Violation   report.Number `json:"violation"`
	SecondsLeft report.Number `json:"seconds_left"` // at most, at the pace so far
}

// writeLine writes one JSON line.
func (a *app) writeLine(line messageLine) {
	line.Format = 1
	data, err := json.Marshal(line)
	if err != nil {
		panic("a line of messages always encodes: " + err.Error())
	}
	fmt.Fprintf(a.messages, "%s\n", data)
}

// say writes a message, unless quiet.
func (a *app) say(format string, arguments ...any) {
	switch {
	case a.quiet:
	case a.form == jsonLines:
		a.writeLine(messageLine{Event: "message", Text: strings.TrimSpace(fmt.Sprintf(format, arguments...))})
	default:
		fmt.Fprintf(a.messages, format, arguments...)
	}
}

// complain writes an error.
func (a *app) complain(message, hint string) {
	if a.form == jsonLines {
		a.writeLine(messageLine{Event: "error", Text: message, Hint: hint})
		return
	}
	fmt.Fprintf(a.messages, "rampwright: %s\n", message)
	if hint != "" {
		fmt.Fprintf(a.messages, "  hint: %s\n", hint)
	}
}

// notices passes on what the result folder wants known.
func (a *app) notices(folder *runstore.Folder) {
	for _, n := range folder.Notices() {
		a.say("%s\n", n)
	}
}

// terminal reports whether a stream is one, and not a file or pipe.
func terminal(stream any) bool {
	f, ok := stream.(*os.File)
	if !ok {
		return false
	}
	info, err := f.Stat()
	return err == nil && info.Mode()&os.ModeCharDevice != 0
}
