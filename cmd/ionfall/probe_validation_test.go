package main

import (
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/probe"
	"ionfall/internal/rng"
	"ionfall/internal/run"
	"ionfall/internal/validation"
)

var validate = flag.Bool("validate", false, "also run long checks")

// loopCase is a discharge of coarse numerics: data and runs share them, so that the loop tests the
// estimate and not the discharge.
const loopCase = `gap: 30 mm
gas: {pressure: 6 Pa, temperature: 300 K, mixture: {Ar: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 120 V}]}
initial: {density: 1e15 /m3, electron_temperature: 2.5 eV}
numerics: {cells: 40, steps_per_period: 300, particles_per_cell: 40, scheme: energy_conserving,
  periods: 500, average_periods: 250}
`

const loopProbe = `probes:
  - {name: p, sweeps: sweeps.csv, position: 15 mm, tip_radius: 50 um, tip_length: 8 mm, gas: Ar}
`

// loop makes an adjustment of amplitude and yield, without data.
func loop(t *testing.T) *adjustment {
	t.Helper()
	dir := t.TempDir()
	write := func(name, text string) string {
		path := filepath.Join(dir, name)
		if err := os.WriteFile(path, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
		return path
	}
	plan, err := run.Prepare(write("case.yaml", loopCase))
	if err != nil {
		t.Fatal(err)
	}
	write("probe.yaml", loopProbe)
	a := &adjustment{
		caseFile: filepath.Join(dir, "case.yaml"), out: filepath.Join(dir, "out"), version: "test",
		input: plan.Case, parallel: 2, problem: &probe.Problem{ModelError: 0.002, Seed: 1},
	}
	if a.resolved, err = plan.Case.Resolved(); err != nil {
		t.Fatal(err)
	}
	for _, text := range []string{
		"drive.tones.0.amplitude(90 V..150 V)", "electrodes.*.ion_secondary_yield(0..0.2)",
	} {
		f, err := probe.ParseInput(text, a.resolved)
		if err != nil {
			t.Fatal(err)
		}
		a.problem.Inputs = append(a.problem.Inputs, *f)
	}
	bundled, err := crosssections.Bundled()
	if err != nil {
		t.Fatal(err)
	}
	a.library = &gases{all: bundled}
	a.anyVerdict = true
	a.predictions()
	return a
}

// Goal: hidden inputs of the program's own discharge are found within the stated intervals. Method:
// ten discharges at random inputs, a noisy sweep drawn in each, and the estimate from one design of
// twelve runs; of the 20 intervals of 95 %, 17 or more hold the truth (fewer: 1 in 60 for
// independent ones).
func TestValidationClosedLoop(t *testing.T) {
	if !*validate {
		t.Skip("some minutes: give -validate")
	}
	const cases, design = 10, 12
	a := loop(t)
	dir := filepath.Dir(a.caseFile)
	hidden := make([][]float64, cases)
	stream := rng.Key{Seed: 17, Purpose: rng.Resampling}.Stream()
	for i := range hidden {
		hidden[i] = []float64{0.1 + 0.8*stream.Float64(), 0.1 + 0.8*stream.Float64()}
	}
	var places [][]float64
	for i := range design {
		places = append(places, probe.HaltonPlace(i+1, 2))
	}
	places = append(places, hidden...)
	// The setups of the probes stand in the description; no data yet.
	if err := a.runAll(t.Context(), places, func(s string) { t.Log(s) }); err != nil {
		t.Fatal(err)
	}
	inside := 0
	for i, place := range hidden {
		_, point, err := a.inputAt(place)
		if err != nil {
			t.Fatal(err)
		}
		file := filepath.Join(dir, fmt.Sprintf("%d", i), "probe.yaml")
		if err := drawFor(a, point, file, uint64(i+1)); err != nil {
			t.Fatal(err)
		}
		one := *a
		one.probes = nil
		one.problem = &probe.Problem{
			Inputs: a.problem.Inputs, Predicted: a.problem.Predicted, ModelError: 0.002, Seed: 1,
		}
		if err := one.readProbes(file); err != nil {
			t.Fatal(err)
		}
		for k := range design {
			_, dir, err := a.inputAt(places[k])
			if err != nil {
				t.Fatal(err)
			}
			p, err := one.pointOf(dir, places[k])
			if err != nil {
				t.Fatal(err)
			}
			one.problem.Points = append(one.problem.Points, *p)
		}
		post, err := one.problem.Solve()
		if err != nil {
			t.Fatal(err)
		}
		truth := a.problem.Values(place)
		for k := range truth {
			mean, sd := probe.Moments(post.Draws, k)
			lo, hi := probe.Quantile(post.Draws, k, 0.025), probe.Quantile(post.Draws, k, 0.975)
			if truth[k] > lo && truth[k] < hi {
				inside++
			}
			t.Logf("case %d input %d: %.4g, found %.4g +- %.2g, best chi2 %.2g", i, k, truth[k], mean, sd,
				post.BestChi2)
		}
	}
	part := float64(inside) / (2 * cases)
	validation.Record(t, "../../testdata/validation/probe-loop.json", update(), validation.Row{
		Section: "Langmuir probe", Quantity: "closed loop: inputs within 95 % intervals",
		Reference: 0.95, Source: "hidden inputs of the program's own discharges", Status: "exact",
		Ours: part, OursError: math.Sqrt(0.95 * 0.05 / (2 * cases)), Limit: 0.1 + 1e-9,
		LimitKind: validation.Absolute, Seed: 17,
		Note: "10 discharges, 2 inputs each (amplitude, secondary yield), 12 runs of design",
	})
}

// drawFor writes a description and the sweep of a run.
func drawFor(a *adjustment, point, file string, seed uint64) error {
	if err := os.MkdirAll(filepath.Dir(file), 0o750); err != nil {
		return err
	}
	if err := os.WriteFile(file, []byte(loopProbe), 0o600); err != nil {
		return err
	}
	d, err := readDescription(file)
	if err != nil {
		return err
	}
	r, err := openRun(point)
	if err != nil {
		return err
	}
	one := reducedProbe{ProbeDescription: d.Probes[0]}
	one.Sweeps = beside(file, one.Sweeps)
	return one.draw(r, a.library, 300, 2, probe.Noise{Floor: 5e-4, Relative: 5e-3, Seed: seed})
}
