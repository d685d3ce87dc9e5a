package main

import (
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/run"
)

func (p *program) checkCommand() *cli.Command {
	return &cli.Command{
		Name:      "check",
		Usage:     "check an input and tell what follows from it, without running it",
		ArgsUsage: "INPUT [--json]",
		Description: `Prints every error of the input with its line and column; without
errors, the expected plasma, the numerics that would be chosen and why, memory, and time.`,
		Flags:  []cli.Flag{jsonFlag("print it as JSON")},
		Action: p.check,
	}
}

func (p *program) check(c *cli.Context) error {
	input, err := argument(c, "INPUT file", "ionfall check argon.yaml")
	if err != nil {
		return err
	}
	plan, err := run.Prepare(input)
	if err != nil {
		return err
	}
	d, err := plan.Describe()
	if err != nil {
		return err
	}
	if p.asJSON {
		text, err := encodeJSON(d, true)
		if err != nil {
			return err
		}
		return p.print(text)
	}
	var rows [][]string
	for _, line := range d.Lines {
		rows = append(rows, []string{line.Name, line.Text})
	}
	var b strings.Builder
	b.WriteString(input + ": no errors\n\n")
	b.WriteString(align(rows))
	return p.print([]byte(b.String()))
}
