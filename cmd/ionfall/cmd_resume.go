package main

import (
	"context"
	"fmt"
	"os"
	"path/filepath"

	"github.com/urfave/cli/v2"

	"ionfall/internal/config"
	"ionfall/internal/run"
	"ionfall/internal/store"
)

func (p *program) resumeCommand() *cli.Command {
	return &cli.Command{
		Name:  "resume",
		Usage: "continue a run that was interrupted, or a finished one to smaller errors",
		ArgsUsage: "DIR [--cores N] [--accuracy 0.5%] [--cpu 10min] [--periods N] [--quiet] " +
			"[--json]",
		Description: `DIR is the results folder, with or without the .running of an unfinished
run. An interrupted run goes on to the same results, bit for bit, as if nothing had happened. A
finished one needs a new accuracy or budget; its results are replaced when the better ones are
complete, not before.`,
		Flags: []cli.Flag{
			coresFlag(),
			&cli.StringFlag{
				Name:  "accuracy",
				Usage: "go on to this relative error `E` of ion energy and ion flux, as 0.5%",
			},
			&cli.StringFlag{
				Name: "cpu",
				Usage: "spend at most the processor time `T` in all, from the start of the run, " +
					"as 10min",
			},
			&cli.StringFlag{
				Name:  "periods",
				Usage: "make at most `N` RF periods in all, from the start of the run",
			},
			quietFlag(), jsonFlag("print the summary as JSON"),
		},
		Action: p.resume,
	}
}

func (p *program) resume(c *cli.Context) error {
	v := values{c: c}
	options := p.options(&v)
	const both = "accuracy: {ion_energy: %[1]s, ion_flux: %[1]s}"
	if asked := v.quantity("accuracy", both); asked != nil {
		options.Accuracy = &asked.Accuracy
	}
	options.Budget = budget(&v)
	if err := v.bad.Err(); err != nil {
		return err
	}
	const example = "ionfall resume results/argon"
	dir, err := argument(c, "results folder DIR", example)
	if err != nil {
		return err
	}
	if err := resumable(dir); err != nil {
		return err
	}
	return p.simulate(c, options, func(ctx context.Context, o run.Options) (
		*store.Summary, string, error,
	) {
		return run.Resume(ctx, dir, o)
	})
}

// budget is what the flags allow in place of the input, nil if they say nothing.
func budget(v *values) *config.Budget {
	b := config.Budget{Periods: v.integer("periods", config.MaxPeriods)}
	if asked := v.quantity("cpu", "budget: {cpu: %s}"); asked != nil {
		b.CPU = asked.Budget.CPU
	}
	if b == (config.Budget{}) {
		return nil
	}
	return &b
}

// resumable tells a slip in the name from a failure.
func resumable(dir string) error {
	folder, _, err := store.Locate(dir)
	if err != nil {
		return usagef("resume: %v", err)
	}
	if _, err := os.Stat(filepath.Join(folder, store.CheckpointFile)); err != nil {
		return usagef("resume: got %s, want the results folder of a run: %s is not in it",
			folder, store.CheckpointFile)
	}
	return nil
}

// describeRun reads the input of a finished run, for the title and the substrates of its table.
func describeRun(dir string) (*config.Case, error) {
	c, _, err := config.Load(filepath.Join(dir, "input.yaml"))
	if err != nil {
		return nil, fmt.Errorf("reading what was run: %w", err)
	}
	return c, nil
}
