package report

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/store"
)

func measured(name, verdict string) Beside {
	return Beside{
		Name: name, Sweeps: "sweeps.csv", Where: "20 mm from the powered electrode", Verdict: verdict,
		Rows: []BesideRow{
			{"electron density", "1/m3", BesideValue{3e15, 3e13, ""}, BesideValue{3.3e15, 4e13, ""}, 6},
			{
				"plasma potential", "V",
				BesideValue{store.Number(math.NaN()), store.Number(math.NaN()), "no knee"},
				BesideValue{60, 0.1, ""},
				store.Number(math.NaN()),
			},
		},
		Cautions: []string{"an invented caution"},
		Figures: []Figure{{
			Title: "characteristic", X: Axis{Name: "voltage_V", Label: "voltage", Unit: "V"},
			Y: Axis{Name: "current_A", Label: "current", Unit: "A"},
			Series: []Series{
				{
					Label: "measured", Run: -1, Dots: true, X: Numbers{0, 1, 2},
					Y: Numbers{1, math.NaN(), 3}, SE: Numbers{0.1, math.NaN(), 0.1},
				},
				{Label: "simulated", X: Numbers{0, 1, 2}, Y: Numbers{1.1, 2.1, 3.1}},
			},
		}},
	}
}

// Goal: the report of a run shows what was measured, the newest of each, and says nothing of it
// where there is none. Method: an invented run before, with two comparisons, and with one repeated.
func TestBeside(t *testing.T) {
	r := opened(t, "argon", store.OK)
	page := func() string {
		text, err := Page([]*Run{r})
		if err != nil {
			t.Fatal(err)
		}
		return string(text)
	}
	if text := page(); strings.Contains(text, "measured") {
		t.Error("a run without measurements speaks of them")
	}
	err := KeepBeside(r.Dir, measured("mid-gap", "They disagree."), measured("edge", "They agree."))
	if err != nil {
		t.Fatal(err)
	}
	text := page()
	for _, want := range []string{
		"They disagree.", "They agree.", "(3.000 ± 0.030) × 10", "&#43;6.0", "not known: no knee",
		"an invented caution", "mid-gap: characteristic", "edge: characteristic",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("the page does not say %q", want)
		}
	}
	if err := KeepBeside(r.Dir, measured("mid-gap", "They agree now.")); err != nil {
		t.Fatal(err)
	}
	if text := page(); strings.Contains(text, "They disagree.") ||
		!strings.Contains(text, "They agree now.") || !strings.Contains(text, "edge") {
		t.Error("the newest comparison does not take the place of the earlier one alone")
	}
}

// Goal: what belongs to other results, or is damaged, is not shown as if it were of these. Method:
// a summary that changes after the comparison; a file cut short, and one with a lopsided curve.
func TestBesideLost(t *testing.T) {
	r := opened(t, "argon", store.OK)
	if err := KeepBeside(r.Dir, measured("mid-gap", "They agree.")); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(r.Dir, BesideFile)
	whole, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	lost := func(want string) {
		t.Helper()
		text, err := Page([]*Run{r})
		if err != nil {
			t.Fatal(err)
		}
		if s := string(text); strings.Contains(s, "They agree.") || !strings.Contains(s, want) {
			t.Errorf("want %q and no comparison", want)
		}
	}
	write := func(name, text string) {
		if err := os.WriteFile(name, []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	write(path, string(whole[:len(whole)/2]))
	lost("cannot be shown")
	write(path, strings.Replace(string(whole), `"x":[0,1,2]`, `"x":[0,1]`, 1))
	lost("lengths differ")
	write(path, string(whole))
	summary := filepath.Join(r.Dir, store.SummaryFile)
	text, err := os.ReadFile(summary)
	if err != nil {
		t.Fatal(err)
	}
	write(summary, string(text)+"\n")
	lost("earlier results")
}

// Goal: a comparison with a run that failed is marked like everything of that run. Method: the
// table and the figure.
func TestBesideFailed(t *testing.T) {
	r := opened(t, "argon", store.Fail)
	if err := KeepBeside(r.Dir, measured("mid-gap", "No verdict.")); err != nil {
		t.Fatal(err)
	}
	text, err := Page([]*Run{r})
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(string(text), "✗ (3.300 ± 0.040)") {
		t.Error("the simulated value of a failed run is not marked")
	}
	figures, err := besideFigures(besideKinds()[0], []*Run{r}, Select{})
	if err != nil || len(figures) != 1 || figures[0].Stamp() == "" {
		t.Errorf("figures %v, %v: want one with a stamp", figures, err)
	}
}
