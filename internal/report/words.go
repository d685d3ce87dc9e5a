package report

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"ionfall/internal/progress"
	"ionfall/internal/store"
)

// asked says what the run was asked to do. What is not here stands in the input below it.
func (r *Run) asked() []Pair {
	c := r.Case
	if c == nil {
		return nil
	}
	var gases, tones []string
	for _, g := range c.Gas.Mixture {
		gases = append(gases, fmt.Sprintf("%s %s %%", g.Gas, progress.Digits(100*g.Fraction, 3)))
	}
	for _, t := range c.Drive.Tones {
		text := fmt.Sprintf("%g V at %g MHz", t.Amplitude, t.Frequency/1e6)
		if t.Phase != 0 {
			text += fmt.Sprintf(", %.4g deg", t.Phase*degrees)
		}
		tones = append(tones, text)
	}
	list := []Pair{
		{"gas", strings.Join(gases, ", ")},
		{"pressure", fmt.Sprintf("%.5g Pa at %.4g K", c.Gas.Pressure, c.Gas.Temperature)},
		{"gap", fmt.Sprintf("%.5g mm", millimetres*c.Gap)},
		{"substrate", strings.Join(r.Substrates(), " and ") + " electrode"},
		{"asked-for error", fmt.Sprintf("%.3g %% of the ion energy, %.3g %% of the ion flux",
			100*c.Accuracy.IonEnergy, 100*c.Accuracy.IonFlux)},
	}
	if len(tones) > 0 {
		list = slices.Insert(list, 3, Pair{"drive (amplitude)", strings.Join(tones, " + ")})
	}
	return list
}

// headlines are the answers that the page opens with.
func (r *Run) headlines() []Headline {
	var list []Headline
	for _, e := range r.Substrates() {
		for _, h := range []line{
			{"mean ion energy", "ion_mean_energy_eV." + e + ".all"},
			{"ion flux", "ion_flux_m2ps." + e + ".all"},
			{"ion energy flux", "ion_energy_flux_Wpm2." + e + ".all"},
		} {
			v, ok := r.Summary.Lookup(h.path)
			if !ok {
				continue
			}
			list = append(list, Headline{h.label, estimate(v.Value, v.SE, v.Unit), e})
		}
	}
	return list
}

// judgement says the verdict in words.
func (r *Run) judgement() string {
	failed, doubtful := 0, 0
	for _, c := range r.Summary.Checks {
		switch c.Verdict {
		case store.Fail:
			failed++
		case store.Warn:
			doubtful++
		}
	}
	n := len(r.Summary.Checks)
	switch r.Verdict() {
	case store.OK:
		return fmt.Sprintf("All %d checks of the numerics hold.", n)
	case store.Warn:
		return fmt.Sprintf("Use with care: %d of %d checks are beyond what is usual.", doubtful, n)
	case store.Fail:
		return fmt.Sprintf("Not to be used: %d of %d checks failed.", failed, n)
	}
	return "The run is not finished: there is no verdict yet."
}

// flatPairs lists nested values under dotted names.
func flatPairs(prefix string, m map[string]any) []Pair {
	var list []Pair
	for _, key := range slices.Sorted(maps.Keys(m)) {
		switch v := m[key].(type) {
		case map[string]any:
			list = append(list, flatPairs(prefix+key+".", v)...)
		case []any:
			var parts []string
			for _, p := range v {
				parts = append(parts, fmt.Sprint(p))
			}
			list = append(list, Pair{prefix + key, strings.Join(parts, "; ")})
		case float64:
			list = append(list, Pair{prefix + key, plainNumber(v)})
		default:
			list = append(list, Pair{prefix + key, fmt.Sprint(v)})
		}
	}
	return list
}

// plainNumber writes counts in full and other numbers with six digits.
func plainNumber(v float64) string {
	if v == math.Trunc(v) && math.Abs(v) < 1e15 {
		return fmt.Sprintf("%.0f", v)
	}
	return fmt.Sprintf("%.6g", v)
}
