package run

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"ionfall/internal/progress"
	"ionfall/internal/store"
)

// short is a helium discharge that is far too small to be trusted, for tests of the machinery.
const short = `
gap: 20 mm
gas: {pressure: 60 Pa, mixture: {He: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 200 V}]}
electrodes:
  powered: {ion_secondary_yield: 0.1, electron_reflection: 0.2}
ion_energy_thresholds: [5 eV]
film: {growth_rate: 0.3 nm/s, atom_density: 5e22 /cm3}
initial: {density: 8e14 /m3, electron_temperature: 5 eV}
numerics: {cells: 32, steps_per_period: 480, particles_per_cell: 40, ion_substeps: 4, periods: 24, average_periods: 20}
`

// quick lets the program choose its course: pilot, settling, averaging.
const quick = `
gap: 25 mm
gas: {pressure: 30 Pa, mixture: {He: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 150 V}]}
accuracy: {ion_energy: 10 %, ion_flux: 10 %}
numerics: {cells: 32, steps_per_period: 320, particles_per_cell: 20}
`

func plan(t *testing.T, text string) *Plan {
	t.Helper()
	p, err := PrepareBytes("case.yaml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// files returns the content of everything that must not depend on how a run was carried out.
func files(t *testing.T, dir string) map[string][]byte {
	t.Helper()
	out := map[string][]byte{}
	paths, err := filepath.Glob(filepath.Join(dir, "*.parquet"))
	if err != nil || len(paths) != 8 {
		t.Fatalf("%d tables in %s (%v), want 8", len(paths), dir, err)
	}
	for _, path := range append(paths, filepath.Join(dir, "resolved.yaml")) {
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		out[filepath.Base(path)] = data
	}
	s, err := store.ReadSummary(filepath.Join(dir, store.SummaryFile))
	if err != nil {
		t.Fatal(err)
	}
	s.Provenance = nil // holds times
	if out["summary"], err = json.Marshal(s); err != nil {
		t.Fatal(err)
	}
	return out
}

func sameFiles(t *testing.T, what string, a, b map[string][]byte) {
	t.Helper()
	for name := range a {
		if !bytes.Equal(a[name], b[name]) {
			t.Errorf("%s: %s differs", what, name)
		}
	}
}

// Goal: the bits do not depend on the number of workers, nor on where the results go. Method:
// the same input with 1, 2 and 7 workers, every table and the summary compared byte by byte.
func TestSameBitsForAnyNumberOfWorkers(t *testing.T) {
	var first map[string][]byte
	for _, cores := range []int{1, 2, 7} {
		dir := filepath.Join(t.TempDir(), "out")
		if _, _, err := Run(context.Background(), plan(t, short), Options{Out: dir, Cores: cores}); err != nil {
			t.Fatal(err)
		}
		got := files(t, dir)
		if first == nil {
			first = got
			continue
		}
		sameFiles(t, "other worker number", first, got)
	}
}

// Goal: an interrupted run ends with the bits of an uninterrupted one, wherever it was
// interrupted. Method: a run that passes all stages is cut at random moments, within a step
// loop, and taken up with another number of workers, until it is done.
func TestInterruptedRunHasTheSameBits(t *testing.T) {
	for text, longest := range map[string]int{short: 150, quick: 600} {
		whole := filepath.Join(t.TempDir(), "whole")
		if _, _, err := Run(context.Background(), plan(t, text), Options{Out: whole, Cores: 1}); err != nil {
			t.Fatal(err)
		}
		r := rand.New(rand.NewPCG(1, uint64(len(text))))
		dir := filepath.Join(t.TempDir(), "cut")
		cuts := 0
		for first := true; ; first = false {
			ctx, cancel := context.WithCancel(context.Background())
			timer := time.AfterFunc(time.Duration(10+r.IntN(longest))*time.Millisecond, cancel)
			o := Options{Out: dir, Cores: 1 + r.IntN(2)}
			var err error
			if first {
				_, _, err = Run(ctx, plan(t, text), o)
			} else {
				_, _, err = Resume(ctx, dir, o)
			}
			timer.Stop()
			cancel()
			if err == nil {
				break
			}
			if !errors.Is(err, ErrInterrupted) {
				t.Fatal(err)
			}
			cuts++
		}
		if cuts < 3 {
			t.Errorf("only %d interrupts: the test sees little", cuts)
		}
		sameFiles(t, "interrupted", files(t, whole), files(t, dir))
	}
}

// Goal: resolved.yaml reproduces the run. Method: run it, compare bits, except the file itself.
func TestResolvedInputReproducesTheRun(t *testing.T) {
	dir, again := filepath.Join(t.TempDir(), "a"), filepath.Join(t.TempDir(), "b")
	if _, _, err := Run(context.Background(), plan(t, quick), Options{Out: dir}); err != nil {
		t.Fatal(err)
	}
	p, err := Prepare(filepath.Join(dir, "resolved.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	if _, _, err := Run(context.Background(), p, Options{Out: again}); err != nil {
		t.Fatal(err)
	}
	a, b := files(t, dir), files(t, again)
	for name := range a {
		if strings.HasSuffix(name, ".parquet") {
			ta, err := store.ReadTable(filepath.Join(dir, name))
			if err != nil {
				t.Fatal(err)
			}
			tb, err := store.ReadTable(filepath.Join(again, name))
			if err != nil {
				t.Fatal(err)
			}
			if fmt.Sprint(ta.Columns) != fmt.Sprint(tb.Columns) {
				t.Errorf("%s differs", name)
			}
		}
	}
	if !bytes.Equal(a["summary"], b["summary"]) || !bytes.Equal(a["resolved.yaml"], b["resolved.yaml"]) {
		t.Error("summary or resolved input differs")
	}
}

// Goal: a damaged, foreign or missing checkpoint is refused with the reason, and nothing is lost.
func TestBadCheckpointsAreRefused(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out")
	ctx, cancel := context.WithCancel(context.Background())
	stop := Options{Out: dir, Progress: func(s progress.Status) {
		if s.Periods == 3 {
			cancel()
		}
	}}
	if _, _, err := Run(ctx, plan(t, short), stop); !errors.Is(err, ErrInterrupted) {
		t.Fatalf("got %v, want an interrupt", err)
	}
	path := filepath.Join(dir+".running", store.CheckpointFile)
	good, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	flipped := append([]byte(nil), good...)
	flipped[len(flipped)/2] ^= 4
	for _, c := range []struct {
		name string
		data []byte
		want string
	}{
		{"truncated", good[:len(good)/2], "truncated"},
		{"flipped bit", flipped, "checksum"},
		{"foreign", []byte("PAR1 this is something else, and long enough to hold a header"), "not"},
		{"empty", nil, "truncated"},
	} {
		if err := os.WriteFile(path, c.data, 0o600); err != nil {
			t.Fatal(err)
		}
		_, _, err := Resume(context.Background(), dir, Options{})
		if err == nil || !strings.Contains(err.Error(), c.want) ||
			!strings.Contains(err.Error(), store.CheckpointFile) {
			t.Errorf("%s: got %v, want an error that tells %q and the file", c.name, err, c.want)
		}
	}
	if err := os.WriteFile(path, good, 0o600); err != nil {
		t.Fatal(err)
	}
	if _, _, err := Resume(context.Background(), dir, Options{}); err != nil {
		t.Errorf("the good checkpoint is refused afterwards: %v", err)
	}
}

// Goal: results are never overwritten. Method: run twice into one folder, and without a folder.
func TestResultsAreNeverOverwritten(t *testing.T) {
	base := t.TempDir()
	o := Options{Base: base}
	for _, want := range []string{"case", "case-2", "case-3"} {
		_, dir, err := Run(context.Background(), plan(t, short), o)
		if err != nil || dir != filepath.Join(base, want) {
			t.Fatalf("results in %s (%v), want %s", dir, err, want)
		}
	}
	o.Out = filepath.Join(base, "case")
	if _, _, err := Run(context.Background(), plan(t, short), o); !errors.Is(err, store.ErrExists) {
		t.Errorf("running into an existing folder: %v", err)
	}
}

// Goal: a finished run goes on to a smaller error, from its checkpoint.
func TestFinishedRunContinues(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "out")
	p := plan(t, quick)
	s, _, err := Run(context.Background(), p, Options{Out: dir})
	if err != nil {
		t.Fatal(err)
	}
	if _, _, err := Resume(context.Background(), dir, Options{}); err == nil ||
		!strings.Contains(err.Error(), "give an accuracy") {
		t.Errorf("resuming a finished run without a wish: %v", err)
	}
	const path = "ion_mean_energy_eV.grounded.all"
	before, _ := s.Lookup(path)
	finer := p.Case.Accuracy
	finer.IonEnergy = 0.6 * before.SE / before.Value
	more, _, err := Resume(context.Background(), dir, Options{Accuracy: &finer})
	if err != nil {
		t.Fatal(err)
	}
	after, ok := more.Lookup(path)
	if !ok || !(after.SE < before.SE) || !(after.SE <= finer.IonEnergy*after.Value) {
		t.Errorf("error %g before, %g after, want at most %g", before.SE, after.SE,
			finer.IonEnergy*after.Value)
	}
}

// Goal: a budget ends a run; spent too early it is an error that keeps the checkpoint.
func TestBudget(t *testing.T) {
	p := plan(t, quick+"budget: {periods: 30}\n")
	dir := filepath.Join(t.TempDir(), "out")
	_, _, err := Run(context.Background(), p, Options{Out: dir})
	if !errors.Is(err, ErrBudget) {
		t.Fatalf("got %v, want the budget to be spent", err)
	}
	if _, err := os.Stat(filepath.Join(dir+".running", store.CheckpointFile)); err != nil {
		t.Errorf("no checkpoint is left: %v", err)
	}
}

// Goal: a run may average from its very first period.
func TestAverageOverEverything(t *testing.T) {
	text := strings.Replace(short, "average_periods: 20", "average_periods: 24", 1)
	s, _, err := Run(context.Background(), plan(t, text), Options{Out: filepath.Join(t.TempDir(), "out")})
	if err != nil {
		t.Fatal(err)
	}
	if n := s.Provenance["averaged_periods"]; n != 24 {
		t.Errorf("%v periods averaged, want 24", n)
	}
}

// Goal: unknown gases and mixtures without data are errors with a place.
// Goal: a plasma that the numerics have lost is told from one that cannot burn. Method: a step
// that does not resolve the plasma frequency; a voltage below that of breakdown.
func TestPlasmaGoesOut(t *testing.T) {
	for _, c := range []struct{ input, want string }{
		{
			strings.NewReplacer("8e14", "8e16", "steps_per_period: 480", "steps_per_period: 96",
				"periods: 24, average_periods: 20", "periods: 400").Replace(short),
			"the numerics have done it",
		},
		{
			strings.NewReplacer("200 V", "15 V", "periods: 24, average_periods: 20", "periods: 4000").
				Replace(short),
			"the plasma has gone out: no charged particles are left at these settings",
		},
	} {
		_, _, err := Run(context.Background(), plan(t, c.input), Options{
			Out: filepath.Join(t.TempDir(), "r"), Cores: 1,
		})
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, want an error with %q", err, c.want)
		}
	}
}

func TestUnknownGas(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"{Arr: 1}", `case.yaml:1:33: gas.mixture.Arr: got "Arr", want one of ` +
			`Ar, CH4, CO2, H2, He, N2, O2, SiH4; did you mean "Ar"?`},
	} {
		_, err := PrepareBytes("case.yaml", []byte("gas: {pressure: 5 Pa, mixture: "+c.text+
			"}\ngap: 40 mm\ndrive: {tones: [{frequency: 13.56 MHz, amplitude: 100 V}]}\n"))
		if err == nil || !strings.HasPrefix(err.Error(), c.want) {
			t.Errorf("mixture %s:\ngot  %v\nwant %s", c.text, err, c.want)
		}
	}
}
