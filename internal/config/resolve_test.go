package config

import (
	"errors"
	"math"
	"regexp"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"ionfall/internal/inputerr"
)

// Goal: the resolved form is readable and has every default. Method: golden file, and a second
// pass that must not change it.
func TestResolved(t *testing.T) {
	for name, src := range validFiles(t) {
		out, err := mustParse(t, string(src)).Resolved()
		if err != nil {
			t.Fatal(err)
		}
		golden(t, strings.TrimSuffix(name, ".yaml")+".resolved", string(out))
		again, err := mustParse(t, string(out)).Resolved()
		if err != nil || string(again) != string(out) {
			t.Errorf("%s: the second pass gives\n%s(%v)\nwant\n%s", name, again, err, out)
		}
	}
}

// Goal: titles survive. Method: texts that YAML would take for something else.
func TestResolvedTitles(t *testing.T) {
	for _, title := range []string{
		"true", "null", "~", "5", "1e5", "2024-01-02", "a: b", "a #b", " a ", "- a", "'", `"`, `\`,
		"é °C µ", "off", "<<", "!x", "&x", "*x", "%", "a,b]", "{", "|", ">", "?", "---", "...",
		"\u00a0x", "日本", "0x10", ".inf", "auto", "y", "No", strings.Repeat("x ", 100),
	} {
		c := mustParse(t, minimal)
		c.Title = title
		if _, err := c.Resolved(); err != nil {
			t.Errorf("%q: %v", title, err)
		}
	}
}

// Goal: a case that was changed into an invalid one is not written. Method: one change each, and
// the key that has to be named.
func TestResolvedRefuses(t *testing.T) {
	for key, change := range map[string]func(*Case){
		"gap":                     func(c *Case) { c.Gap = math.NaN() },
		"gas.pressure":            func(c *Case) { c.Gas.Pressure = -5 },
		"gas.mixture":             func(c *Case) { c.Gas.Mixture = nil },
		"gas.mixture.Ar":          func(c *Case) { c.Gas.Mixture[0].Fraction = math.Inf(1) },
		"drive.tones":             func(c *Case) { c.Drive.Tones = nil },
		"drive.tones.0.amplitude": func(c *Case) { c.Drive.Tones[0].Amplitude = math.Inf(1) },
		"accuracy.ion_flux":       func(c *Case) { c.Accuracy.IonFlux = math.NaN() },
		"numerics.cells":          func(c *Case) { c.Numerics.Cells = 1 },
		"numerics.scheme":         func(c *Case) { c.Numerics.Scheme = "other" },
		"title":                   func(c *Case) { c.Title = "two\nlines" },
		"ion_energy_thresholds.0": func(c *Case) { c.IonEnergyThresholds = []float64{0} },
		"film.growth_rate":        func(c *Case) { c.Film = &Film{AtomDensity: 1} },
	} {
		c := mustParse(t, minimal)
		change(c)
		out, err := c.Resolved()
		var bad *inputerr.Error
		if !errors.As(err, &bad) || bad.Key != key {
			t.Errorf("%s: got %v\n%s", key, err, out)
		}
	}
}

// Goal: a case that would read back as another one is not written. Method: a scheme that only the
// file calls auto; a case calls it "".
func TestResolvedComparesWhatItWrote(t *testing.T) {
	c := mustParse(t, minimal)
	c.Numerics.Scheme = "auto"
	if out, err := c.Resolved(); err == nil {
		t.Errorf("got no error and\n%s", out)
	}
}

// Goal: no input makes the reader panic or hang; whatever it accepts survives Resolved, which
// compares bit for bit, and satisfies the schema; whatever it refuses has a message.
func FuzzParse(f *testing.F) {
	for _, src := range validFiles(f) {
		f.Add(src)
	}
	for _, s := range []string{
		"", "a", "[", "{}", "gap: 5 m", minimal + "seed: +5", minimal + "seed: 5.0e0",
		minimal + "accuracy: {ion_flux: 0.07 %}", minimal + "title: \"\\u00a0x\"",
		minimal + "electrodes: {powered: {electron_reflection: .5}}",
		minimal + "electrodes: {powered: {electron_reflection: -0 %}}",
		minimal + "numerics: {cells: 1e2}", minimal + "budget: {}", minimal + "initial: {}",
		minimal + "numerics: {}", minimal + "numerics: 'auto'", "%YAML 1.1\n---\n" + minimal,
		"\ufeff" + minimal, strings.ReplaceAll(minimal, "\n", "\r\n"),
	} {
		f.Add([]byte(s))
	}
	schema := compiled(f)
	f.Fuzz(func(t *testing.T, src []byte) { checkInput(t, schema, src) })
}

// Goal: as FuzzParse, but with a text in the place of a value, where few of the inputs fail for
// their YAML. Method: the n-th value of the sample with all keys is replaced.
func FuzzValue(f *testing.F) {
	src := string(validFiles(f)["testdata/full.yaml"])
	places := regexp.MustCompile(`: [^\n{}\[\],]+`).FindAllStringIndex(src, -1)
	for i, p := range places {
		f.Add(uint(i), src[p[0]+2:p[1]])
	}
	for i, s := range []string{
		"5 Pa", "1e-3 %", "0", "-0", ".5", "5.", "1e2", "auto", "null",
		"1 Torr", "1 deg", "0.07 %", "3e-320 eV", "é", "[1 eV]", "{a: b}", "'x'", "yes",
	} {
		f.Add(uint(i), s)
	}
	schema := compiled(f)
	f.Fuzz(func(t *testing.T, n uint, text string) {
		p := places[n%uint(len(places))]
		checkInput(t, schema, []byte(src[:p[0]+2]+text+src[p[1]:]))
	})
}

// checkInput holds what is true for every input.
func checkInput(t *testing.T, schema *jsonschema.Schema, src []byte) {
	t.Helper()
	c, err := Parse("fuzz.yaml", src)
	if err != nil {
		if c != nil || !strings.HasPrefix(err.Error(), "fuzz.yaml") {
			t.Errorf("got %v with the message %q", c, err)
		}
		return
	}
	if err := validate(schema, src); err != nil {
		t.Errorf("the schema does not accept it: %v", err)
	}
	out, err := c.Resolved()
	if err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	if err := validate(schema, out); err != nil {
		t.Errorf("the schema does not accept the resolved form: %v\n%s", err, out)
	}
	if f := c.Drive.Fundamental(); !(f > 0) {
		t.Errorf("fundamental %v, want one above 0", f)
	}
}
