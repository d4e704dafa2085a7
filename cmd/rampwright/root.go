package main

import (
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/spf13/cobra"
)

// version is the one constant that names this build.
const version = "0.1.0"

const program = "rampwright " + version

// app is one run of the program: its streams and the flags all commands share.
type app struct {
	in       io.Reader
	out      io.Writer
	messages io.Writer

	json      bool
	quiet     bool
	form      progressForm
	force     bool
	jobs      int
	timeLimit string
}

// root builds the command tree.
func (a *app) root() *cobra.Command {
	root := &cobra.Command{
		Use:   "rampwright",
		Short: "Size planar high-speed air inlets: surrogates to search, exact shock relations to verify",
		Long: `rampwright sizes planar high-speed air inlets (Mach 2 to 10) in early design.
It reads a brief, searches surrogates of the exact flow under the brief's
limits, verifies every candidate with the exact shock relations by two routes,
and writes the geometry.

Exit codes:
` + exitHelp(),
		SilenceUsage:               true,
		SilenceErrors:              true,
		SuggestionsMinimumDistance: 2,
		CompletionOptions:          cobra.CompletionOptions{HiddenDefaultCmd: true},
		Args:                       cobra.ArbitraryArgs,
		RunE: func(cmd *cobra.Command, args []string) error {
			if len(args) > 0 {
				return unknownCommand(cmd, args[0])
			}
			return cmd.Help()
		},
		PersistentPreRunE: refuseEmpty,
	}
	root.SetIn(a.in)
	root.SetOut(a.out)
	root.SetErr(a.messages)
	root.SetFlagErrorFunc(func(cmd *cobra.Command, err error) error {
		if name, found := strings.CutPrefix(err.Error(), `invalid argument "" for "`); found {
			name, _, _ = strings.Cut(name, `"`)
			return emptyFlags(cmd, name)
		}
		return &usageError{err.Error(), "see " + cmd.CommandPath() + " --help"}
	})
	root.AddCommand(
		a.designCommand(), a.flowCommand(), a.checkCommand(), a.fitsCommand(), a.newCommand(),
		a.ladderCommand(), a.tradeCommand(), a.envelopeCommand(), a.scheduleCommand(), a.spreadCommand(),
		a.reportCommand(), a.compareCommand(), a.quantitiesCommand(), a.schemaCommand(), a.versionCommand(),
	)
	root.SetHelpCommand(&cobra.Command{
		Use: "help [command]", Short: "Explain a command",
		RunE: func(cmd *cobra.Command, args []string) error {
			about, rest, _ := root.Find(args)
			if len(rest) > 0 {
				return unknownCommand(root, rest[0])
			}
			return about.Help()
		},
	})
	return root
}

// unknownCommand refuses a command there is not, with the nearest there is.
func unknownCommand(root *cobra.Command, name string) error {
	hint := "rampwright --help lists the commands"
	if name == "" { // the beginning of every one
		return &usageError{"the name of the command is empty", hint}
	}
	if near := root.SuggestionsFor(name); len(near) > 0 {
		hint = "did you mean " + strings.Join(near, " or ") + "? " + hint
	}
	return &usageError{fmt.Sprintf("there is no command %q", name), hint}
}

// worded are the flags, beside those of the brief, that take a text.
var worded = []string{
	"of", "output", "mach", "incidence-deg", "points", "limits-of", "move", "highest", "lowest", "svg", "at", "waves",
	"between", "count", "counts", "kinds", "scenario", "time-limit", "with", "quantity", "show",
}

// refuseEmpty refuses an empty argument, and a flag that was given an empty text,
// which would otherwise read like one that was not given. Flags of the brief are
// judged with the brief.
func refuseEmpty(cmd *cobra.Command, args []string) error {
	if cmd.HasParent() && slices.Contains(args, "") { // else it stands for a command
		return &usageError{"an argument is empty", "usage: " + strings.TrimSpace(cmd.UseLine())}
	}
	var empty []string
	for _, name := range worded {
		flag := cmd.Flags().Lookup(name)
		if flag == nil || !flag.Changed {
			continue
		}
		values := []string{flag.Value.String()}
		if repeated, ok := flag.Value.(interface{ GetSlice() []string }); ok {
			values = repeated.GetSlice()
		}
		if slices.Contains(values, "") {
			empty = append(empty, "--"+name)
		}
	}
	if empty == nil {
		return nil
	}
	return emptyFlags(cmd, empty...)
}

// emptyFlags refuses flags that were given an empty text.
func emptyFlags(cmd *cobra.Command, names ...string) error {
	return &usageError{strings.Join(names, ", ") + ": the flag has an empty value", "see " + cmd.CommandPath() + " --help"}
}

// exactArgs refuses a wrong number of arguments as bad usage.
func exactArgs(n int) cobra.PositionalArgs {
	return func(cmd *cobra.Command, args []string) error {
		if len(args) != n {
			return &usageError{
				"expected " + count(n, "argument") + ", got " + count(len(args), "argument"),
				"usage: " + strings.TrimSpace(cmd.UseLine()),
			}
		}
		return nil
	}
}

func (a *app) versionCommand() *cobra.Command {
	return &cobra.Command{
		Use: "version", Short: "Print the version", Args: exactArgs(0),
		RunE: func(cmd *cobra.Command, args []string) error {
			_, err := io.WriteString(a.out, program+"\n")
			return err
		},
	}
}
