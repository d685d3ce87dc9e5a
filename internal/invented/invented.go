// Package invented makes results folders of discharges that never were, for tests of what reads
// results: every number in them is made up to be recognised.
package invented

import (
	"fmt"
	"math"
	"path/filepath"

	"ionfall/internal/store"
	"ionfall/internal/table"
)

// Options say what is invented.
type Options struct {
	Verdict string
	Ions    []string // the kinds that arrive
	Periods int      // of the history; 0 for a few
}

// Run makes a results folder.
func Run(dir string, o Options) error {
	run, err := store.Create(dir)
	if err != nil {
		return err
	}
	if err := fill(run, filepath.Base(dir), o); err != nil {
		return err
	}
	return run.Commit()
}

func fill(run *store.Run, name string, o Options) error {
	input := "title: invented plasma, " + name + "\ngap: 30 mm\n" +
		"gas: {pressure: 8 Pa, mixture: {Ar: 1}}\n" +
		"drive: {tones: [{frequency: 13.56 MHz, amplitude: 120 V}]}\n"
	if err := run.WriteFile("input.yaml", []byte(input)); err != nil {
		return err
	}
	for _, tb := range tables(o) {
		if err := run.WriteTable(tb, nil); err != nil {
			return err
		}
	}
	if err := run.WriteSummary(summary(o.Verdict, o.Ions), nil); err != nil {
		return err
	}
	return run.WriteJSON("state.json", map[string]any{"stage": "done"})
}

// Running makes the folder of a run in progress and returns what ends it.
func Running(dir string, state map[string]any) (*store.Run, error) {
	run, err := store.Create(dir)
	if err != nil {
		return nil, err
	}
	err = run.WriteFile("input.yaml", []byte("title: invented, in progress\n"))
	if err == nil {
		err = run.WriteJSON("state.json", state)
	}
	return run, err
}

// Scan makes the folder of a scan of n points over pressure and voltage. Every tenth point failed
// its checks; with is how many of the points have a results folder.
func Scan(dir string, n, with int) error {
	var number []int64
	var pressure, voltage, energy, se []float64
	var verdict, status []string
	for i := range n {
		number = append(number, int64(i))
		pressure = append(pressure, 2+float64(i%25))
		voltage = append(voltage, 100+20*float64(i/25))
		energy = append(energy, voltage[i]/pressure[i])
		se = append(se, 0.02*energy[i])
		verdict, status = append(verdict, verdictOf(i)), append(status, "done")
	}
	t := table.New("points", "invented scan")
	t.AddInt("point", "", "number", number)
	t.AddFloat("gas.pressure_Pa", "Pa", "pressure", pressure)
	t.AddFloat("drive.amplitude_V", "V", "amplitude", voltage)
	t.AddEstimate("ion_mean_energy_eV.grounded.all", "eV", "mean ion energy", energy, se)
	t.AddText("verdict", "verdict", verdict)
	t.AddText("status", "status", status)
	run, err := store.Create(dir)
	if err != nil {
		return err
	}
	if err := run.WriteTable(t, nil); err != nil {
		return err
	}
	if err := run.Commit(); err != nil {
		return err
	}
	for i := range with {
		at := filepath.Join(dir, "points", fmt.Sprintf("point=%04d", i))
		o := Options{Verdict: verdictOf(i), Ions: []string{"Ar+"}}
		if err := Run(at, o); err != nil {
			return err
		}
	}
	return nil
}

func verdictOf(point int) string {
	if point%10 == 9 {
		return store.Fail
	}
	return store.OK
}

func summary(verdict string, ions []string) *store.Summary {
	value := func(v, se float64, unit string) store.Value {
		return store.Value{Value: v, SE: se, Unit: unit}
	}
	energy, flux, energyFlux := map[string]any{}, map[string]any{}, map[string]any{}
	for _, e := range electrodes() {
		a, b, c := map[string]any{}, map[string]any{}, map[string]any{}
		for _, name := range append([]string{"all"}, ions...) {
			a[name] = value(23.4, 0.2, "eV")
			b[name] = value(1.23e18, 1e16, "1/(m2 s)")
			c[name] = value(4.6, 0.1, "W/m2")
		}
		energy[e], flux[e], energyFlux[e] = a, b, c
	}
	return &store.Summary{
		Verdict: verdict,
		Checks: []store.Check{
			{
				Name: "cell_size", Value: 1.5, Bound: 4, Verdict: verdict,
				Text: "an invented check",
			},
			{
				Name: "batches", Value: 40, Bound: 10, Verdict: store.OK,
				Text: "another invented check",
			},
		},
		Results: map[string]any{
			"ion_mean_energy_eV": energy, "ion_flux_m2ps": flux,
			"ion_energy_flux_Wpm2": energyFlux,
			"power_Wpm2": map[string]any{
				"total":    value(100, 1, "W/m2"),
				"electron": value(math.NaN(), math.NaN(), "W/m2"),
			},
			"film_energy_per_atom_eV": map[string]any{"grounded": value(1.9, 0.1, "eV")},
		},
		Provenance: map[string]any{"program": "a test", "seed": 1, "list": []any{"a", "b"}},
		References: []store.Reference{{Key: "x", Citation: "A. Nobody, J. Tests 1, 2 (2000)"}},
	}
}

// Finish makes a run in progress whole.
func Finish(run *store.Run, name string, o Options) error {
	if err := fill(run, name, o); err != nil {
		return err
	}
	return run.Commit()
}
