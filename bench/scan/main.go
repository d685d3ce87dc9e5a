// Command scan measures a scan of 60 points of argon on this machine and writes bench/SCAN.md:
//
//	go run ./bench/scan [-dir DIR] [-short]
//
// It is run in the folder of go.mod and takes about a quarter of an hour of a machine of two cores
// that does nothing else. The points are pressure x amplitude x gap. Then pairs of points are run
// in turn as two separate processes and as a scan of two points. What is done is kept in DIR:
// after an interruption the same command continues. With -short a plan of six coarse
// points shows that all works, and the page is only printed.
package main

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"flag"
	"fmt"
	"io/fs"
	"os"
	"os/exec"
	"os/signal"
	"path/filepath"
	"runtime"
	"syscall"
	"time"

	"ionfall/internal/scan"
	"ionfall/internal/store"
)

const page = "bench/SCAN.md"

// study is what is run.
type study struct {
	what       string // for the page
	base, plan string
	// firsts are the first points of the pairs; the second is half the plan further.
	firsts []int
}

func whole() study {
	return study{
		what: "Argon, 5 pressures from 5 to 20 Pa x 4 amplitudes from 100 to 250 V x gaps of 20, 25 " +
			"and 30 mm, `numerics: auto`, `accuracy: 3 %` of mean ion energy and ion flux",
		base: `gap: 25 mm
gas: {pressure: 5 Pa, mixture: {Ar: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 250 V}]}
accuracy: {ion_energy: 3 %, ion_flux: 3 %}
`,
		plan: `base: base.yaml
vary:
  gas.pressure: {from: 5 Pa, to: 20 Pa, points: 5, spacing: log}
  drive.tones.0.amplitude: {from: 100 V, to: 250 V, points: 4}
  gap: [20 mm, 25 mm, 30 mm]
`,
		firsts: []int{2, 7, 15, 19, 26},
	}
}

func short() study {
	return study{
		what: "Helium, six points of coarse numerics, which show only that the measurement works",
		base: `gap: 20 mm
gas: {pressure: 60 Pa, mixture: {He: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 200 V}]}
initial: {density: 8e14 /m3, electron_temperature: 5 eV}
numerics: {cells: 32, steps_per_period: 480, particles_per_cell: 40, ion_substeps: 4, periods: 60}
`,
		plan: `base: base.yaml
vary:
  gas.pressure: [50 Pa, 60 Pa]
  drive.tones.0.amplitude: {from: 150 V, to: 250 V, points: 3}
`,
		firsts: []int{1, 3},
	}
}

func main() {
	dir := flag.String("dir", filepath.Join(os.TempDir(), "ionfall-bench-scan"),
		"work in the folder `DIR`")
	brief := flag.Bool("short", false, "six coarse points; print the page")
	flag.Parse()
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt, syscall.SIGTERM)
	defer stop()
	if err := measure(ctx, *dir, *brief); err != nil {
		fmt.Fprintln(os.Stderr, "scan:", err)
		os.Exit(1)
	}
}

// bench is a measurement in progress.
type bench struct {
	study
	dir     string // of this program and plan
	program string
	folder  *scan.Folder
}

func measure(ctx context.Context, dir string, brief bool) error {
	b := &bench{study: whole()}
	if brief {
		b.study = short()
	}
	if err := b.prepare(ctx, dir); err != nil {
		return err
	}
	fmt.Fprintln(os.Stderr, "working in", b.dir)
	if err := b.scanAll(ctx); err != nil {
		return err
	}
	if err := b.measurePairs(ctx); err != nil {
		return err
	}
	text, err := b.text()
	if err != nil {
		return err
	}
	if brief {
		_, err = os.Stdout.Write(text)
	} else {
		err = os.WriteFile(page, text, 0o644)
	}
	if err != nil {
		return err
	}
	return os.RemoveAll(b.dir)
}

// prepare builds the program and begins or finds the scan. Another program or plan has another
// folder, so that nothing is continued that was begun differently.
func (b *bench) prepare(ctx context.Context, dir string) error {
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return err
	}
	built := filepath.Join(dir, "ionfall.exe")
	out, err := exec.CommandContext(ctx, "go", "build", "-trimpath", "-buildvcs=false", "-o", built,
		"ionfall/cmd/ionfall").CombinedOutput()
	if err != nil {
		return fmt.Errorf("building the program: %w\n%s", err, out)
	}
	binary, err := os.ReadFile(built)
	if err != nil {
		return err
	}
	sum := sha256.Sum256(append(binary, b.base+b.plan...))
	b.dir = filepath.Join(dir, hex.EncodeToString(sum[:6]))
	if err := os.MkdirAll(b.dir, 0o777); err != nil {
		return err
	}
	b.program = filepath.Join(b.dir, "ionfall.exe")
	if err := os.Rename(built, b.program); err != nil {
		return err
	}
	for name, content := range map[string]string{"base.yaml": b.base, "plan.yaml": b.plan} {
		if err := os.WriteFile(filepath.Join(b.dir, name), []byte(content), 0o666); err != nil {
			return err
		}
	}
	p, err := scan.Load(b.planFile())
	if err != nil {
		return err
	}
	b.folder, err = scan.Open(ctx, p, filepath.Join(b.dir, "scan"))
	return err
}

func (b *bench) planFile() string { return filepath.Join(b.dir, "plan.yaml") }

// sitting is a part of the scan from a start of this command to its end.
type sitting struct {
	ElapsedS   float64
	PredictedS float64 // of the whole scan after a tenth of its points; 0 for none
	Done       int
	When       string
}

const sittingsFile = "sittings.json"

// scanAll runs what is left of the scan and keeps how long it took.
func (b *bench) scanAll(ctx context.Context) error {
	sittings, err := load[[]sitting](b.dir, sittingsFile)
	if err != nil || len(sittings) > 0 && sittings[len(sittings)-1].Done == b.points() {
		return err
	}
	sittings = append(sittings, sitting{When: time.Now().UTC().Format(time.RFC3339)})
	now := &sittings[len(sittings)-1]
	var failed error
	note := func(s scan.Snapshot) {
		now.ElapsedS, now.PredictedS, now.Done = s.Elapsed.Seconds(), s.Predicted.Seconds(), s.Done
		failed = errors.Join(failed, keep(b.dir, sittingsFile, sittings))
	}
	last := time.Time{}
	r, err := b.folder.Run(ctx, scan.Options{Progress: func(s scan.Snapshot) {
		note(s)
		if time.Since(last) > time.Minute {
			last = time.Now()
			fmt.Fprintf(os.Stderr, "%d of %d points, about %.0f s left\n", s.Done, s.Total,
				s.Left.Expected.Seconds())
		}
	}})
	if r != nil {
		note(r.Snapshot)
	}
	if err == nil && r.Done < r.Total {
		err = fmt.Errorf("%d of %d points done: see %s", r.Done, r.Total, b.folder.Dir)
	}
	return errors.Join(err, failed)
}

func (b *bench) points() int { return len(b.folder.Plan.Points) }

// load reads what was kept, the zero value if nothing was.
func load[T any](dir, name string) (v T, err error) {
	if err = store.ReadJSON(filepath.Join(dir, name), &v); errors.Is(err, fs.ErrNotExist) {
		err = nil
	}
	return v, err
}

func cores() int { return runtime.NumCPU() }
