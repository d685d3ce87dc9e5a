package config

import (
	"errors"
	"strings"
	"testing"

	"ionfall/internal/inputerr"
)

// limit is a key with values at its ends that are allowed, and just beyond them.
type limit struct {
	key       string
	good, bad []string
}

func limits() []limit {
	return []limit{
		{"gap", []string{"1 mm", "1 m"}, []string{"0.999 mm", "1.0001 m", "0 m", "-1 m"}},
		{
			"gas.pressure",
			[]string{"1e-300 Pa", "1e5 Pa", "1 bar"},
			[]string{"0 Pa", "-1 Pa", "100001 Pa"},
		},
		{
			"gas.temperature",
			[]string{"50 K", "3000 K", "-223.15 C"},
			[]string{"49.9 K", "3001 K", "-224 C", "-3 K"},
		},
		{
			"gas.mixture",
			[]string{
				"{A: 1}", "{A: 0.5, B: 0.5}", "{A: 90 %, B: 0.1}",
				"{A: 0.333333, B: 0.333333, C: 0.333333}", "{A: 999999 ppm}", "{A: 1, B: 1e-6}",
			},
			[]string{
				"{}", "{A: 0}", "{A: 1.0001}", "{A: 1, B: 2e-6}", "{A: 0.999998}",
				"{A: 1, B: -1, C: 1}", "{1: 1}", "{true: 1}", "{A: 1, A: 0}", "[A]", "A",
			},
		},
		{"drive.bias", []string{"-100 kV", "100 kV", "-0 V"}, []string{"-100001 V", "101 kV"}},
		{"drive.tones.0.frequency", []string{"1e-9 Hz", "10 GHz"}, []string{"0 Hz", "10.1 GHz"}},
		{"drive.tones.0.amplitude", []string{"1e-9 V", "100 kV"}, []string{"101 kV", "-1 V", "-0 V"}},
		{"drive.tones.0.phase", []string{"-3600 deg", "3600 deg"}, []string{"3601 deg", "63 rad"}},
		{"electrodes.powered.ion_secondary_yield", []string{"0", "10"}, []string{"-0.1", "10.1"}},
		{
			"electrodes.powered.secondary_electron_energy",
			[]string{"0 eV", "1 keV"},
			[]string{"-1 eV", "1001 eV"},
		},
		{
			"electrodes.powered.electron_reflection",
			[]string{"0", "0.999", "99 %"},
			[]string{"1", "100 %", "-0.1", "-1 %"},
		},
		{"accuracy.ion_energy", []string{"0.01 %", "50 %"}, []string{"0.009 %", "51 %", "0.5"}},
		{"accuracy.ion_flux", []string{"100 ppm", "50 %"}, []string{"99 ppm", "0 %"}},
		{"budget.cpu", []string{"1 s", "365 d"}, []string{"0 s", "366 d"}},
		{"budget.periods", []string{"1", "1000000000"}, []string{"0", "1000000001", "auto"}},
		{"initial.density", []string{"1e-9 /m3", "1e24 /m3"}, []string{"0 /m3", "1.1e24 /m3"}},
		{"initial.electron_temperature", []string{"50 K", "1e7 K"}, []string{"49 K", "1 keV"}},
		{
			"ion_energy_thresholds",
			[]string{"[1 meV, 1000 keV]", "[30 eV, 20 eV]"},
			[]string{"[]", "[0 eV]", "[-1 eV]", "20 eV", "[" + strings.Repeat("1 eV,", 21) + "]"},
		},
		{"seed", []string{"0", "18446744073709551615"}, []string{
			"-1", "18446744073709551616",
			"0.5", "010", "0x10", "1_0", "'1'",
		}},
		{
			"numerics.cells",
			[]string{"8", "16384", "auto", "1e3"},
			[]string{"7", "1", "0", "16385", "99999999999999999999", "8.5", "many"},
		},
		{"numerics.steps_per_period", []string{"20", "1000000", "auto"}, []string{"19", "1000001"}},
		{"numerics.particles_per_cell", []string{"1", "1000000"}, []string{"0", "1000001"}},
		{"numerics.ion_substeps", []string{"1", "1000"}, []string{"0", "1001"}},
		{"numerics.periods", []string{"1", "1000000000"}, []string{"0", "1000000001"}},
		{"numerics.scheme", []string{"auto", "momentum_conserving"}, []string{"", "Auto", "none"}},
		{"numerics.density_extrapolation", []string{"auto", "off"}, []string{"on", "false"}},
	}
}

// with is the shortest input with one key set to a text.
func with(key, text string) string {
	// Each key is written once, so what the key replaces is taken out first.
	values := map[string]string{
		"gap": "40 mm", "gas.pressure": "5 Pa", "gas.mixture": "{Ar: 1}",
		"drive.tones.0.frequency": "13.56 MHz", "drive.tones.0.amplitude": "250 V",
	}
	values[key] = text
	section := func(name string) string {
		var items []string
		for k, v := range values {
			if rest, ok := strings.CutPrefix(k, name+"."); ok && !strings.Contains(rest, ".") {
				items = append(items, rest+": "+v)
			}
		}
		return "{" + strings.Join(items, ", ") + "}"
	}
	values["drive.tones"] = "[" + section("drive.tones.0") + "]"
	values["electrodes.powered"] = section("electrodes.powered")
	var b strings.Builder
	for _, name := range []string{
		"gas", "drive", "electrodes", "accuracy", "budget", "initial",
		"numerics",
	} {
		b.WriteString(name + ": " + section(name) + "\n")
	}
	for _, name := range []string{"gap", "ion_energy_thresholds", "seed"} {
		if v, ok := values[name]; ok {
			b.WriteString(name + ": " + v + "\n")
		}
	}
	return b.String()
}

// Goal: every limit is where it is said to be, and a value beyond it is reported under its key and
// nothing else is. Method: values on both sides of each end.
func TestLimits(t *testing.T) {
	for _, l := range limits() {
		for _, text := range l.good {
			if _, err := Parse("x", []byte(with(l.key, text))); err != nil {
				t.Errorf("%s: %s: %v", l.key, text, err)
			}
		}
		for _, text := range l.bad {
			_, err := Parse("x", []byte(with(l.key, text)))
			var list inputerr.List
			if !errors.As(err, &list) {
				t.Errorf("%s: %s: accepted", l.key, text)
				continue
			}
			for _, e := range list {
				if !strings.HasPrefix(e.Key, l.key) || e.Line == 0 {
					t.Errorf("%s: %s: error %v elsewhere", l.key, text, e)
				}
			}
		}
	}
}

// Goal: rules between values hold at their edges. Method: inputs on both sides.
func TestRulesBetweenValues(t *testing.T) {
	for _, c := range [][2]string{
		{"", "numerics: {steps_per_period: 400, ion_substeps: 400}"},
		{"numerics.ion_substeps", "numerics: {steps_per_period: 400, ion_substeps: 401}"},
		{"numerics.ion_substeps", "numerics: {steps_per_period: 400, ion_substeps: 3}"},
		{"", "numerics: {ion_substeps: 7}"},
		{"", "numerics: {periods: 5, average_periods: 5}"},
		{"numerics.average_periods", "numerics: {periods: 5, average_periods: 6}"},
		{"numerics.average_periods", "numerics: {periods: auto, average_periods: 6}"},
		{"", "numerics: {average_periods: auto}"},
		{"", "electrodes: {powered: {substrate: true}}"},
		{"electrodes", "electrodes: {grounded: {substrate: false}}"},
		{"film.atom_density", "film: {growth_rate: 1 nm/s}"},
		{"film.growth_rate", "film: {growth_rate: 0 nm/s, atom_density: 5e22 /cm3}"},
		{"", "film: {growth_rate: 1 mm/s, atom_density: 1e24 /cm3}"},
		{"film.atom_density", "film: {growth_rate: 1 mm/s, atom_density: 2e24 /cm3}"},
		{"", "title: " + strings.Repeat("é", 200)},
		{"title", "title: " + strings.Repeat("é", 201)},
		{"title", `title: "a\nb"`},
		{"", `electrodes: {powered: {substrate: true}, grounded: {}}`},
		{"electrodes.powered.substrate", `electrodes: {powered: {substrate: on}, grounded: {}}`},
		{"", "electrodes:\n  powered: {substrate: true}\n  grounded: {substrate: false}"},
	} {
		key, extra := c[0], c[1]
		_, err := Parse("x", []byte(minimal+extra+"\n"))
		var bad *inputerr.Error
		if found := errors.As(err, &bad); found != (key != "") || (found && bad.Key != key) {
			t.Errorf("%s: got %v, want an error of %q", extra, err, key)
		}
	}
}
