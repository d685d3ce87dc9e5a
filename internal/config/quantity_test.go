package config

import (
	"math"
	"strings"
	"testing"
)

// Goal: quantities are read to the nearest double. Method: texts and values, among them those
// where a product of doubles is off by a bit (13.56 * 1e6, 0.3 * 1e-9).
func TestQuantities(t *testing.T) {
	for _, c := range []struct {
		dim  dimension
		text string
		want float64
	}{
		{pressure(), "5 Pa", 5},
		{pressure(), "5Pa", 5},
		{pressure(), "5\u00a0Pa", 5},
		{pressure(), "5 \t Pa", 5},
		{pressure(), "+5. Pa", 5},
		{pressure(), ".5 Pa", 0.5},
		{pressure(), "05 Pa", 5},
		{pressure(), "5e-1Pa", 0.5},
		{pressure(), "5E+1 Pa", 50},
		{pressure(), "-3 Pa", -3},
		{pressure(), "760 Torr", 101325},
		{pressure(), "1 atm", 101325},
		{pressure(), "37.5 mTorr", 4.9995888157894735},
		{pressure(), "0.05 mbar", 5},
		{frequency(), "13.56 MHz", 13.56e6},
		{frequency(), "2.45 GHz", 2.45e9},
		{speed(), "0.3 nm/s", 0.3e-9},
		{speed(), "6 nm/min", 1e-10},
		{speed(), "3.6 um/h", 1e-9},
		{speed(), "3 Angstrom/s", 3e-10},
		{length(), "40 mm", 0.04},
		{length(), "1 in", 0.0254},
		{angle(), "180 deg", math.Pi},
		{angle(), "-90 deg", -math.Pi / 2},
		{angle(), "0.1 rad", 0.1},
		{ratio(), "1 %", 0.01},
		{ratio(), "7%", 0.07},
		{ratio(), "100 ppm", 1e-4},
		{density(), "2.56e14 /m3", 2.56e14},
		{density(), "2.56e14/m3", 2.56e14},
		{density(), "5e22 /cm3", 5e28},
		{duration(), "10 min", 600},
		{duration(), "1.5 h", 5400},
		{gasTemperature(), "27 C", 300.15},
		{gasTemperature(), "27 degC", 300.15},
		{gasTemperature(), "-20 °C", 253.15},
		{electronTemperature(), "1 eV", 11604.518121550083},
		{voltage(), "-0 V", 0},
		{voltage(), "0e999999 V", 0},
		{voltage(), "1e-320 V", 1e-320},
		{voltage(), "1.7976931348623157e308 V", math.MaxFloat64},
		{energy(), "20 eV", 20},
	} {
		got, bad := c.dim.parse(c.text)
		if bad != nil || math.Float64bits(got) != math.Float64bits(c.want) {
			t.Errorf("%q: got %v (%v), want %v", c.text, got, bad, c.want)
		}
	}
}

// Goal: everything else is refused with the right reason. Method: a part of each message.
func TestBadQuantities(t *testing.T) {
	for text, want := range map[string]string{
		"":                             "units: Pa",
		"5":                            "units: Pa",
		"5 ":                           "units: Pa",
		" 5 Pa":                        "units: Pa",
		"5 Pa ":                        `did you mean "Pa"`,
		"Pa":                           "units: Pa",
		"Pa 5":                         "units: Pa",
		"--5 Pa":                       "units: Pa",
		". Pa":                         "units: Pa",
		"5 Pa Pa":                      "units: Pa",
		"nan Pa":                       "must be finite",
		"-Inf Pa":                      "must be finite",
		"0x10 Pa":                      "decimal digits",
		"0x1p4 Pa":                     "decimal digits",
		"1_000 Pa":                     "decimal digits",
		"1,5 Pa":                       "decimal mark",
		"1e999 Pa":                     "below 1e308",
		"-1e999 Pa":                    "below 1e308",
		"1e308 kPa":                    "below 1e308",
		"1e-999 Pa":                    "above 1e-308",
		"1e-323 mTorr":                 "above 1e-308",
		strings.Repeat("9", 65) + "Pa": "at most 64 characters",
		"5 PA":                         `did you mean "Pa"?`,
		"5 mpa":                        `did you mean "MPa" or "mPa"?`,
		"5 torr":                       `did you mean "Torr"?`,
		"5 pascals":                    `did you mean "Pa"?`,
		"5 milliTorr":                  `did you mean "mTorr"?`,
		"5 mTor":                       `did you mean "mTorr"?`,
		"5 V":                          "V measures a voltage",
		"5 °C":                         "°C measures a temperature",
		"5 furlong":                    "units: Pa",
		"٥ Pa":                         "units: Pa",
	} {
		got, bad := pressure().parse(text)
		if bad == nil {
			t.Errorf("%q: got %v, want an error", text, got)
			continue
		}
		if all := bad.want + "; " + bad.hint; !strings.Contains(all, want) {
			t.Errorf("%q: got %q, want it to say %q", text, all, want)
		}
	}
}

// factors are the units with their values in the first unit of the dimension, from the
// definitions and written independently of the table.
func factors() map[string]map[string]float64 {
	const torr = 133.32236842105263
	return map[string]map[string]float64{
		"a length": {"m": 1, "cm": 1e-2, "mm": 1e-3, "um": 1e-6, "nm": 1e-9, "in": 0.0254},
		"a pressure": {
			"Pa": 1, "hPa": 100, "kPa": 1000, "MPa": 1e6, "mPa": 1e-3, "bar": 1e5,
			"mbar": 100, "ubar": 0.1, "Torr": torr, "mTorr": torr / 1000, "atm": 101325,
		},
		"a temperature":           {"K": 1, "C": 274.15},
		"an electron temperature": {"K": 1, "eV": 11604.51812},
		"a frequency":             {"Hz": 1, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9},
		"a voltage":               {"V": 1, "mV": 1e-3, "kV": 1e3},
		"an angle":                {"rad": 1, "deg": 0.017453292519943295},
		"a ratio":                 {"%": 0.01, "ppm": 1e-6},
		"a time": {
			"s": 1, "ms": 1e-3, "us": 1e-6, "ns": 1e-9, "min": 60, "h": 3600,
			"d": 24 * 3600,
		},
		"a density": {"/m3": 1, "/cm3": 1e6},
		"a growth rate": {
			"m/s": 1, "mm/s": 1e-3, "um/s": 1e-6, "um/min": 1e-6 / 60,
			"um/h": 1e-6 / 3600, "nm/s": 1e-9, "nm/min": 1e-9 / 60, "nm/h": 1e-9 / 3600,
			"Angstrom/s": 1e-10, "Angstrom/min": 1e-10 / 60,
		},
		"an energy": {"eV": 1, "meV": 1e-3, "keV": 1e3},
		"an area":   {"m2": 1, "cm2": 1e-4, "mm2": 1e-6, "in2": 0.0254 * 0.0254},
		"a capacitance per area": {
			"F/m2": 1, "uF/m2": 1e-6, "nF/m2": 1e-9, "nF/cm2": 1e-5, "pF/cm2": 1e-8,
		},
		"a capacitance":            {"F": 1, "uF": 1e-6, "nF": 1e-9, "pF": 1e-12},
		"a resistance times area":  {"ohm m2": 1, "ohm cm2": 1e-4},
		"a resistance":             {"ohm": 1, "mohm": 1e-3},
		"an inductance times area": {"H m2": 1, "uH m2": 1e-6, "nH m2": 1e-9, "uH cm2": 1e-10},
		"an inductance":            {"H": 1, "uH": 1e-6, "nH": 1e-9},
		"a power per area":         {"W/m2": 1, "kW/m2": 1e3, "W/cm2": 1e4, "mW/cm2": 10},
		"a power":                  {"W": 1, "kW": 1e3},
		"a current density":        {"A/m2": 1, "mA/cm2": 10},
		"a current":                {"A": 1, "mA": 1e-3},
	}
}

// Goal: every entry of every unit table is right, also in its other spellings; words for hints
// are no units. Method: compare with the table above; the tolerance is the ten digits of e/k.
func TestEveryUnit(t *testing.T) {
	tables := factors()
	for _, d := range dimensions() {
		want := tables[d.name]
		if len(want) != len(d.units) {
			t.Errorf("%s: %d units, want %d", d.name, len(d.units), len(want))
		}
		if _, bad := d.parse(d.example); bad != nil {
			t.Errorf("%s: the example %q is no quantity", d.name, d.example)
		}
		for _, u := range d.units {
			for _, s := range append([]string{u.name}, u.also...) {
				got, bad := d.parse("1 " + s)
				if bad != nil || math.Abs(got/want[u.name]-1) > 1e-9 {
					t.Errorf("1 %s: got %v (%v), want %v", s, got, bad, want[u.name])
				}
			}
			for _, w := range u.words {
				_, bad := d.parse("1 " + w)
				if bad == nil || !strings.Contains(bad.hint, `"`+u.name+`"`) {
					t.Errorf("1 %s: got %v, want a hint to %s", w, bad, u.name)
				}
			}
		}
	}
	if len(tables) != len(dimensions()) {
		t.Errorf("%d dimensions, want %d", len(dimensions()), len(tables))
	}
}

// Goal: no spelling stands for two units. Method: count them in each dimension.
func TestSpellingsAreUnique(t *testing.T) {
	for _, d := range dimensions() {
		seen := map[string]bool{}
		for _, s := range d.spellings() {
			if seen[s] {
				t.Errorf("%s: %s twice", d.name, s)
			}
			seen[s] = true
		}
	}
}

// Goal: format and parse are inverse, bit for bit. Method: a generator of fixed seed over all
// doubles, and the ends.
func TestFormatRoundTrip(t *testing.T) {
	values := []float64{0, 5e-324, 1e-323, 0x1p-1022, math.MaxFloat64, 1e9, 1e-4, 0.07, 0.1, -0.29}
	state := uint64(1)
	for range 20000 {
		// Ref: G. Marsaglia, J. Stat. Softw. 8 (14), 1 (2003): xorshift.
		state ^= state << 13
		state ^= state >> 7
		state ^= state << 17
		values = append(values, math.Float64frombits(state))
		values = append(values, float64(state>>11)*0x1p-53)
	}
	checked := 0
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			continue
		}
		for _, d := range []dimension{pressure(), ratio(), electronTemperature()} {
			if d.name == "a ratio" && math.Abs(v) > 1e300 {
				continue // a hundred times as much per cent overflows
			}
			checked++
			got, bad := d.parse(d.format(v))
			if bad != nil || math.Float64bits(got) != math.Float64bits(v) {
				t.Fatalf("%v as %q: got %v (%v)", v, d.format(v), got, bad)
			}
		}
	}
	if checked < 100_000 {
		t.Errorf("only %d values were checked", checked)
	}
}

// Goal: what is not finite cannot be written as if it were sound. Method: parse refuses it.
func TestFormatNotFinite(t *testing.T) {
	for _, v := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		for _, d := range dimensions() {
			if got, bad := d.parse(d.format(v)); bad == nil {
				t.Errorf("%s %v: reads as %v", d.name, v, got)
			}
		}
	}
}

// Goal: numbers end where they should. Method: texts cut by hand.
func TestSplitNumber(t *testing.T) {
	for text, want := range map[string][2]string{
		"5 Pa":    {"5", " Pa"},
		"5eV":     {"5", "eV"},
		"5e3V":    {"5e3", "V"},
		"5e+V":    {"5", "e+V"},
		"5e-3":    {"5e-3", ""},
		"-1.5E2x": {"-1.5E2", "x"},
		".5.5":    {".5", ".5"},
		"5.":      {"5.", ""},
		".":       {"", "."},
		"+":       {"", "+"},
		"e5":      {"", "e5"},
		"1e5e5":   {"1e5", "e5"},
		"0x10":    {"0", "x10"},
		"Inf":     {"", "Inf"},
		"":        {"", ""},
	} {
		if n, rest := splitNumber(text); n != want[0] || rest != want[1] {
			t.Errorf("%q: got %q and %q, want %q", text, n, rest, want)
		}
	}
}
