package main

import (
	"fmt"
	"runtime"
	"strconv"
	"strings"
	"time"

	"github.com/urfave/cli/v2"

	"ionfall/internal/progress"
	"ionfall/internal/scan"
	"ionfall/internal/store"
)

func (p *program) scanWindowCommand() *cli.Command {
	return &cli.Command{
		Name:  "window",
		Usage: "find the settings that meet wants, with as few runs as that takes",
		ArgsUsage: "PLAN --want 'PATH < NUMBER' [--want ...] [--maximize PATH | --minimize PATH]\n" +
			"      [--probability 95%] [--doubt 2%] [--points N] [--also-untrusted] [--out DIR]\n" +
			"      [--cores N] [--quiet]",
		Description: `Runs the plan, which may be a few points spread over the ranges, then adds
points where they decide most about the boundary of the window. It ends when at most the doubt is
expected to be on the wrong side of that boundary, or the points are spent. The recommended settings
are then run afresh and compared with their prediction. Results are named as in summary.json, bounds
are in their units. Points whose verdict is fail are not used. The map of probabilities is in
window.parquet.`,
		Flags: []cli.Flag{
			&cli.StringSliceFlag{
				Name:  "want",
				Usage: "want `C`, as 'ion_mean_energy_eV.grounded.all < 25'",
			},
			&cli.StringFlag{Name: "maximize", Usage: "make the result `PATH` as large as the wants allow"},
			&cli.StringFlag{Name: "minimize", Usage: "make it as small"},
			&cli.StringFlag{
				Name:  "probability",
				Usage: "recommend settings that meet the wants with probability `P` (default: 95%)",
			},
			&cli.StringFlag{
				Name:  "doubt",
				Usage: "the part `D` of the plan may be on the wrong side (default: 2%)",
			},
			&cli.StringFlag{
				Name: "points", Usage: "run at most `N` points (default: twice those of the plan)",
			},
			&cli.BoolFlag{
				Name: "also-untrusted", Usage: "use points whose verdict is fail, too",
				DisableDefaultText: true,
			},
			scanOutFlag(), coresFlag(), quietFlag(),
		},
		Action: p.scanWindow,
	}
}

// fraction reads a part above 0 and below 1, with or without per cent.
func (v *values) fraction(flag string, otherwise float64) float64 {
	if !v.c.IsSet(flag) {
		return otherwise
	}
	text := strings.TrimSpace(v.c.String(flag))
	number, percent := strings.CutSuffix(text, "%")
	f, err := strconv.ParseFloat(strings.TrimSpace(number), 64)
	if percent {
		f /= 100
	}
	if err != nil || f <= 0 || f >= 1 {
		v.fail(flag, text, "a part between 0 and 1, such as 95%")
		return otherwise
	}
	return f
}

func (p *program) scanWindow(c *cli.Context) error {
	v := values{c: c}
	o := scan.WindowOptions{
		Options: scan.Options{
			Cores: v.integer("cores", maxCores), Version: versionText(), Wait: true,
		},
		Best:        v.text("maximize", "the name of a result"),
		Probability: v.fraction("probability", 0.95), Doubt: v.fraction("doubt", 0.02),
		MostPoints: v.integer("points", 20_000), Untrusted: c.Bool("also-untrusted"),
	}
	if o.Cores == 0 {
		o.Cores = runtime.NumCPU()
	}
	if small := v.text("minimize", "the name of a result"); small != "" {
		if o.Best != "" {
			return usagef("window: got --maximize and --minimize, want one of them")
		}
		o.Best, o.Smallest = small, true
	}
	for _, text := range c.StringSlice("want") {
		w, err := scan.ParseWant(text)
		if err != nil {
			return usagef("--want: %v", err)
		}
		o.Wants = append(o.Wants, w)
	}
	if len(o.Wants) == 0 {
		return usagef("window: no --want given; for example: ionfall scan window pressure.yaml " +
			"--want 'ion_mean_energy_eV.grounded.all < 25'")
	}
	plan, dir, err := v.scanOf("ionfall scan window pressure.yaml --want 'PATH < NUMBER'")
	if err != nil {
		return err
	}
	if o.MostPoints == 0 {
		o.MostPoints = 2 * len(plan.Points)
	}
	return p.findWindow(plan, dir, o, c.Bool("quiet"))
}

func (p *program) findWindow(plan *scan.Plan, dir string, o scan.WindowOptions, quiet bool) error {
	out := &scanLines{out: p.stderr, quiet: quiet, every: time.Minute}
	ctx, stop := p.interruptible(out)
	o.Log, o.Progress = p.logger(out), out.show
	if !quiet {
		o.Tell = func(points int, doubt float64) {
			tell(out, fmt.Sprintf("%d points: %s %% of the plan in doubt", points,
				progress.Digits(100*doubt, 2)))
		}
	}
	stopStatus := onStatusSignal(out.now)
	w, err := func() (*scan.Window, error) {
		f, err := scan.Open(ctx, plan, dir)
		if err != nil {
			return nil, err
		}
		return f.FindWindow(ctx, o)
	}()
	stopStatus()
	stop()
	if err != nil {
		return err
	}
	if err := p.print([]byte(windowText(plan, w, o, dir))); err != nil {
		return err
	}
	if w.Verdict == store.Fail {
		return errVerdict
	}
	return nil
}

// windowText is what a search ends with.
func windowText(plan *scan.Plan, w *scan.Window, o scan.WindowOptions, dir string) string {
	var b strings.Builder
	fmt.Fprintf(&b, "window: %s %% of the plan, boundary in doubt for %s %%, from %d points\n",
		progress.Digits(100*w.Share, 2), progress.Digits(100*w.Doubt, 2), w.Points)
	if !w.Settled {
		fmt.Fprintf(&b, "  that is more than the %s %% asked for: allow more --points\n",
			progress.Digits(100*o.Doubt, 2))
	}
	if w.Left > 0 {
		fmt.Fprintf(&b, "  %d points were not used: failed, or not to be trusted\n", w.Left)
	}
	head := "recommended settings"
	if !w.Inside {
		head = fmt.Sprintf("no settings meet all wants with %s %%; the most likely ones are",
			progress.Digits(100*o.Probability, 3))
	}
	fmt.Fprintf(&b, "%s (point %d), which meet the wants with %s %%:\n", head, w.Settings.Number,
		progress.Digits(100*w.Certainty, 3))
	texts := shortTexts(w.Settings)
	for k, name := range axisNames(plan) {
		fmt.Fprintf(&b, "  %s: %s\n", name, texts[k])
	}
	rows := [][]string{{"", "predicted", "run afresh", "", ""}}
	for _, r := range w.Results {
		agree, met := "within the prediction", ""
		if !r.Within {
			agree = "OUTSIDE the prediction"
		}
		if !r.Met {
			met = "want NOT met"
		}
		rows = append(rows, []string{
			r.Path, progress.WithError(r.Predicted.Mean, r.Predicted.StdErr),
			progress.WithError(r.Got.Value, r.Got.SE), agree, met,
		})
	}
	b.WriteString(align(rows))
	fmt.Fprintf(&b, "verdict of the fresh run: %s\nscan: %s, map: %s/window.parquet\n\n%s\n",
		w.Verdict, dir, dir, caution)
	return b.String()
}
