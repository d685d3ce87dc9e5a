package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/validation"
)

func mustParse(t *testing.T, args ...string) *options {
	t.Helper()
	o, err := parse(args, io.Discard)
	if err != nil {
		t.Fatal(err)
	}
	return o
}

// results runs the command line with --json and reads what it prints.
func results(t *testing.T, args ...string) []result {
	t.Helper()
	var out bytes.Buffer
	if err := carryOut(mustParse(t, append(args, "--json")...), &out, io.Discard); err != nil {
		t.Fatal(err)
	}
	var list []result
	if err := json.Unmarshal(out.Bytes(), &list); err != nil {
		t.Fatal(err)
	}
	return list
}

// thin makes a start of some thousand particles, so that a run takes a moment.
const thin = "--start-density=2e13"

// exchangeForm writes the electron collisions of a gas as a file in the exchange form.
func exchangeForm(t *testing.T, gas *crosssections.Gas) string {
	t.Helper()
	var b strings.Builder
	b.WriteString("DATABASE: one database\n\n")
	for _, p := range gas.Electron {
		fmt.Fprintf(&b, "%s\n", strings.ToUpper(p.Kind.String()))
		if p.Kind == crosssections.Elastic {
			fmt.Fprintf(&b, "He\n%v\n", electronMass/heliumMass)
		} else {
			fmt.Fprintf(&b, "He -> He^+\n%v\n", p.Threshold)
		}
		b.WriteString("-----\n")
		for i, e := range p.Table.Energy {
			fmt.Fprintf(&b, "%v %v\n", e, p.Table.CrossSection[i])
		}
		b.WriteString("-----\n\n")
	}
	name := filepath.Join(t.TempDir(), "helium.txt")
	if err := os.WriteFile(name, []byte(b.String()), 0o600); err != nil {
		t.Fatal(err)
	}
	return name
}

// Goal: a file in the exchange form is used as a bundled set is, and all sets can be run in turn.
// Method: the default set written as such a file must give the very same densities; another set
// does not.
func TestFileIsUsedLikeASet(t *testing.T) {
	library, err := crosssections.Bundled()
	if err != nil {
		t.Fatal(err)
	}
	gas, err := library.Gas(helium)
	if err != nil {
		t.Fatal(err)
	}
	list := results(t, "--helium", exchangeForm(t, gas), "--set", "all", "--periods", "3", thin)
	if len(list) != 1+len(gas.Sets) {
		t.Fatalf("%d results, want the file's and %v", len(list), gas.Sets)
	}
	file, same := list[0], list[1]
	if file.MidPlane != same.MidPlane || file.Moves != same.Moves {
		t.Errorf("file: %g /m3, the same as a set: %g /m3", file.MidPlane, same.MidPlane)
	}
	for k, r := range list[1:] {
		if r.CrossSections != "set "+gas.Sets[k] {
			t.Errorf("result %d is of %s, want the set %s", k+1, r.CrossSections, gas.Sets[k])
		}
	}
	// The sets default and phelps differ above 200 eV only, where few electrons are in so short a
	// run; the last one, estimate, differs at all energies.
	if last := list[len(list)-1]; last.MidPlane == same.MidPlane {
		t.Errorf("%s and %s give the same density", last.CrossSections, same.CrossSections)
	}
}

// Goal: each case is set up by the published figures. Method: the published number of steps of
// the whole run, particles and density of the start; V0 sin(2 pi f t) at the electrode.
func TestCasesAreThePublishedOnes(t *testing.T) {
	steps := []int{512_000, 4_096_000, 8_192_000, 49_152_000}
	pressure := []float64{30, 100, 300, 1000} // [mTorr], n k T
	library, err := crosssections.Bundled()
	if err != nil {
		t.Fatal(err)
	}
	gas, err := library.Gas(helium)
	if err != nil {
		t.Fatal(err)
	}
	for i, c := range published() {
		if got := c.Periods * c.StepsPerPeriod; got != steps[i] {
			t.Errorf("case %d: %d steps, want %d", c.Number, got, steps[i])
		}
		milliTorr := c.GasDensity * 1.380649e-23 * gasTemperature / 0.133322
		if math.Abs(milliTorr/pressure[i]-1) > 0.005 {
			t.Errorf("case %d: %.2f mTorr, want %g", c.Number, milliTorr, pressure[i])
		}
		s, err := c.setup(gas, mustParse(t))
		if err != nil {
			t.Fatal(err)
		}
		k := s.Config()
		if n := s.Species()[1].Count(); n != c.Cells*c.PerCell ||
			math.Abs(float64(n)*k.Weight/gap/c.Density-1) > 1e-12 {
			t.Errorf("case %d: %d ions of weight %g", c.Number, n, k.Weight)
		}
		for _, part := range []float64{0, 0.1, 0.25, 0.6} {
			want := c.Voltage * math.Sin(2*math.Pi*part)
			if got := k.Drive.At(part); math.Abs(got-want) > 1e-9 {
				t.Errorf("case %d: %g V at %g of the period, want %g", c.Number, got, part, want)
			}
		}
	}
}

// Goal: densities are those of the particles: their integral over the gap is the number of
// particles. Method: the start, at which no particle has moved; to rounding.
func TestDensitiesAddUp(t *testing.T) {
	library, err := crosssections.Bundled()
	if err != nil {
		t.Fatal(err)
	}
	gas, err := library.Gas(helium)
	if err != nil {
		t.Fatal(err)
	}
	c := published()[0]
	s, err := c.setup(gas, mustParse(t, thin))
	if err != nil {
		t.Fatal(err)
	}
	k := s.Config()
	want := float64(s.Species()[1].Count()) * k.Weight
	k.StepsPerPeriod = 1
	d := newDensities(k, 0)
	s.Observe(d)
	if err := s.Advance(1); err != nil {
		t.Fatal(err)
	}
	d.endPeriod()
	for i := range k.Species {
		p := d.profile(i)
		got := -0.5 * (p[0] + p[k.Cells]) * k.CellSize()
		for _, n := range p {
			got += n * k.CellSize()
		}
		if math.Abs(got/want-1) > 1e-12 {
			t.Errorf("species %d: %.12g /m2, want %.12g", i, got, want)
		}
	}
	if mid := d.midPlane().Mean; mid != d.profile(1)[k.Cells/2] {
		t.Errorf("mid-plane %g /m3, profile %g", mid, d.profile(1)[k.Cells/2])
	}
}

// Goal: the answer says what it is: of which scheme, with an error or without, finished or not.
// Method: short runs, and the texts of one.
func TestShortRun(t *testing.T) {
	for _, scheme := range []string{"momentum_conserving", "energy_conserving"} {
		r := results(t, "--case", "1", "--periods", "3", "--scheme", scheme, thin)[0]
		if r.MidPlaneError != nil || r.Complete || r.Averaged != 3 || r.Scheme != scheme {
			t.Errorf("%+v", r)
		}
	}
	var out bytes.Buffer
	o := mustParse(t, "--periods", "12", thin)
	if err := carryOut(o, &out, io.Discard); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		"case 1: 6.7 cm, 9.64e+20 /m3, 450 V at 13.56 MHz", "published 0.14:", "set default: 0.0",
		" +- ", "not finished: 1280 periods are published", "is not bundled",
	} {
		if !strings.Contains(out.String(), want) {
			t.Errorf("%q is missing in:\n%s", want, out.String())
		}
	}
}

// Goal: wrong command lines are refused with all that is wrong. Method: whole texts.
func TestWrongCommandLines(t *testing.T) {
	for _, c := range []struct{ args, want string }{
		{"--case 5", "--case: got 5, want 1 to 4"},
		{"--scheme fast", `--scheme: got "fast", want momentum_conserving or energy_conserving`},
		{
			"--periods -1 --cores 0 --database X",
			"--periods: got -1, want 0 or more\n--cores: got 0, want at least 1\n" +
				"--database: want --helium with it",
		},
		{"--start-density -1 more", "got the argument \"more\", want flags only\n" +
			"--start-density: got -1 /m3, want 0 to 1e+17"},
		{"--fast --set phelps", "--fast: want no --helium, --set, --periods and --start-density"},
	} {
		_, err := parse(strings.Fields(c.args), io.Discard)
		if err == nil || err.Error() != c.want {
			t.Errorf("%s: %v, want %s", c.args, err, c.want)
		}
	}
	for args, want := range map[string]string{
		"--set other":             "unknown set of He \"other\": want one of default, phelps",
		"--helium /does/not/work": "--helium: open /does/not/work",
	} {
		err := carryOut(mustParse(t, strings.Fields(args)...), io.Discard, io.Discard)
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, want %s", args, err, want)
		}
	}
}

// Goal: many runs that are a little too high together are seen, and a reference that they share
// counts once. Method: three runs of two references, by hand.
func TestMeanOfRuns(t *testing.T) {
	row := func(quantity string, reference, ours, stdErr float64) validation.Row {
		return validation.Row{
			Section: "helium benchmark, case 1", Quantity: quantity + sameTables,
			Reference: reference, Ours: ours, OursError: stdErr,
		}
	}
	rows := []validation.Row{
		row("a", 2, 2.06, 0.02), row("b", 2, 2.1, 0.04), row("c", 4, 4.16, 0.04),
		{Section: "helium benchmark, case 1", Quantity: "d, against the published", Reference: 1},
	}
	mean, ok := meanRow(rows)
	ours := math.Sqrt(0.01*0.01+0.02*0.02+0.01*0.01) / 3
	shared := math.Sqrt(2*2+1) * independentError / 3
	if !ok || math.Abs(mean.Ours-1.04) > 1e-12 || math.Abs(mean.OursError-ours) > 1e-12 ||
		math.Abs(mean.ReferenceError-shared) > 1e-12 || mean.Pass != (mean.Deviation < 4) {
		t.Errorf("%v %+v, want 1.04 +- %g and 1 +- %g", ok, mean, ours, shared)
	}
	if _, ok := meanRow(rows[:1]); ok {
		t.Error("a mean of one run")
	}
}
