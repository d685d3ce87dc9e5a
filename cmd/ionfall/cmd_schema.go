package main

import (
	"github.com/urfave/cli/v2"

	"ionfall/internal/config"
)

func (p *program) schemaCommand() *cli.Command {
	return &cli.Command{
		Name:  "schema",
		Usage: "print the JSON Schema of the input file",
		Description: `For editors that complete and check YAML: write it into a file, and name that
in the settings of the editor.
   ionfall schema > ionfall.schema.json`,
		Action: func(c *cli.Context) error {
			if err := noArgument(c); err != nil {
				return err
			}
			text, err := config.Schema()
			if err != nil {
				return err
			}
			return p.print(text)
		},
	}
}
