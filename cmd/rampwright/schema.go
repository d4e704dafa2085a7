package main

import (
	"github.com/spf13/cobra"

	"rampwright/cmd/rampwright/internal/brief"
)

func (a *app) schemaCommand() *cobra.Command {
	return &cobra.Command{
		Use: "schema", Short: "Print the JSON Schema of the brief, for editors", Args: exactArgs(0),
		Long: `Print the JSON Schema (2020-12) of the brief. An editor that knows schemas
completes keys and checks values with it: save it beside the briefs as
rampwright.schema.json and begin a brief with the line

  # yaml-language-server: $schema=rampwright.schema.json

What a schema cannot say is left to "rampwright check".`,
		RunE: func(cmd *cobra.Command, args []string) error {
			_, err := a.out.Write(brief.Schema())
			return err
		},
	}
}
