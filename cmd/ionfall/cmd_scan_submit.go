package main

import (
	"fmt"
	"os"

	"github.com/urfave/cli/v2"

	"ionfall/internal/scan"
)

func (p *program) scanSubmitCommand() *cli.Command {
	return &cli.Command{
		Name:  "submit",
		Usage: "have a cluster (Slurm) run what is left of a plan",
		ArgsUsage: "PLAN --time 4:00:00 [--partition P] [--max-running N] [--cpus N]\n" +
			"      [--warning S] [--option NAME=VALUE] [--out DIR] [--dry-run]",
		Description: `Writes the batch script of a job array and gives it to sbatch; with --dry-run it
only prints the script. The folder of the scan must be on a disk that the nodes share. Tasks take
points until none is left, write checkpoints before their time ends and go back into the queue. To
take up what dead nodes have left, submit again. scan status tells how far it is.`,
		Flags: []cli.Flag{
			scanOutFlag(),
			&cli.StringFlag{Name: "time", Usage: "each task may take the time `T`, as sbatch writes it"},
			&cli.StringFlag{Name: "partition", Usage: "run in the partition `P`"},
			&cli.StringFlag{Name: "max-running", Usage: "run at most `N` tasks at once"},
			&cli.StringFlag{
				Name: "cpus", Usage: "give a task `N` processors, for as many points (default: 1)",
			},
			&cli.StringFlag{
				Name:  "warning",
				Usage: "write checkpoints `S` seconds before the time ends (default: 180)",
			},
			&cli.StringSliceFlag{
				Name:  "option",
				Usage: "give sbatch the option `X` too, as account=films",
			},
			&cli.BoolFlag{
				Name: "dry-run", Usage: "print the script and submit nothing", DisableDefaultText: true,
			},
		},
		Action: p.scanSubmit,
	}
}

func (p *program) scanSubmit(c *cli.Context) error {
	v := values{c: c}
	j := scan.Job{
		Partition: v.text("partition", "the name of a partition"), Time: c.String("time"),
		MaxRunning: v.integer("max-running", 1_000_000), CPUs: max(1, v.integer("cpus", maxCores)),
		Warning: v.integer("warning", 86_400), Options: c.StringSlice("option"),
	}
	if j.Warning == 0 {
		j.Warning = 180
	}
	if j.Time == "" {
		return usagef("submit: no --time given; for example: " +
			"ionfall scan submit pressure.yaml --time 4:00:00")
	}
	plan, dir, err := v.scanOf("ionfall scan submit pressure.yaml --time 4:00:00")
	if err != nil {
		return err
	}
	if err := j.Check(); err != nil {
		return err
	}
	if _, _, err := plan.Prepare(); err != nil {
		return err
	}
	if j.Program, err = os.Executable(); err != nil {
		return err
	}
	ctx, stop := p.interruptible(p.stderr)
	defer stop()
	if c.Bool("dry-run") {
		script, err := scan.Unopened(plan, dir).Script(&j)
		if err != nil {
			return err
		}
		return p.print([]byte(script))
	}
	f, err := scan.Open(ctx, plan, dir)
	if err != nil {
		return err
	}
	script, err := f.Script(&j)
	if err != nil {
		return err
	}
	number, err := f.Submit(ctx, script)
	if err != nil {
		return err
	}
	return p.print(fmt.Appendf(nil, "job %s submitted for %s: ionfall scan status %s\n",
		number, dir, dir))
}

func (p *program) scanCollectCommand() *cli.Command {
	return &cli.Command{
		Name:      "collect",
		Usage:     "renew the table of points, whoever computed them",
		ArgsUsage: "PLAN [--out DIR]",
		Description: `Reads the folders of all points and writes points.parquet. Which points are done
follows from their own folders, not from what a scheduler says.`,
		Flags:  []cli.Flag{scanOutFlag()},
		Action: p.scanCollect,
	}
}

func (p *program) scanCollect(c *cli.Context) error {
	v := values{c: c}
	f, err := v.begunScan("ionfall scan collect pressure.yaml")
	if err != nil {
		return err
	}
	ctx, stop := p.interruptible(p.stderr)
	t, err := f.Collect(ctx)
	stop()
	if err != nil {
		return err
	}
	return p.print(fmt.Appendf(nil, "%d points in %s\n", t.Rows(), f.Dir))
}
