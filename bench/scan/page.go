package main

import (
	"bytes"
	"fmt"
	"math"
	"path/filepath"
	"runtime"
	"strings"
	"time"

	"gonum.org/v1/gonum/stat"

	"ionfall/internal/stats"
	"ionfall/internal/store"
)

// sums are those over the points of the scan.
type sums struct {
	verdicts  map[string]int
	cpu, wall float64 // [s]
	moves     float64
}

func (b *bench) sum() (sums, error) {
	t := sums{verdicts: map[string]int{}}
	for _, p := range b.folder.Plan.Points {
		s, err := store.ReadSummary(filepath.Join(b.folder.PointDir(p.Number), store.SummaryFile))
		if err != nil {
			return t, err
		}
		t.verdicts[s.Verdict]++
		for name, to := range map[string]*float64{
			"cpu_s": &t.cpu, "wall_s": &t.wall, "particle_steps": &t.moves,
		} {
			v, ok := s.Provenance[name].(float64)
			if !ok {
				return t, fmt.Errorf("point %d: no %s in its provenance", p.Number, name)
			}
			*to += v
		}
	}
	return t, nil
}

// text is the page.
func (b *bench) text() ([]byte, error) {
	t, err := b.sum()
	if err != nil {
		return nil, err
	}
	sittings, err := load[[]sitting](b.dir, sittingsFile)
	if err != nil {
		return nil, err
	}
	pairs, err := load[[]pair](b.dir, pairsFile)
	if err != nil {
		return nil, err
	}
	elapsed := 0.0
	for _, s := range sittings {
		elapsed += s.ElapsedS
	}
	var w bytes.Buffer
	fmt.Fprintf(&w, "# Scan\n\nWritten by `go run ./bench/scan` on %s: %s/%s, %d processors.\n\n",
		time.Now().UTC().Format(time.DateOnly), runtime.GOOS, runtime.GOARCH, cores())
	fmt.Fprintf(&w, "%s. One point a core.\n\n| quantity | value |\n|---|---|\n", b.what)
	row := func(name, form string, values ...any) {
		fmt.Fprintf(&w, "| "+name+" | "+form+" |\n", values...)
	}
	row("points done", "%d of %d", sittings[len(sittings)-1].Done, b.points())
	row("verdicts", "%d ok, %d warn, %d fail", t.verdicts[store.OK], t.verdicts[store.Warn],
		t.verdicts[store.Fail])
	row("time", "%.1f min", elapsed/60)
	row("processor time of the points", "%.0f s, %.0f million particle moves a second", t.cpu,
		t.moves/t.cpu/1e6)
	row("time foreseen after a tenth of the points, off by", "%s", foreseen(sittings, elapsed))
	busy := t.wall / (float64(cores()) * elapsed)
	row("cores busy with points, part of the time", "%.1f %%", 100*busy)
	cpu, wall := ratios(pairs)
	row("processor time of points in separate processes over that in a scan", "%s", percent(cpu))
	row("the same of the time on the clock", "%s", percent(wall))
	row("parallel efficiency: cores busy x processor time", "%s", percent(stats.Estimate{
		Mean: busy * cpu.Mean, StdErr: busy * cpu.StdErr, N: cpu.N,
	}))
	same := 0
	for _, p := range pairs {
		same += p.Same
	}
	row("points run by themselves with the same results, bit for bit", "%d of %d", same, 2*len(pairs))
	w.WriteString(how)
	w.WriteString(pairTable(pairs))
	return w.Bytes(), nil
}

const how = `
How it was measured: the efficiency compares the scan with separate single-threaded processes, one
a core. Part of it is how evenly the points fill the cores to the end (the sum of the points' own
times over cores x time of the scan). The other part is what a point costs in a scan beyond what
it costs alone: pairs of points are run as two separate processes at once, and as a scan of these
two points, which way first in turn; all processor time of the processes counts, also for starting
and writing. Processor time depends less than the clock on what else the machine does. Errors are
standard errors over the pairs. The same results means: all numbers of all tables and all scalars,
bit for bit.

| points | separate: processor s, s | scan: processor s, s |
|---|---|---|
`

func pairTable(pairs []pair) string {
	var w strings.Builder
	for _, p := range pairs {
		fmt.Fprintf(&w, "| %d, %d | %.2f, %.2f | %.2f, %.2f |\n", p.Points[0], p.Points[1],
			p.Separate.CPU, p.Separate.Wall, p.Together.CPU, p.Together.Wall)
	}
	return w.String()
}

// foreseen tells how good the prediction was. An interrupted scan has none.
func foreseen(sittings []sitting, elapsed float64) string {
	if len(sittings) > 1 || sittings[0].PredictedS == 0 {
		return fmt.Sprintf("not measured: the scan was done in %d parts", len(sittings))
	}
	predicted := sittings[0].PredictedS
	return fmt.Sprintf("%+.1f %% (%.0f s foreseen)", 100*(predicted/elapsed-1), predicted)
}

// ratios are those of separate processes over scans, by pairs.
func ratios(pairs []pair) (cpu, wall stats.Estimate) {
	var a, b []float64
	for _, p := range pairs {
		a, b = append(a, p.Separate.CPU/p.Together.CPU), append(b, p.Separate.Wall/p.Together.Wall)
	}
	return estimate(a), estimate(b)
}

// estimate is the mean of independent values with its standard error.
func estimate(v []float64) stats.Estimate {
	mean, deviation := stat.MeanStdDev(v, nil)
	return stats.Estimate{Mean: mean, StdErr: deviation / math.Sqrt(float64(len(v))), N: len(v)}
}

func percent(e stats.Estimate) string {
	if math.IsNaN(e.StdErr) {
		return fmt.Sprintf("%.1f %%, no error", 100*e.Mean)
	}
	return fmt.Sprintf("%.1f +- %.1f %%", 100*e.Mean, 100*e.StdErr)
}
