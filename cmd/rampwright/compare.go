package main

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
)

func (a *app) compareCommand() *cobra.Command {
	var file string
	cmd := &cobra.Command{
		Use: "compare DIR...", Short: "Set the results of several designs side by side",
		Long: fmt.Sprintf(`Set the results of %d to %d result folders side by side, in the order given:
searched values, aims, margins, and with -o FILE a page that lays the contours
over each other as well.`, report.LeastCompared, report.MostCompared),
		Args: func(cmd *cobra.Command, args []string) error {
			if len(args) < report.LeastCompared || len(args) > report.MostCompared {
				return &usageError{
					fmt.Sprintf("expected %d to %d result folders, got %d", report.LeastCompared, report.MostCompared, len(args)),
					"usage: " + strings.TrimSpace(cmd.UseLine()),
				}
			}
			return nil
		},
		RunE: func(cmd *cobra.Command, args []string) error { return a.compare(args, file) },
	}
	cmd.Flags().StringVarP(&file, "output", "o", "", "also write an HTML page to this file")
	cmd.Flags().BoolVar(&a.json, "json", false, "print one JSON document")
	cmd.Flags().BoolVar(&a.quiet, "quiet", false, "no message")
	return cmd
}

// compare reads every folder and prints them side by side.
func (a *app) compare(dirs []string, file string) error {
	var folders []report.Named
	for _, dir := range dirs {
		folder, err := resultFolder(dir)
		if err != nil {
			return err
		}
		folders = append(folders, report.Named{Name: filepath.ToSlash(filepath.Clean(dir)), Folder: *folder})
	}
	document, err := report.NewCompare(program, folders)
	if err != nil {
		return err
	}
	if file != "" {
		page, err := document.Page()
		if err != nil {
			return err
		}
		if err := os.WriteFile(file, page, 0o666); err != nil {
			return &unwritable{file, "choose another file with -o", err}
		}
		a.say("comparison page: %s\n", file)
	}
	return a.print(document)
}
