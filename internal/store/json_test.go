package store

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

// sample returns a summary with the names of the contract and numbers that have many digits.
func sample() *Summary {
	nan := math.NaN()
	return &Summary{
		Verdict: Warn,
		Checks: []Check{
			{"cell_per_debye", 0.30000000000000004, 1, OK, "cells < 1 Debye length"},
			{"steady", nan, math.Inf(1), Warn, "too short to tell"},
		},
		Results: map[string]any{
			"ion_mean_energy_eV": map[string]any{"grounded": map[string]any{
				"Ar+": Value{math.Pi * 20, 0x1p-40, "eV"}, "all": Value{60.1, nan, "eV"},
			}},
			"electron_density_center_m3": Value{2.5600000000000003e14, 1e10, "1/m3"},
			"self_bias_V":                Value{nan, nan, "V"},
		},
		Provenance: map[string]any{
			"seed": 1.0, "version": "0.1", "wall_s": nan,
			"kernels": []any{"push", math.Inf(-1)},
		},
		References: []Reference{{"lewis1970", "Lewis, J. Comput. Phys. 6, 136 (1970)", "scheme"}},
	}
}

func newRun(t *testing.T) *Run {
	t.Helper()
	run, err := Create(filepath.Join(t.TempDir(), "argon"))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := run.Close(); err != nil {
			t.Error(err)
		}
	})
	return run
}

// same compares all but the identity of NaN.
func same(a, b float64) bool { return a == b || math.IsNaN(a) && math.IsNaN(b) }

func TestSummaryRoundTrip(t *testing.T) {
	run := newRun(t)
	s := sample()
	if err := run.WriteSummary(s, nil); err != nil {
		t.Fatal(err)
	}
	got, err := ReadSummary(run.Path(SummaryFile))
	if err != nil {
		t.Fatal(err)
	}
	want, err := s.Flatten()
	if err != nil {
		t.Fatal(err)
	}
	back, err := got.Flatten()
	if err != nil {
		t.Fatal(err)
	}
	paths := []string{
		"electron_density_center_m3", "ion_mean_energy_eV.grounded.Ar+",
		"ion_mean_energy_eV.grounded.all", "self_bias_V",
	}
	if len(want) != len(paths) || len(back) != len(paths) {
		t.Fatalf("%d results, read %d, want %d", len(want), len(back), len(paths))
	}
	for i, path := range paths {
		a, b := want[i], back[i]
		if a.Path != path || b.Path != path || a.Unit != b.Unit || !same(a.SE, b.SE) ||
			!same(a.Value.Value, b.Value.Value) {
			t.Errorf("%s: wrote %+v, read %+v", path, a, b)
		}
	}
	if v, ok := got.Lookup("ion_mean_energy_eV.grounded.all"); !ok || v.Value != 60.1 {
		t.Errorf("Lookup: %v, %v", v, ok)
	}
	for _, path := range []string{"", "self_bias_V.x", "ion_mean_energy_eV", "nothing"} {
		if v, ok := got.Lookup(path); ok {
			t.Errorf("Lookup %q: %v", path, v)
		}
	}
	if c := got.Checks; c[0].Value != s.Checks[0].Value || c[0].Text != s.Checks[0].Text ||
		!math.IsNaN(c[1].Value) || !math.IsNaN(c[1].Bound) {
		t.Errorf("checks: %+v", c)
	}
	if !reflect.DeepEqual(got.References, s.References) || got.Verdict != Warn {
		t.Errorf("references %v, verdict %s", got.References, got.Verdict)
	}
	kernels := []any{"push", nil}
	if p := got.Provenance; p["wall_s"] != nil || p["seed"] != 1.0 ||
		!reflect.DeepEqual(p["kernels"], kernels) {
		t.Errorf("provenance: %v", p)
	}
}

// TestSummaryForm: the keys are the contract; texts stay readable; nothing is left out.
func TestSummaryForm(t *testing.T) {
	b, err := encodeJSON(sample())
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		`"self_bias_V": {
      "value": null,
      "se": null,
      "unit": "V"
    }`,
		`"value": 62.83185307179586,
          "se": 9.094947017729282e-13,
          "unit": "eV"`,
		`"value": 0.30000000000000004,
      "bound": 1,
      "verdict": "ok",
      "text": "cells < 1 Debye length"`,
		`"wall_s": null`,
		`"key": "lewis1970"`,
	} {
		if !strings.Contains(string(b), want) {
			t.Errorf("missing: %s\nin: %s", want, b)
		}
	}
	if b, err = encodeJSON(&Summary{Verdict: OK}); err != nil {
		t.Fatal(err)
	}
	want := `{
  "verdict": "ok",
  "checks": [],
  "results": {},
  "provenance": {},
  "references": []
}
`
	if string(b) != want {
		t.Errorf("empty summary: %s", b)
	}
}

func TestFlattenFindsAllFaults(t *testing.T) {
	s := &Summary{Results: map[string]any{
		"gap_m": Value{1, 0, "cm"}, "a.b": Value{1, 0, ""}, "c": 1.5,
		"d": map[string]any{"e f": Value{1, 0, ""}}, "ratio": Value{1, 0, ""},
	}}
	_, err := s.Flatten()
	want := strings.Join([]string{
		`results: "a.b" in "a.b" cannot be a part of a path`,
		`results: "e f" in "d.e f" cannot be a part of a path`,
		`results: c is a float64, want a Value or a map`,
		`results: gap_m has the unit "cm", its name says "m"`,
	}, "\n")
	if err == nil || err.Error() != want {
		t.Errorf("got %v\nwant %s", err, want)
	}
	if _, err := s.Scalars(); err == nil {
		t.Error("Scalars accepts them")
	}
	run := newRun(t)
	if err := run.WriteSummary(s, nil); err == nil || exists(run.Path(SummaryFile)) {
		t.Errorf("WriteSummary: %v", err)
	}
}

func TestReadJSONErrors(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "x.json")
	for text, want := range map[string]string{
		"{\n \"verdict\": \"ok\",\n x}": ":3: invalid character 'x'",
		"{\"results\": {}}\n\n{}":       ":3: more after the end",
		"{\n\"verdict\": \"ok\"":        "unexpected EOF",
		"{\"verdict\": 1}":              "cannot unmarshal number",
		"{\"verdict\": \"ok\"}":         "summary without results",
		"{\"results\": {\"a\": 1}}":     "results.a: want an object, got 1",
		"{\"results\": {\"a\": null}}":  "results.a: want an object, got null",
		"{\"results\": {\"a\": {\"value\": \"1\", \"se\": 1, \"unit\": \"\"}}}": "results.a: ",
		"{\"results\": {\"a\": {\"value\": 1, \"se\": 1}}}":                     "results.a.",
	} {
		put(t, path, text)
		var s Summary
		if err := ReadJSON(path, &s); err == nil || !strings.Contains(err.Error(), want) ||
			!strings.HasPrefix(err.Error(), path+":") {
			t.Errorf("%q: got %v, want %s", text, err, want)
		}
	}
	if err := ReadJSON(filepath.Join(dir, "none"), &Summary{}); !os.IsNotExist(err) {
		t.Errorf("missing file: %v", err)
	}
}

// TestValueKeys: a value that lacks a key or has another one is refused, not guessed.
func TestValueKeys(t *testing.T) {
	for text, ok := range map[string]bool{
		`{"value": 1, "se": null, "unit": "V"}`:      true,
		`{"value": 1, "unit": "V"}`:                  false,
		`{"value": 1, "se": 0, "unit": "V", "n": 3}`: false,
		`{"value": "1", "se": 0, "unit": "V"}`:       false,
		`{"value": 1, "sigma": 0, "unit": "V"}`:      false,
		`[1]`:                                        false,
	} {
		var v Value
		if err := json.Unmarshal([]byte(text), &v); (err == nil) != ok {
			t.Errorf("%s: %+v, %v", text, v, err)
		}
	}
}

// TestWriteJSON: numbers that are not finite become null in maps, lists and Numbers.
func TestWriteJSON(t *testing.T) {
	run := newRun(t)
	inf := math.Inf(1)
	type progress struct {
		Period int    `json:"period"`
		Rate   Number `json:"rate"`
	}
	for _, c := range []struct {
		v    any
		want string
	}{
		{progress{3, Number(inf)}, `{"period":3,"rate":null}`},
		{
			map[string]any{
				"a": inf, "b": []float64{1, inf}, "c": map[string]float64{"d": inf},
				"e": float32(1.5), "f": []any{inf, "x"}, "g": []float64(nil),
			},
			`{"a":null,"b":[1,null],"c":{"d":null},"e":1.5,"f":[null,"x"],"g":null}`,
		},
	} {
		if err := run.WriteJSON("state.json", c.v); err != nil {
			t.Fatal(err)
		}
		got := strings.NewReplacer("\n", "", " ", "").Replace(get(t, run.Path("state.json")))
		if got != c.want {
			t.Errorf("got %s, want %s", got, c.want)
		}
	}
	err := run.WriteJSON("bad.json", struct{ X float64 }{inf})
	if err == nil || !strings.Contains(err.Error(), "bad.json") || exists(run.Path("bad.json")) {
		t.Errorf("got %v", err)
	}
}
