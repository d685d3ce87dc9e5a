package scan

import (
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"ionfall/internal/config"
	"ionfall/internal/inputerr"
)

// tiny is a helium discharge that is far too small to be trusted, for tests of the machinery: a
// point takes about a tenth of a second.
const tiny = `gap: 20 mm
gas: {pressure: 60 Pa, mixture: {He: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 200 V}]}
electrodes:
  powered: {ion_secondary_yield: 0.1, electron_reflection: 0.2}
initial: {density: 8e14 /m3, electron_temperature: 5 eV}
numerics: {cells: 32, steps_per_period: 480, particles_per_cell: 40, ion_substeps: 4, periods: 24, average_periods: 20}
`

func put(t *testing.T, dir, name, text string) string {
	t.Helper()
	path := filepath.Join(dir, name)
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	return path
}

// planOf writes a base and a plan that names it and loads the plan.
func planOf(t *testing.T, text string) (*Plan, error) {
	t.Helper()
	dir := t.TempDir()
	put(t, dir, "base.yaml", tiny)
	return Load(put(t, dir, "small.yaml", "base: base.yaml\n"+text))
}

func goodPlan(t *testing.T, text string) *Plan {
	t.Helper()
	p, err := planOf(t, text)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// Goal: a grid has all combinations, in SI units, and each point is an input that differs from the
// base in what varies and the seed only. Method: read the inputs back.
func TestGrid(t *testing.T) {
	p := goodPlan(t, `vary:
  gas.pressure: [50 Pa, 1 mbar]
  drive.tones.0.amplitude: {from: 100 V, to: 400 V, points: 3, spacing: log}
  numerics.cells: [16, 32]
`)
	if len(p.Points) != 12 || p.Name != "small" {
		t.Fatalf("%d points of %q, want 12", len(p.Points), p.Name)
	}
	base, err := config.Parse("base", []byte(tiny))
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range [][3]float64{{50, 100, 16}, {50, 100, 32}, {50, 200, 16}} {
		if !slices.Equal(p.Points[i].Values, want[:]) {
			t.Errorf("point %d: got %v, want %v", i+1, p.Points[i].Values, want)
		}
	}
	for _, point := range p.Points {
		c, err := config.Parse("point", point.Input)
		if err != nil {
			t.Fatal(err)
		}
		v := point.Values
		if c.Gas.Pressure != v[0] || c.Drive.Tones[0].Amplitude != v[1] ||
			float64(c.Numerics.Cells) != v[2] || c.Seed != 1+uint64(point.Number) {
			t.Errorf("point %d: %+v differs from %v", point.Number, c, v)
		}
		same := *c
		same.Gas.Pressure, same.Seed, same.Numerics.Cells = base.Gas.Pressure, base.Seed, 32
		same.Drive.Tones[0].Amplitude = 200
		if !same.Equal(base) {
			t.Errorf("point %d differs in more than what varies", point.Number)
		}
	}
	names := []string{p.Axes[0].Column(), p.Axes[1].Column(), p.Axes[2].Column()}
	want := []string{"gas.pressure_Pa", "drive.tones.0.amplitude_V", "numerics.cells"}
	if !slices.Equal(names, want) {
		t.Errorf("columns %v, want %v", names, want)
	}
}

// Goal: what the base leaves out, words, lists and whole mappings can vary. Method: one of each.
func TestAnyPathVaries(t *testing.T) {
	p := goodPlan(t, `vary:
  electrodes.grounded.ion_secondary_yield: [0, 0.1]
  gas.mixture: [{He: 1}, {He: 0.5, Ar: 0.5}]
  numerics.scheme: [energy_conserving, momentum_conserving]
  seed: [5, 6]
`)
	if len(p.Points) != 16 {
		t.Fatalf("%d points, want 16", len(p.Points))
	}
	last := p.Points[15]
	want := []string{"0.1", "{He: 0.5, Ar: 0.5}", "momentum_conserving", "6"}
	if !slices.Equal(last.Texts, want) {
		t.Errorf("got %q, want %q", last.Texts, want)
	}
	if !p.Axes[1].Text || !p.Axes[2].Text || p.Axes[0].Text || p.Axes[3].Text {
		t.Error("texts and numbers are mixed up")
	}
}

// Goal: sampled points fill the ranges. Method: for a Latin hypercube, one point in each of n
// stripes of each axis; for Halton, every beginning is spread over both halves of each axis.
func TestSampling(t *testing.T) {
	const axes = `vary:
  gas.pressure: {from: 10 Pa, to: 1000 Pa, spacing: log}
  gap: {from: 10 mm, to: 50 mm}
`
	stripes := func(p *Plan, n int) (in [2]map[int]int) {
		in = [2]map[int]int{{}, {}}
		for _, point := range p.Points[:n] {
			in[0][int(float64(n)*math.Log10(point.Values[0]/10)/2)]++
			in[1][int(float64(n)*(point.Values[1]-0.01)/0.04)]++
		}
		return in
	}
	latin := goodPlan(t, axes+"sampling: {method: latin_hypercube, points: 20, seed: 3}\n")
	if in := stripes(latin, 20); len(in[0]) != 20 || len(in[1]) != 20 {
		t.Errorf("stripes with points: %d and %d, want 20", len(in[0]), len(in[1]))
	}
	halton := goodPlan(t, axes+"sampling: {method: halton, points: 32}\n")
	for k := range 2 {
		low := 0
		for _, point := range halton.Points[:16] {
			if halton.place()[point.Number-1][k] < 0.5 {
				low++
			}
		}
		if low < 6 || low > 10 {
			t.Errorf("axis %d: %d of the first 16 points are in the lower half", k, low)
		}
	}
	again := goodPlan(t, axes+"sampling: {method: halton, points: 32}\n")
	if again.Fingerprint() != halton.Fingerprint() {
		t.Error("the same plan gives other points")
	}
}

// Goal: a list gives the points as written. Method: compare.
func TestList(t *testing.T) {
	dir := t.TempDir()
	put(t, dir, "base.yaml", tiny)
	put(t, dir, "list.csv", "gas.pressure, gap\n50 Pa, 20 mm\n# a remark\n\"0.1 mbar\",3 cm\n")
	p, err := Load(put(t, dir, "plan.yaml", "base: base.yaml\npoints: list.csv\n"))
	if err != nil {
		t.Fatal(err)
	}
	if len(p.Points) != 2 || !slices.Equal(p.Points[1].Values, []float64{10, 0.03}) {
		t.Errorf("got %+v", p.Points)
	}
	if p.Name != filepath.Base(dir) {
		t.Errorf("the plan is called %q", p.Name)
	}
}

// Goal: every mistake is told with its place and what was expected. Method: one of each.
func TestBadPlans(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"", `small.yaml:1:1: got neither vary nor points, want one of them`},
		{"vary: {gas.presure: [5 Pa]}", `small.yaml:2:22: gas.presure: unknown key; did you mean ` +
			`"pressure"?`},
		{"vary: {gas.pressure: [5 Pa, 7]}", `small.yaml:2:29: gas.pressure: got 7, want a pressure ` +
			`such as 5 Pa (units: Pa, `},
		{"vary: {gas.pressure: [5 Pa, -7 Pa]}", `small.yaml:2:29: gas.pressure: got -7 Pa, want more`},
		{"vary: {gas.pressure: [5 Pa, 5.0 Pa]}", `small.yaml:2:29: gas.pressure: got "5.0 Pa", ` +
			`want values that differ`},
		{"vary: {gas.pressure: 5 Pa}", `small.yaml:2:22: gas.pressure: got "5 Pa", want a list of ` +
			`values, or a range`},
		{"vary: {drive.tones.3.amplitude: [5 V]}", `small.yaml:2:34: drive.tones.3.amplitude: the ` +
			`base has no such element`},
		{"vary: {gap: {from: 1 cm, points: 3}}", `small.yaml:2:13: gap.to: got nothing, want an end`},
		{"vary: {gap: {from: 1 cm, to: 10 mm, points: 3}}", `small.yaml:2:13: gap: got 0.01 to 0.01` +
			` m, want two ends that differ`},
		{"vary: {gap: {from: 1 cm, to: 3 V, points: 3}}", `small.yaml:2:30: gap: got 3 V, want a ` +
			`length`},
		{"vary: {gap: {from: 1 cm, to: 2 cm}}", `small.yaml:2:13: gap.points: got nothing, want`},
		{"vary: {gap: {from: 1 cm, to: 2 cm, points: 1}}", `small.yaml:2:44: gap.points: got "1", ` +
			`want a whole number from 2 to`},
		{
			"vary: {gap: {from: 1 cm, to: 2 cm, points: 3, spacing: cubic}}",
			`small.yaml:2:56: gap.spacing: got "cubic", want linear or log`,
		},
		{
			"vary: {drive.bias: {from: -5 V, to: 5 V, points: 3, spacing: log}}",
			`want two ends that differ, both above 0 for log spacing`,
		},
		{"vary: {gas: [{pressure: 5 Pa}], gas.pressure: [5 Pa]}", `gas.mixture: got nothing`},
		{"vary: {gas.pressure: [5 Pa], gas.pressure: [6 Pa]}", `it varies already`},
		{"vry: {}", `small.yaml:2:1: vry: unknown key; did you mean "vary"?`},
		{"vary: {gap: [1 cm]}\npoints: a.csv", `small.yaml:3:9: points: got vary and points`},
		{"points: none.csv", `none.csv: no such file`},
		{"vary: {gap: [1 cm]}\nsampling: {method: halton, points: 5}", `small.yaml:2:13: gap: got a ` +
			`list of values, want a range`},
		{
			"vary: {gap: {from: 1 cm, to: 2 cm}}\nsampling: {method: halton}",
			`small.yaml:3:11: sampling.points: got nothing`,
		},
		{
			"vary: {gap: {from: 1 cm, to: 2 cm}}\nsampling: {method: sobol, points: 4}",
			`small.yaml:3:20: sampling.method: got "sobol", want one of grid, latin_hypercube, halton`,
		},
		{"vary: [", `not valid YAML`},
		{
			"vary: {gap: {from: 1 cm, to: 9 cm, points: 900}, seed: {from: 1, to: 900, points: 900}}",
			`got more than 20000 points`,
		},
	} {
		_, err := planOf(t, c.text)
		var list inputerr.List
		if !errors.As(err, &list) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s\ngot  %v\nwant %s", c.text, err, c.want)
		}
	}
	dir := t.TempDir()
	put(t, dir, "base.yaml", strings.Replace(tiny, "60 Pa", "60", 1))
	_, err := Load(put(t, dir, "plan.yaml", "base: base.yaml\nvary: {gap: [1 cm]}\n"))
	if err == nil || !strings.Contains(err.Error(), "base.yaml:2:17: gas.pressure: got 60") {
		t.Errorf("wrong base: %v", err)
	}
	put(t, dir, "base.yaml", tiny)
	put(t, dir, "list.csv", "gas.pressure,gap\n50 Pa,20 mm\n5 Pa,3\n")
	_, err = Load(put(t, dir, "plan.yaml", "base: base.yaml\npoints: list.csv\n"))
	if err == nil || !strings.Contains(err.Error(), "list.csv:3:6: gap: got 3, want a length") {
		t.Errorf("wrong list: %v", err)
	}
	put(t, dir, "list.csv", "gas.pressure,gap\n50 Pa\n")
	_, err = Load(filepath.Join(dir, "plan.yaml"))
	if err == nil || !strings.Contains(err.Error(), "list.csv:2:1: got 1 values, want 2") {
		t.Errorf("short line: %v", err)
	}
}

// Goal: files that the base names are found from the folders of the points, and from a copy of the
// plan. Method: a gas library and a waveform beside the base, which stands in another folder.
func TestFilesOfTheBase(t *testing.T) {
	dir := t.TempDir()
	inner := filepath.Join(dir, "inputs")
	if err := os.Mkdir(inner, 0o777); err != nil {
		t.Fatal(err)
	}
	put(t, inner, "base.yaml", strings.Replace(tiny, "tones: [{frequency: 13.56 MHz, amplitude: 200 V}]",
		"trace: {file: scope.csv, frequency: 13.56 MHz, harmonics: 1}", 1))
	text := "time_ns,voltage_V\n"
	for i := range 41 {
		text += fmt.Sprintf("%.4f,%.3f\n", float64(i)/40/0.01356, 200*math.Cos(2*math.Pi*float64(i)/40))
	}
	put(t, inner, "scope.csv", text)
	p, err := Load(put(t, dir, "small.yaml", "base: inputs/base.yaml\nvary: {gas.pressure: [50 Pa]}\n"))
	if err != nil {
		t.Fatal(err)
	}
	f := open(t, p, "scan")
	again, err := Load(f.Dir)
	if err != nil || again.Fingerprint() != p.Fingerprint() {
		t.Fatalf("the copy has other points: %v", err)
	}
	if _, _, err := again.Prepare(); err != nil {
		t.Error(err)
	}
	_, err = Load(put(t, dir, "small.yaml", "base: inputs/base.yaml\n"+
		"vary: {drive.trace.file: [scope.csv]}\n"))
	if err == nil || !strings.Contains(err.Error(), `small.yaml:2:27: drive.trace.file: got "scope.csv"`+
		", want a whole path") {
		t.Errorf("got %v", err)
	}
}

// Goal: a gas that is not known is told with its place. Method: vary the mixture.
func TestUnknownGas(t *testing.T) {
	p := goodPlan(t, "vary:\n  gas.mixture: [{He: 1}, {Hx: 1}]\n")
	_, _, err := p.Prepare()
	if err == nil || !strings.Contains(err.Error(), `small.yaml:3:3: gas.mixture.Hx: got "Hx"`) {
		t.Errorf("got %v", err)
	}
}

// Goal: every beginning of the coarse order covers the plan, better than the order of the grid.
// Method: the largest distance of any point of an 8 x 8 grid to the first quarter.
func TestCoarseFirst(t *testing.T) {
	var u [][]float64
	for i := range 64 {
		u = append(u, []float64{float64(i/8) / 7, float64(i%8) / 7})
	}
	hole := func(order []int) float64 {
		worst := 0.0
		for i := range u {
			nearest := math.Inf(1)
			for _, k := range order {
				nearest = math.Min(nearest, squared(u[i], u[k]))
			}
			worst = math.Max(worst, nearest)
		}
		return math.Sqrt(worst)
	}
	order := coarseFirst(u, 64)
	if got := slices.Sorted(slices.Values(order)); len(got) != 64 || got[63] != 63 {
		t.Fatalf("not every point is in the order: %v", order)
	}
	// Sixteen points at best leave holes of the spacing of a 4 x 4 grid, 2/7 of the side.
	if h := hole(order[:16]); h > 0.35 {
		t.Errorf("the first quarter leaves a hole of %.2f", h)
	}
}

// Goal: the forecast learns how long points take where the estimates are wrong. Method: times that
// depend on an input in a way that the estimates do not; predict all from a fifth.
func TestForecast(t *testing.T) {
	p := goodPlan(t, `vary:
  gas.pressure: {from: 10 Pa, to: 100 Pa, points: 10}
  gap: {from: 10 mm, to: 40 mm, points: 6}
`)
	estimate, truth := make([]float64, 60), make([]float64, 60)
	total := 0.0
	for i, u := range p.place() {
		estimate[i] = 10 * (1 + u[1])
		truth[i] = 40 * (1 + u[1]) * math.Exp(1.2*u[0]) * (1 + 0.1*math.Sin(float64(13*i)))
		total += truth[i]
	}
	f := newForecast(p, estimate)
	order := p.order(estimate, false)
	for _, i := range order[:6] {
		f.add(i, truth[i])
		total -= truth[i]
	}
	left := f.left(order[6:], nil, 1).Expected.Seconds()
	if off := left/total - 1; math.Abs(off) > 0.15 {
		t.Errorf("after a tenth of the points the forecast of the rest is off by %+.0f %%", 100*off)
	}
	if l := f.left(nil, []float64{3, 4}, 2); math.Abs(l.Expected.Seconds()-4) > 1e-6 {
		t.Errorf("two running points: %v", l)
	}
}

func ExamplePlan() {
	p, err := Load("testdata/pressure.yaml")
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, point := range p.Points {
		fmt.Println(point.Number, point.Texts)
	}
	// Output:
	// 1 [5 Pa 100 V]
	// 2 [5 Pa 200 V]
	// 3 [10 Pa 100 V]
	// 4 [10 Pa 200 V]
}
