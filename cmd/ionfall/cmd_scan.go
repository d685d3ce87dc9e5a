package main

import (
	"os"
	"path/filepath"
	"strings"

	"github.com/urfave/cli/v2"

	"ionfall/internal/scan"
)

func (p *program) scanCommand() *cli.Command {
	c := &cli.Command{
		Name:      "scan",
		Usage:     "run many inputs that differ in what a plan says",
		ArgsUsage: "COMMAND",
		Description: `A PLAN is a file: a base input and what varies. Its points are run one a
core; what is finished is never lost, and the same command continues. Instead of a PLAN, the
commands also take the folder of a scan.`,
		Subcommands: []*cli.Command{
			p.scanCheckCommand(), p.scanRunCommand(), p.scanStatusCommand(), p.scanTableCommand(),
			p.scanSubmitCommand(), p.scanCollectCommand(), p.scanWindowCommand(), p.scanMapCommand(),
		},
	}
	c.Action = func(*cli.Context) error {
		return usagef("scan: no command given, want one of %s; for example: "+
			"ionfall scan run pressure.yaml", strings.Join(names(c.Subcommands), ", "))
	}
	return c
}

const planArgument = "PLAN file or folder of a scan"

func scanOutFlag() cli.Flag {
	return &cli.StringFlag{
		Name:  "out",
		Usage: "the folder of the scan is `DIR` (default: scans/<name of the plan>)",
	}
}

// scanOf reads the plan that the argument names, and tells the folder of its scan.
func (v *values) scanOf(example string) (*scan.Plan, string, error) {
	out := v.text("out", "the name of a folder")
	if err := v.bad.Err(); err != nil {
		return nil, "", err
	}
	path, err := argument(v.c, planArgument, example)
	if err != nil {
		return nil, "", err
	}
	plan, err := scan.Load(path)
	if err != nil {
		return nil, "", err
	}
	info, err := os.Stat(path)
	switch {
	case err == nil && info.IsDir() && out != "":
		return nil, "", usagef("%s: got the folder of a scan and --out, want one of them",
			v.c.Command.Name)
	case err == nil && info.IsDir():
		return plan, path, nil
	case out != "":
		return plan, out, nil
	}
	return plan, filepath.Join("scans", plan.Name), nil
}

// begunScan is the folder of a scan that has been begun.
func (v *values) begunScan(example string) (*scan.Folder, error) {
	plan, dir, err := v.scanOf(example)
	if err != nil {
		return nil, err
	}
	f, err := scan.Find(plan, dir)
	if err != nil {
		return nil, usagef("%s: %v", v.c.Command.Name, err)
	}
	return f, nil
}
