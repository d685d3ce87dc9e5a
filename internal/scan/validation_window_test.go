package scan

import (
	"context"
	"flag"
	"os"
	"path/filepath"
	"testing"

	"ionfall/internal/validation"
)

var (
	validate = flag.Bool("validate", false, "also run long checks")
	update   = flag.Bool("update", false, "write the rows of the validation")
)

// Goal: on argon the search finds settings that meet the wants, and a fresh run at them agrees with
// what was predicted. Method: coarse numerics of fixed length, eight points over the ranges, then a
// search; the fresh run against the prediction, in their joint standard error.
func TestValidationWindow(t *testing.T) {
	if !*validate {
		t.Skip("some minutes: give -validate")
	}
	dir := t.TempDir()
	for name, text := range map[string]string{
		"argon.yaml": `gap: 30 mm
gas: {pressure: 6 Pa, mixture: {Ar: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 120 V}]}
initial: {density: 1e15 /m3, electron_temperature: 2.5 eV}
numerics: {cells: 64, steps_per_period: 400, particles_per_cell: 40, scheme: energy_conserving,
  periods: 500, average_periods: 250}
`,
		"window.yaml": `base: argon.yaml
vary:
  gas.pressure: {from: 5 Pa, to: 12 Pa, spacing: log}
  drive.tones.0.amplitude: {from: 90 V, to: 200 V}
sampling: {method: halton, points: 8}
`,
	} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o600); err != nil {
			t.Fatal(err)
		}
	}
	p, err := Load(filepath.Join(dir, "window.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	wants := []Want{
		{Path: "ion_mean_energy_eV.grounded.all", Bound: 22},
		{Path: "ion_flux_m2ps.grounded.all", Above: true, Bound: 6e17},
	}
	f := open(t, p, "scan")
	w, err := f.FindWindow(context.Background(), WindowOptions{
		Options: Options{Cores: 2}, Wants: wants, Best: wants[1].Path, Probability: 0.95,
		Doubt: 0.02, MostPoints: 20, Untrusted: true,
		Tell: func(points int, doubt float64) { t.Logf("%d points, doubt %.3f", points, doubt) },
	})
	if err != nil {
		t.Fatal(err)
	}
	t.Logf("%v, certainty %.3f, share %.3f, verdict %s", w.Settings.Texts, w.Certainty, w.Share, w.Verdict)
	if !w.Inside || w.Share < 0.02 || w.Share > 0.98 {
		t.Errorf("no window to speak of: %+v", w)
	}
	for _, r := range w.Results {
		if !r.Met {
			t.Errorf("%s: got %g, the want is not met", r.Path, r.Got.Value)
		}
		validation.Record(t, "../../testdata/validation/window.json", *update, validation.Row{
			Section: "Operating window, argon", Quantity: r.Path + " at the recommended settings",
			Unit: r.Unit, Reference: r.Predicted.Mean, ReferenceError: r.Predicted.StdErr,
			Source: "prediction from the points of the search", Status: "computed",
			Ours: r.Got.Value, OursError: r.Got.SE, Limit: 1.96, LimitKind: validation.Sigma,
			Seed: uint64(w.Settings.Number + 1), Note: "5 to 12 Pa, 90 to 200 V, 30 mm, coarse numerics",
		})
	}
}
