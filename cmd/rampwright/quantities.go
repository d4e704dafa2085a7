package main

import (
	"io"

	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/report"
)

func (a *app) quantitiesCommand() *cobra.Command {
	cmd := &cobra.Command{
		Use: "quantities", Short: "List every quantity: name, unit, definition, source, where it applies", Args: exactArgs(0),
		RunE: func(cmd *cobra.Command, args []string) error {
			if a.json {
				_, err := a.out.Write(report.CatalogueJSON(program))
				return err
			}
			_, err := io.WriteString(a.out, report.Catalogue(a.width()))
			return err
		},
	}
	cmd.Flags().BoolVar(&a.json, "json", false, "print one JSON document")
	return cmd
}
