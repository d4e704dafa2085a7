package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/brief"
)

func (a *app) newCommand() *cobra.Command {
	scenario := "veyric-6"
	cmd := &cobra.Command{
		Use: "new FILE", Short: "Write a commented starter brief", Args: exactArgs(1),
		Long: "Write a commented starter brief to FILE, which must not exist.\n\nStarters: " +
			strings.Join(brief.Scenarios(), ", ") + " (all invented).",
		RunE: func(cmd *cobra.Command, args []string) error { return a.writeStarter(args[0], scenario) },
	}
	cmd.Flags().StringVar(&scenario, "scenario", scenario, "starter to write")
	return cmd
}

func (a *app) writeStarter(file, scenario string) error {
	data, near, ok := brief.Scenario(scenario)
	if !ok {
		hint := "starters: " + strings.Join(brief.Scenarios(), ", ")
		if near != "" {
			hint = "did you mean " + near + "? " + hint
		}
		return &usageError{fmt.Sprintf("there is no starter %q", scenario), hint}
	}
	if err := writeNew(file, data); err != nil {
		return err
	}
	_, err := fmt.Fprintf(a.messages, "wrote %s; next: rampwright design %s\n", file, file)
	return err
}

// writeNew writes a file that must not exist.
func writeNew(file string, data []byte) error {
	out, err := os.OpenFile(file, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if errors.Is(err, fs.ErrExist) {
		return &usageError{file + " exists and is not overwritten", "choose another name, or remove it first"}
	}
	if err != nil {
		return &unwritable{file, "choose another place for the file", err}
	}
	if _, err := out.Write(data); err != nil {
		return errors.Join(err, out.Close(), os.Remove(file))
	}
	if err := out.Close(); err != nil {
		return errors.Join(err, os.Remove(file))
	}
	return nil
}
