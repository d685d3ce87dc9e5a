package main

import (
	"context"

	"github.com/urfave/cli/v2"

	"ionfall/internal/run"
	"ionfall/internal/store"
)

func (p *program) runCommand() *cli.Command {
	return &cli.Command{
		Name:      "run",
		Usage:     "simulate one input",
		ArgsUsage: "INPUT [--out DIR] [--cores N] [--quiet] [--json]",
		Description: `Runs until the accuracy that the input asks for is reached or its budget
is spent, and prints a table of the answers. Without --out the results go to
results/<name of the input>, with -2, -3 ... if that exists. Results are never overwritten.
An interrupted run is continued by:
   ionfall resume DIR
SIGUSR1 makes it print how far it is, where the system has that signal.`,
		Flags: []cli.Flag{
			&cli.StringFlag{
				Name:  "out",
				Usage: "put the results into the folder `DIR`, which must not exist",
			},
			coresFlag(), quietFlag(), jsonFlag("print the summary as JSON"),
		},
		Action: p.run,
	}
}

func (p *program) run(c *cli.Context) error {
	v := values{c: c}
	options := p.options(&v)
	options.Out = v.text("out", "the name of a folder")
	if err := v.bad.Err(); err != nil {
		return err
	}
	input, err := argument(c, "INPUT file", "ionfall run argon.yaml")
	if err != nil {
		return err
	}
	plan, err := run.Prepare(input)
	if err != nil {
		return err
	}
	return p.simulate(c, options, func(ctx context.Context, o run.Options) (
		*store.Summary, string, error,
	) {
		return run.Run(ctx, plan, o)
	})
}
