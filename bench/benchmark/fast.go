package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"time"

	"ionfall/internal/phys"
	"ionfall/internal/progress"
	"ionfall/internal/run"
	"ionfall/internal/store"
)

// fastScheme is what stands for the scheme of a run with the numerics that the program chooses.
const fastScheme = "numerics: auto"

// fast runs the discharge of the case with the numerics, the course and the length that the
// program chooses, and the bundled set that it takes by default.
func (c *benchmarkCase) fast(o *options, out io.Writer) (result, error) {
	dir, err := os.MkdirTemp("", "benchmark-")
	if err != nil {
		return result{}, err
	}
	defer os.RemoveAll(dir) //nolint:errcheck // a folder of temporary files may stay
	input := fmt.Sprintf("gap: %g m\ngas: {pressure: %.10g Pa, temperature: %g K, mixture: {He: 1}}\n"+
		"drive: {tones: [{frequency: %g Hz, amplitude: %g V, phase: -90 deg}]}\n"+
		"accuracy: {ion_energy: 1 %%, ion_flux: 1 %%}\nseed: %d\n",
		gap, c.GasDensity*phys.Boltzmann*gasTemperature, gasTemperature, frequency, c.Voltage, o.seed)
	plan, err := run.PrepareBytes("benchmark.yaml", []byte(input))
	if err != nil {
		return result{}, err
	}
	begin, last := time.Now(), time.Time{}
	summary, folder, err := run.Run(context.Background(), plan, run.Options{
		Out: filepath.Join(dir, "result"), Cores: o.cores,
		Progress: func(s progress.Status) {
			if time.Since(last) > 10*time.Second {
				last = time.Now()
				_, _ = fmt.Fprintf(out, "%s, period %d\n", s.Stage, s.Periods)
			}
		},
	})
	if err != nil {
		return result{}, err
	}
	r := result{
		Case: c.Number, CrossSections: "set default", Scheme: fastScheme, Seed: o.seed,
		Complete: summary.Verdict == "ok", Published: c.Published, Cores: o.cores,
		Wall: time.Since(begin).Seconds(),
	}
	return r, r.readFast(folder, summary)
}

// readFast fills in what the results folder holds.
func (r *result) readFast(folder string, summary *store.Summary) error {
	var ok bool
	if r.Periods, ok = summary.Provenance["periods"].(int); !ok {
		return fmt.Errorf("the summary has %v periods", summary.Provenance["periods"])
	}
	if r.Averaged, ok = summary.Provenance["averaged_periods"].(int); !ok {
		return fmt.Errorf("the summary averaged %v periods", summary.Provenance["averaged_periods"])
	}
	if r.Moves, ok = summary.Provenance["particle_steps"].(int64); !ok {
		return fmt.Errorf("the summary has %v moves", summary.Provenance["particle_steps"])
	}
	t, err := store.ReadTable(filepath.Join(folder, "profiles.parquet"))
	if err != nil {
		return err
	}
	columns := map[string]*[]float64{
		"x_m": &r.X, "He_plus_density_m3": &r.IonDensity, "electron_density_m3": &r.ElectronDensity,
	}
	for name, values := range columns {
		if *values, err = t.Floats(name); err != nil {
			return err
		}
	}
	errors, err := t.Floats("He_plus_density_m3_se")
	if err != nil {
		return err
	}
	middle := len(r.X) / 2
	r.MidPlane = r.IonDensity[middle]
	// The density at one node knows less of the wander of the whole than the central one does.
	centre, _ := summary.Lookup("electron_density_center_m3")
	se := max(errors[middle], centre.SE/centre.Value*r.MidPlane)
	r.MidPlaneError = &se
	return nil
}
