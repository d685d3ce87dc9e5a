package report

import (
	"cmp"
	"fmt"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"

	"ionfall/internal/progress"
	"ionfall/internal/store"
)

// Cell is a value of the table of answers.
type Cell struct {
	Text   string
	Failed bool // of a run that is not to be used
}

// Row is a line of the table of answers.
type Row struct {
	Label string
	Cells []Cell
}

// Head is the title of a column.
type Head struct {
	Run, Verdict, Electrode string
	Substrate               bool
}

// Answers is the table of results: a column for each electrode of each run.
type Answers struct {
	Heads []Head
	Rows  []Row
}

// column is what a column of the table is about.
type column struct {
	run       *Run
	electrode string
}

// NewAnswers compares runs. With several only the substrates are shown.
func NewAnswers(runs []*Run) Answers {
	var columns []column
	var a Answers
	for _, r := range runs {
		for _, e := range electrodes {
			substrate := slices.Contains(r.Substrates(), e)
			if len(runs) > 1 && !substrate {
				continue
			}
			columns = append(columns, column{r, e})
			a.Heads = append(a.Heads, Head{r.Name, r.Verdict(), e, substrate})
		}
	}
	for _, l := range resultLines(runs) {
		if row, known := a.row(l, columns); known {
			a.Rows = append(a.Rows, row)
		}
	}
	return a
}

// line is a result for the table; %s in the path is the electrode.
type line struct{ label, path string }

func (a *Answers) row(l line, columns []column) (row Row, known bool) {
	row = Row{Label: l.label}
	for _, c := range columns {
		v, ok := c.run.Summary.Lookup(strings.Replace(l.path, "%s", c.electrode, 1))
		cell := Cell{Text: "–"}
		if ok {
			known = true
			cell = Cell{estimate(v.Value, v.SE, v.Unit), c.run.Verdict() == store.Fail}
		}
		row.Cells = append(row.Cells, cell)
	}
	return row, known
}

// resultLines are the results of the runs that the table shows, in its order.
func resultLines(runs []*Run) []line {
	var list []line
	species := speciesOf(runs)
	for _, name := range species {
		label := name + ": "
		if name == "all" {
			label = "all ions: "
		}
		list = append(list,
			line{label + "mean energy", "ion_mean_energy_eV.%s." + name},
			line{label + "flux", "ion_flux_m2ps.%s." + name},
			line{label + "energy flux", "ion_energy_flux_Wpm2.%s." + name})
		if name == "all" {
			list = append(list,
				line{"5 % arrive below", "ion_energy_percentile_eV.%s.p05"},
				line{"50 % arrive below", "ion_energy_percentile_eV.%s.p50"},
				line{"95 % arrive below", "ion_energy_percentile_eV.%s.p95"})
		}
		for _, key := range thresholdKeys(runs, name) {
			list = append(list, line{
				label + "part above " + thresholdText(key),
				"ion_fraction_above.%s." + name + "." + key,
			})
		}
	}
	for _, name := range neutralsOf(runs) {
		label := strings.Replace(name, "fast_", "fast ", 1) + ": "
		if name == "all" {
			label = "fast neutrals: "
		}
		list = append(list,
			line{label + "mean energy", "neutral_mean_energy_eV.%s." + name},
			line{label + "flux", "neutral_flux_m2ps.%s." + name},
			line{label + "energy flux", "neutral_energy_flux_Wpm2.%s." + name})
	}
	list = append(list,
		line{"ions and fast neutrals: energy flux", "energetic_energy_flux_Wpm2.%s"},
		line{"film: ion energy per atom", "film_energy_per_atom_eV.%s"},
		line{"film: ions per atom", "film_ions_per_atom.%s"},
		line{"sheath width", "sheath_width_m.%s"},
		line{"plasma potential", "plasma_potential_V"},
		line{"plasma potential, least in a period", "plasma_potential_least_V"},
		line{"plasma potential, largest in a period", "plasma_potential_largest_V"},
		line{"self-bias", "self_bias_V"},
		line{"voltage, peak to peak", "voltage_peak_to_peak_V"},
		line{"voltage, sum of amplitudes found", "drive_amplitude_V"},
		line{"current, root mean square", "current_rms_Apm2"},
		line{"electron density, centre", "electron_density_center_m3"},
		line{"electron temperature, centre", "electron_temperature_center_eV"},
		line{"power from the drive", "power_Wpm2.total"},
		line{"power to electrons, powered sheath", "electron_power_Wpm2.sheath_powered"},
		line{"power to electrons, bulk", "electron_power_Wpm2.bulk"},
		line{"power to electrons, grounded sheath", "electron_power_Wpm2.sheath_grounded"})
	return list
}

// speciesOf are "all" and, where there is more than one, every kind that arrives: fast neutrals
// are among them.
func speciesOf(runs []*Run) []string {
	names := map[string]bool{}
	for _, r := range runs {
		for _, e := range electrodes {
			for _, key := range []string{"ion_mean_energy_eV", "ion_flux_m2ps"} {
				for name := range below(r.Summary.Results, key, e) {
					names[name] = true
				}
			}
		}
	}
	if len(names) <= 2 {
		return []string{"all"}
	}
	delete(names, "all")
	return append([]string{"all"}, slices.Sorted(maps.Keys(names))...)
}

// neutralsOf are "all" and the kinds of fast neutrals, where they were followed.
func neutralsOf(runs []*Run) []string {
	names := map[string]bool{}
	for _, r := range runs {
		for _, e := range electrodes {
			for name := range below(r.Summary.Results, "neutral_flux_m2ps", e) {
				names[name] = true
			}
		}
	}
	if len(names) == 0 {
		return nil
	}
	delete(names, "all")
	return append([]string{"all"}, slices.Sorted(maps.Keys(names))...)
}

// below is the part of the results under some keys, nil if there is none.
func below(m map[string]any, path ...string) map[string]any {
	for _, key := range path {
		m, _ = m[key].(map[string]any) // a missing one has no keys
	}
	return m
}

func thresholdKeys(runs []*Run, species string) []string {
	keys := map[string]bool{}
	for _, r := range runs {
		for _, e := range electrodes {
			for key := range below(r.Summary.Results, "ion_fraction_above", e, species) {
				keys[key] = true
			}
		}
	}
	return slices.SortedFunc(maps.Keys(keys), func(a, b string) int {
		return cmp.Compare(thresholdEV(a), thresholdEV(b))
	})
}

// thresholdText is "12.5 eV" for the key 12p5eV.
func thresholdText(key string) string {
	return strings.ReplaceAll(strings.TrimSuffix(key, "eV"), "p", ".") + " eV"
}

func thresholdEV(key string) float64 {
	v, err := strconv.ParseFloat(strings.TrimSuffix(thresholdText(key), " eV"), 64)
	if err != nil {
		return math.Inf(1) // it sorts last, and is shown as it is
	}
	return v
}

// estimate is a value with its error and unit, as the page writes it.
func estimate(value, se float64, unit string) string {
	if unit == "m" {
		value, se, unit = millimetres*value, millimetres*se, "mm"
	}
	return strings.TrimSpace(typeset(progress.WithError(value, se)) + " " + prettyUnit(unit))
}

// typeset turns the signs of a terminal into those of print.
func typeset(number string) string {
	mantissa, exponent, ok := strings.Cut(number, "e")
	if n, err := strconv.Atoi(exponent); ok && err == nil {
		number = fmt.Sprintf("%s × 10%s", mantissa, superscript(n))
	}
	return strings.NewReplacer("+-", "±", "-", "\u2212").Replace(number)
}
