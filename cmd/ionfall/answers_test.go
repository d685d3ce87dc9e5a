package main

import (
	"math"
	"testing"

	"ionfall/internal/config"
	"ionfall/internal/store"
)

func leaf(value, se float64, unit string) store.Value {
	return store.Value{Value: value, SE: se, Unit: unit}
}

type dict = map[string]any

// mixed is a summary with two ions, thresholds and a film.
func mixed() *store.Summary {
	wall := func(scale float64, unit string) dict {
		return dict{
			"all": leaf(scale, scale/100, unit), "Ar+": leaf(0.7*scale, scale/99, unit),
			"He+": leaf(0.3*scale, scale/98, unit),
		}
	}
	both := func(scale float64, unit string) dict {
		return dict{"powered": wall(scale, unit), "grounded": wall(1.1*scale, unit)}
	}
	above := dict{"100_eV": leaf(0.02, 0.003, ""), "12p5eV": leaf(0.8123, 0.0045, "")}
	part := dict{"all": above}
	percentiles := dict{
		"p05": leaf(3.21, math.NaN(), "eV"), "p50": leaf(20, 0.5, "eV"),
		"p95": leaf(44, 1, "eV"),
	}
	return &store.Summary{
		Verdict: store.Fail,
		Results: dict{
			"ion_mean_energy_eV": both(23.4187, "eV"), "ion_flux_m2ps": both(1.2345e18, "1/(m2 s)"),
			"ion_energy_flux_Wpm2":     both(4.6, "W/m2"),
			"ion_energy_percentile_eV": dict{"powered": percentiles, "grounded": percentiles},
			"ion_fraction_above":       dict{"powered": part, "grounded": part},
			"film_energy_per_atom_eV":  dict{"grounded": leaf(31, 2, "eV")},
			"film_ions_per_atom":       dict{"grounded": leaf(0.5, 0.01, "")},
			"sheath_width_m": dict{
				"powered":  leaf(3.4e-3, 2e-5, "m"),
				"grounded": leaf(3.5e-3, 2e-5, "m"),
			},
			"plasma_potential_V": leaf(57, 0.3, "V"), "self_bias_V": leaf(0, 0, "V"),
			"electron_density_center_m3":     leaf(8.1e14, 2e12, "1/m3"),
			"electron_density_peak_m3":       leaf(8.2e14, 2e12, "1/m3"),
			"electron_temperature_center_eV": leaf(math.NaN(), math.NaN(), "eV"),
			"power_Wpm2": dict{
				"total": leaf(80, 1, "W/m2"), "electron": leaf(40, 1, "W/m2"),
				"Ar+": leaf(30, 1, "W/m2"), "He+": leaf(10, 1, "W/m2"),
			},
		},
		Checks: []store.Check{
			{Name: "cell_size", Value: 1, Bound: 4, Verdict: store.OK, Text: "fine"},
			{Name: "batches", Value: 7, Bound: 10, Verdict: store.Warn, Text: "batches"},
			{
				Name: "steadiness", Value: math.NaN(), Bound: 6, Verdict: store.Fail,
				Text: "largest drift",
			},
		},
	}
}

// Goal: the whole table, with every kind of row. Method: a golden file, read over by hand.
func TestAnswers(t *testing.T) {
	input := &config.Case{Title: "a title"}
	input.Electrodes.Grounded.Substrate = true
	golden(t, "answers-mixed.txt", answers(mixed(), "results/mixed", input))
}

// Goal: a folder whose summary lacks results still prints. Method: an empty one, whole text.
func TestAnswersOfNothing(t *testing.T) {
	want := "    powered  grounded\n\n\nverdict: ok (0 checks)\nresults: d\n\n" + caution + "\n"
	if got := answers(&store.Summary{Verdict: store.OK}, "d", nil); got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}
