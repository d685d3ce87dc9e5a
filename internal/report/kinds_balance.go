package report

import (
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"ionfall/internal/config"
	"ionfall/internal/store"
)

func balanceKinds() []Kind {
	return []Kind{
		{
			ID: "power-balance", Title: "Power balance", group: groupBalance,
			About: "Power from the drive, and what each kind of particle takes from the field.",
			build: powerBalance,
		},
		{
			ID: "particle-balance", Title: "Ion balance", group: groupBalance,
			About: "Ions made in the gap, by the integral of the ionization profile, and ions " +
				"lost to the electrodes. In a steady discharge between plates both are the same, " +
				"but for ions that recombine or change sign in the gap. The error of " +
				"the first adds those of all points, as if they erred together.",
			build: particleBalance,
		},
	}
}

func powerBalance(k Kind, runs []*Run, _ Select) ([]Figure, error) {
	f := Figure{
		ID: k.ID, Title: k.Title, Runs: marks(runs),
		Y: Axis{Name: "power_Wpm2", Label: "power per area", Unit: "W/m2"},
	}
	for i, r := range runs {
		powers, ok := r.Summary.Results["power_Wpm2"].(map[string]any)
		if !ok {
			continue
		}
		if v, ok := powers["total"].(store.Value); ok {
			f.addBar("from the drive", i, v.Value, v.SE)
		}
		for _, name := range sortedKeys(powers) {
			if v, ok := powers[name].(store.Value); ok && name != "total" {
				f.addBar("to "+name, i, v.Value, v.SE)
			}
		}
	}
	return f.barsDone(), nil
}

func particleBalance(k Kind, runs []*Run, _ Select) ([]Figure, error) {
	f := Figure{
		ID: k.ID, Title: k.Title, Runs: marks(runs),
		Y: Axis{Name: "ions_m2ps", Label: "ions per area and time", Unit: "1/(m2 s)"},
	}
	for i, r := range runs {
		if r.Case != nil && r.Case.Geometry.Shape != config.Planar {
			continue // the areas of shells differ
		}
		made, se, ok, err := ionsMade(r)
		if err != nil {
			return nil, err
		}
		if ok {
			f.addBar("made in the gap", i, made, se)
		}
		lost, lostSE, walls := 0.0, 0.0, 0
		for _, electrode := range electrodes {
			v, ok := r.Summary.Lookup("ion_flux_m2ps." + electrode + ".all")
			if !ok {
				continue
			}
			f.addBar("lost to the "+electrode+" electrode", i, v.Value, v.SE)
			lost, lostSE, walls = lost+v.Value, math.Hypot(lostSE, v.SE), walls+1
		}
		if walls == len(electrodes) {
			f.addBar("lost in all", i, lost, lostSE)
		}
	}
	return f.barsDone(), nil
}

// ionsMade integrates the ionization profile over the gap.
func ionsMade(r *Run) (sum, se float64, ok bool, err error) {
	t, err := tableOf(r, "profiles")
	if t == nil || err != nil {
		return 0, 0, false, err
	}
	if _, has := t.Column("ionization_rate_m3ps"); !has {
		return 0, 0, false, nil
	}
	rows := allRows(t)
	x, err := pick(t, "x_m", rows, 1)
	if err != nil {
		return 0, 0, false, err
	}
	rate, err := pick(t, "ionization_rate_m3ps", rows, 1)
	if err != nil {
		return 0, 0, false, err
	}
	errs := errorsOf(t, "ionization_rate_m3ps", rows, 1)
	for i := 1; i < len(x); i++ {
		step := (x[i] - x[i-1]) / 2
		sum += step * (rate[i] + rate[i-1])
		if errs != nil {
			se += step * (errs[i] + errs[i-1])
		}
	}
	return sum, se, len(x) > 1, nil
}

func (f *Figure) addBar(label string, run int, value, se float64) {
	f.Bars = append(f.Bars, Bar{label, run, value, se, Numbers{value, se}})
}

// barsDone writes the description of a figure of bars; one without bars is no figure.
func (f *Figure) barsDone() []Figure {
	if len(f.Bars) == 0 {
		return nil
	}
	var texts []string
	for _, b := range f.Bars {
		texts = append(texts, fmt.Sprintf("%s %s %s", f.Name(b.Label, b.Run), short(b.Value),
			f.Y.Unit))
	}
	f.Alt = f.Title + ": " + strings.Join(texts, "; ") + "."
	return []Figure{*f}
}

func sortedKeys(m map[string]any) []string { return slices.Sorted(maps.Keys(m)) }
