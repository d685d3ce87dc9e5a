package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/urfave/cli/v2"

	"ionfall/internal/report"
	"ionfall/internal/store"
)

func (p *program) reportCommand() *cli.Command {
	return &cli.Command{
		Name:      "report",
		Usage:     "one page about a run, a scan, or several runs side by side",
		ArgsUsage: "DIR... [--out FILE]",
		Description: `Writes one HTML page that holds everything it shows: answers with errors,
the verdict with every check, figures with the data behind them, sources and cautions. It opens
from disk without a network and prints on A4. Every run writes one into its results folder;
this command makes it again, as report.html in DIR. Several runs need --out, which must not exist.`,
		Flags: []cli.Flag{
			&cli.StringFlag{Name: "out", Usage: "write the page to `FILE`"},
		},
		Action: p.report,
	}
}

func (p *program) report(c *cli.Context) error {
	v := values{c: c}
	out := v.text("out", "the name of a file")
	if err := v.bad.Err(); err != nil {
		return err
	}
	if out != "" {
		if err := absent(c, out); err != nil {
			return err
		}
	}
	page, place, err := reportPage(c)
	if err != nil {
		return err
	}
	if out == "" {
		if place == "" {
			return usagef("report: got %d runs, want --out FILE for their page", c.NArg())
		}
		out = filepath.Join(place, report.File)
	}
	if err := store.WriteFile(out, page); err != nil {
		return err
	}
	return p.print([]byte(out + "\n"))
}

// reportPage is the page of a scan or of runs, and the folder it belongs to, "" for several.
func reportPage(c *cli.Context) (page []byte, place string, err error) {
	if dir := c.Args().First(); c.NArg() == 1 && report.IsScan(dir) {
		scan, err := report.OpenScan(dir)
		if err != nil {
			return nil, "", err
		}
		page, err = report.ScanPage(scan)
		return page, dir, err
	}
	runs, err := openRuns(c)
	if err != nil {
		return nil, "", err
	}
	page, err = report.Page(runs)
	if err != nil || len(runs) > 1 {
		return page, "", err
	}
	place, _, err = store.Locate(runs[0].Dir)
	return page, place, err
}

// absent refuses a file that is there already.
func absent(c *cli.Context, path string) error {
	_, err := os.Lstat(path)
	switch {
	case err == nil:
		return usagef("%s: %s is there already, want the name of a new file", c.Command.Name, path)
	case errors.Is(err, fs.ErrNotExist):
		return nil
	}
	return err
}

// openRuns opens the results folders that a command line names.
func openRuns(c *cli.Context) ([]*report.Run, error) {
	given := c.Args().Slice()
	if len(given) == 0 {
		return nil, usagef("%s: no results folder given; for example: ionfall %s results/argon",
			c.Command.Name, c.Command.Name)
	}
	return openFolders(c, given)
}

func openFolders(c *cli.Context, given []string) ([]*report.Run, error) {
	var runs []*report.Run
	for _, dir := range given {
		if dir == "" {
			return nil, usagef("%s: got an empty name, want a results folder", c.Command.Name)
		}
		r, err := report.Open(dir)
		if errors.Is(err, fs.ErrNotExist) {
			return nil, usagef("%s: %v", c.Command.Name, err)
		}
		if err != nil {
			return nil, fmt.Errorf("%s: %w", c.Command.Name, err)
		}
		runs = append(runs, r)
	}
	if err := report.Distinguish(runs); err != nil {
		return nil, usagef("%s: %v", c.Command.Name, err)
	}
	return runs, nil
}
