package main

import (
	"fmt"
	"io"
	"math"
	"strings"
	"sync"
	"time"

	"github.com/urfave/cli/v2"

	"ionfall/internal/progress"
	"ionfall/internal/scan"
)

func (p *program) scanRunCommand() *cli.Command {
	return &cli.Command{
		Name:  "run",
		Usage: "run the points of a plan, or those that are left of it",
		ArgsUsage: "PLAN [--out DIR] [--cores N] [--until 07:00] [--shard I/N] [--no-wait]\n" +
			"      [--retry] [--quiet]",
		Description: `Runs one point a core. After any end, also by kill -9 or a power cut, the same
command continues: finished points stay, others go on from their checkpoints. Several of these
commands may work in one folder, on one machine or on many that share it. A point that cannot be
computed is recorded with its reason and the scan goes on; --retry tries such points again.
With --until, points are run coarse first, so that at that time there is a complete map.`,
		Flags: []cli.Flag{
			scanOutFlag(), coresFlag(),
			&cli.StringFlag{
				Name:  "until",
				Usage: "stop, with checkpoints, at the time `T`: 07:00, or 2031-05-06T07:00:00Z",
			},
			&cli.StringFlag{
				Name:  "shard",
				Usage: "take only part `I/N` of the points, as 2/5, and do not wait for others",
			},
			&cli.BoolFlag{
				Name: "retry", Usage: "try points again that could not be computed",
				DisableDefaultText: true,
			},
			&cli.BoolFlag{
				Name: "no-wait", Usage: "end when others are at all points that are left",
				DisableDefaultText: true,
			},
			quietFlag(),
		},
		Action: p.scanRun,
	}
}

func (p *program) scanRun(c *cli.Context) error {
	v := values{c: c}
	o := scan.Options{
		Cores: v.integer("cores", maxCores), Until: v.clock("until", time.Now()), Wait: true,
		Version: versionText(),
	}
	o.Shard, o.Shards = v.part("shard")
	if o.Shards > 0 || c.Bool("no-wait") {
		o.Wait = false
	}
	plan, dir, err := v.scanOf("ionfall scan run pressure.yaml")
	if err != nil {
		return err
	}
	return p.runScan(plan, dir, o, c.Bool("retry"), c.Bool("quiet"))
}

// runScan works in the folder of a scan, with progress and interrupts.
func (p *program) runScan(plan *scan.Plan, dir string, o scan.Options, retry, quiet bool) error {
	out := &scanLines{out: p.stderr, quiet: quiet, every: time.Minute}
	ctx, stop := p.interruptible(out)
	o.Log, o.Progress = p.logger(out), out.show
	stopStatus := onStatusSignal(out.now)
	report, err := func() (*scan.Report, error) {
		f, err := scan.Open(ctx, plan, dir)
		if err != nil {
			return nil, err
		}
		if retry {
			if _, err := f.Retry(); err != nil {
				return nil, err
			}
		}
		return f.Run(ctx, o)
	}()
	stopStatus()
	stop()
	if report != nil {
		if printErr := p.print([]byte(scanEnd(report, dir))); err == nil {
			err = printErr
		}
	}
	return err
}

// scanEnd tells how a scan went.
func scanEnd(r *scan.Report, dir string) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%d of %d points done, %d could not be computed; %d computed now in %s\n",
		r.Done, r.Total, r.Failed, r.Computed, around(r.Elapsed))
	left := r.Total - r.Done - r.Failed
	if r.Predicted > 0 && left == 0 {
		fmt.Fprintf(&b, "after a tenth of the points %s were foreseen: %+.0f %% of what it took\n",
			around(r.Predicted), 100*(r.Predicted.Seconds()/r.Elapsed.Seconds()-1))
	}
	if left > 0 {
		why := "other runners are at them"
		if r.Deadline {
			why = "the time is up; what is done is spread over the whole plan"
		}
		fmt.Fprintf(&b, "%d points are left: %s\n", left, why)
	}
	fmt.Fprintf(&b, "scan: %s (ionfall scan table %s)\n\n%s\n", dir, dir, caution)
	return b.String()
}

// scanLines tells progress in lines, one a minute.
type scanLines struct {
	mu    sync.Mutex
	out   io.Writer
	quiet bool
	every time.Duration
	last  time.Time
	seen  *scan.Snapshot
}

// Write puts a log line between the others.
func (l *scanLines) Write(text []byte) (int, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.out.Write(text)
}

func (l *scanLines) show(s scan.Snapshot) {
	l.mu.Lock()
	defer l.mu.Unlock()
	l.seen = &s
	if l.quiet || time.Since(l.last) < l.every {
		return
	}
	l.last = time.Now()
	tell(l.out, scanStatus(s, time.Now()))
}

// now tells at once how far the scan is.
func (l *scanLines) now() {
	l.mu.Lock()
	defer l.mu.Unlock()
	if l.seen != nil {
		tell(l.out, scanStatus(*l.seen, time.Now()))
	}
}

// runningPoint says how far a run is. Before it averages, its ion energy is that of one period,
// which has no error.
func runningPoint(s progress.Status) string {
	if s.Stage == "" {
		return "starting"
	}
	text := fmt.Sprintf("%s, %d periods", s.Stage, s.Periods)
	if math.IsNaN(s.EnergyErrEV) {
		return text
	}
	return text + ", ion energy " + progress.WithError(s.EnergyEV, s.EnergyErrEV) + " eV"
}

// scanStatus is the progress of a scan and of each of its running points.
func scanStatus(s scan.Snapshot, now time.Time) string {
	var b strings.Builder
	fmt.Fprintf(&b, "%d of %d points done, %d running", s.Done, s.Total, len(s.Running))
	if s.Failed > 0 {
		fmt.Fprintf(&b, ", %d could not be computed", s.Failed)
	}
	if s.Elsewhere > 0 {
		fmt.Fprintf(&b, ", %d with other runners", s.Elsewhere)
	}
	fmt.Fprintf(&b, "; about %s left (%s to %s), until %s\n", around(s.Left.Expected),
		around(s.Left.Low), around(s.Left.High), now.Add(s.Left.Expected).Format("Mon 15:04"))
	for _, r := range s.Running {
		fmt.Fprintf(&b, "  point %d: %s", r.Number, runningPoint(r.Status))
		if r.Remaining >= 0 {
			fmt.Fprintf(&b, ", about %s left", around(r.Remaining))
		}
		b.WriteString("\n")
	}
	return b.String()
}
