package main

import (
	"context"
	"fmt"
	"io"
	"log/slog"
	"os"
	"path/filepath"

	"github.com/urfave/cli/v2"

	"ionfall/internal/progress"
	"ionfall/internal/run"
	"ionfall/internal/store"
)

// options are those that run and resume share.
func (p *program) options(v *values) run.Options {
	return run.Options{Cores: v.integer("cores", maxCores), Version: versionText()}
}

// simulate runs a simulation with progress, interrupts and a log, and prints the answers.
func (p *program) simulate(c *cli.Context, o run.Options,
	work func(context.Context, run.Options) (*store.Summary, string, error),
) error {
	printer := p.printer(c.Bool("quiet"))
	o.Progress, o.Log = printer.Show, p.logger(printer)
	ctx, stop := p.interruptible(printer)
	stopStatus := onStatusSignal(printer.Now)
	summary, dir, err := work(ctx, o)
	stopStatus()
	printer.Close()
	stop()
	if err != nil {
		return err
	}
	if err := p.answer(summary, dir); err != nil {
		return fmt.Errorf("%w (the results are in %s)", err, dir)
	}
	if summary.Verdict == store.Fail {
		return errVerdict
	}
	return nil
}

// answer prints the table, or with --json the summary as it is in the folder.
func (p *program) answer(s *store.Summary, dir string) error {
	if p.asJSON {
		text, err := os.ReadFile(filepath.Join(dir, store.SummaryFile))
		if err != nil {
			return err
		}
		return p.print(text)
	}
	input, err := describeRun(dir)
	if err != nil {
		// The table can do without the title.
		p.say("ionfall: " + err.Error())
	}
	return p.print([]byte(answers(s, dir, input)))
}

// printer shows the progress in the way that fits stderr.
func (p *program) printer(quiet bool) progress.Printer {
	switch {
	case quiet && p.asJSON, p.width == nil && p.asJSON:
		return progress.NewJSON(p.stderr, progress.OnDemand())
	case quiet:
		return progress.NewLines(p.stderr, progress.OnDemand())
	case p.width != nil:
		return progress.NewTerminal(p.stderr, p.width)
	}
	return progress.NewLines(p.stderr, progress.Minutely())
}

// logger writes what needs saying between the reports.
func (p *program) logger(out io.Writer) *slog.Logger {
	o := &slog.HandlerOptions{Level: slog.LevelWarn}
	if p.asJSON {
		return slog.New(slog.NewJSONHandler(out, o))
	}
	return slog.New(slog.NewTextHandler(out, o))
}
