package main

import (
	"cmp"
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"ionfall/internal/config"
	"ionfall/internal/progress"
	"ionfall/internal/store"
)

// caution goes under every table of answers.
const caution = "Simulated values are no interlock settings; RF voltage burns; for gases such as " +
	"silane and hydrogen\nlocal codes and licensed practice decide."

// answers is the table that a run ends with: what arrives at each electrode, the plasma, and
// whether to believe it. input may be nil.
func answers(s *store.Summary, dir string, input *config.Case) string {
	var b strings.Builder
	if input != nil && input.Title != "" {
		b.WriteString(input.Title + "\n\n")
	}
	t := sheet{summary: s}
	t.electrodes(input)
	t.plasma()
	b.WriteString(align(t.rows))
	b.WriteString("\n" + verdictText(s))
	fmt.Fprintf(&b, "results: %s\n\n%s\n", dir, caution)
	return b.String()
}

// sheet collects the rows of the table: label, unit, a cell for each electrode.
type sheet struct {
	summary *store.Summary
	rows    [][]string
}

// add makes a row of the results at the paths; a row of which nothing is known is left out.
func (t *sheet) add(label string, paths ...string) {
	var cells []string
	unit, found := "", false
	for _, path := range paths {
		v, ok := t.summary.Lookup(path)
		if !ok {
			cells = append(cells, "")
			continue
		}
		if v.Unit == "m" { // for people, the widths of sheaths are in mm
			v = store.Value{Value: 1e3 * v.Value, SE: 1e3 * v.SE, Unit: "mm"}
		}
		unit, found = v.Unit, true
		cells = append(cells, progress.WithError(v.Value, v.SE))
	}
	if found {
		t.rows = append(t.rows, append([]string{label, unit}, cells...))
	}
}

// at adds a row with a cell for each electrode; %s in the path stands for it.
func (t *sheet) at(label, path string) {
	t.add(label, strings.Replace(path, "%s", "powered", 1),
		strings.Replace(path, "%s", "grounded", 1))
}

func (t *sheet) electrodes(input *config.Case) {
	head := []string{"", "", "powered", "grounded"}
	if input != nil {
		for i, e := range []config.Electrode{input.Electrodes.Powered, input.Electrodes.Grounded} {
			if e.Substrate {
				head[2+i] += " (substrate)"
			}
		}
	}
	t.rows = append(t.rows, head)
	species := t.species()
	for _, name := range species {
		label := name + ": "
		if name == "all" {
			label = "ions: "
		}
		t.at(label+"mean energy", "ion_mean_energy_eV.%s."+name)
		t.at(label+"flux", "ion_flux_m2ps.%s."+name)
		t.at(label+"energy flux", "ion_energy_flux_Wpm2.%s."+name)
		if name == "all" {
			t.at("5 % arrive below", "ion_energy_percentile_eV.%s.p05")
			t.at("50 % arrive below", "ion_energy_percentile_eV.%s.p50")
			t.at("95 % arrive below", "ion_energy_percentile_eV.%s.p95")
		}
		for _, key := range t.thresholds(name) {
			t.at(label+"part above "+thresholdText(key),
				"ion_fraction_above.%s."+name+"."+key)
		}
	}
	t.neutrals()
	t.at("film: ion energy per atom", "film_energy_per_atom_eV.%s")
	t.at("film: ions per atom", "film_ions_per_atom.%s")
	t.at("sheath width", "sheath_width_m.%s")
}

// neutrals are the rows of fast neutrals, where they were followed.
func (t *sheet) neutrals() {
	names := t.keys("neutral_mean_energy_eV", "grounded")
	for _, name := range names {
		label := name + ": "
		if name == "all" {
			label = "fast neutrals: "
		} else if len(names) <= 2 {
			continue // the only one
		}
		t.at(label+"mean energy", "neutral_mean_energy_eV.%s."+name)
		t.at(label+"flux", "neutral_flux_m2ps.%s."+name)
		t.at(label+"energy flux", "neutral_energy_flux_Wpm2.%s."+name)
	}
	t.at("ions and fast neutrals: energy flux", "energetic_energy_flux_Wpm2.%s")
}

func (t *sheet) plasma() {
	t.rows = append(t.rows, []string{""})
	t.add("plasma potential", "plasma_potential_V")
	t.add("self-bias", "self_bias_V")
	t.add("voltage, peak to peak", "voltage_peak_to_peak_V")
	t.add("voltage, sum of amplitudes found", "drive_amplitude_V")
	t.add("current, root mean square", "current_rms_Apm2")
	t.add("electron density, centre", "electron_density_center_m3")
	t.add("electron density, peak", "electron_density_peak_m3")
	t.add("electron temperature, centre", "electron_temperature_center_eV")
	t.add("power, from the drive", "power_Wpm2.total")
	t.add("power, to the electrons", "power_Wpm2.electron")
	for _, name := range t.keys("power_Wpm2") {
		if name != "total" && name != "electron" {
			t.add("power, to "+name, "power_Wpm2."+name)
		}
	}
}

// species are "all" and, if there is more than one, each.
func (t *sheet) species() []string {
	list := []string{"all"}
	keys := t.keys("ion_mean_energy_eV", "grounded")
	if len(keys) <= 2 {
		return list // all, and the only one
	}
	for _, k := range keys {
		if k != "all" {
			list = append(list, k)
		}
	}
	return list
}

// keys are the names below a place in the results, sorted.
func (t *sheet) keys(path ...string) []string {
	m := t.summary.Results
	for _, key := range path {
		m, _ = m[key].(map[string]any) // a missing one has no keys
	}
	return slices.Sorted(maps.Keys(m))
}

// thresholds are the keys of the energies above which the fraction is known, in their order.
func (t *sheet) thresholds(species string) []string {
	keys := t.keys("ion_fraction_above", "grounded", species)
	slices.SortStableFunc(keys, func(a, b string) int {
		return cmp.Compare(thresholdEV(a), thresholdEV(b))
	})
	return keys
}

// thresholdText is "12.5 eV" for the key 12p5eV or 12p5_eV: a point would divide the path.
func thresholdText(key string) string {
	number := strings.TrimSuffix(strings.TrimSuffix(key, "eV"), "_")
	return strings.ReplaceAll(number, "p", ".") + " eV"
}

func thresholdEV(key string) float64 {
	v, err := strconv.ParseFloat(strings.TrimSuffix(thresholdText(key), " eV"), 64)
	if err != nil {
		return 0 // it sorts first, and is shown as it is
	}
	return v
}

// verdictText is the verdict, with every check that is not ok.
func verdictText(s *store.Summary) string {
	rows := [][]string{}
	for _, c := range s.Checks {
		if c.Verdict == store.OK {
			continue
		}
		rows = append(rows, []string{
			"  " + c.Verdict, c.Name, progress.Digits(c.Value, 3),
			"bound " + progress.Digits(c.Bound, 3), c.Text,
		})
	}
	// Failures first.
	slices.SortStableFunc(rows, func(a, b []string) int { return cmp.Compare(a[0], b[0]) })
	head := fmt.Sprintf("verdict: %s (%d checks)\n", s.Verdict, len(s.Checks))
	return head + align(rows)
}

// align writes rows as columns with two blanks between them.
func align(rows [][]string) string {
	var widths []int
	for _, row := range rows {
		for i, cell := range row {
			if i == len(widths) {
				widths = append(widths, 0)
			}
			widths[i] = max(widths[i], utf8.RuneCountInString(cell))
		}
	}
	var b strings.Builder
	for _, row := range rows {
		var line strings.Builder
		for i, cell := range row {
			line.WriteString(cell)
			blanks := widths[i] - utf8.RuneCountInString(cell) + 2
			line.WriteString(strings.Repeat(" ", blanks))
		}
		b.WriteString(strings.TrimRight(line.String(), " ") + "\n")
	}
	return b.String()
}
