package config

import "strings"

// unit is one unit of a dimension: SI value = number * scale / per + offset.
type unit struct {
	name string
	// scale, per and offset are exact decimals; empty is 1, 1 and 0.
	scale, per, offset string
	// also are other accepted spellings.
	also []string
	// words are names that are not accepted, but understood well enough to give a hint.
	words []string
}

// Two characters stand for micro (U+00B5, U+03BC) and two for the angstrom (U+00C5, U+212B); they
// look alike, so the tables write them as numbers.

// dimension is a kind of quantity. The first unit is the one a Case holds and Resolved writes.
type dimension struct {
	// name with its article, as in "want a pressure".
	name    string
	example string
	units   []unit
}

// names are the units for a message: the plain names only.
func (d dimension) names() string {
	var names []string
	for _, u := range d.units {
		names = append(names, u.name)
	}
	return strings.Join(names, ", ")
}

// spellings are all accepted texts of the units.
func (d dimension) spellings() []string {
	var all []string
	for _, u := range d.units {
		all = append(append(all, u.name), u.also...)
	}
	return all
}

// find is the unit that is spelled so.
func (d dimension) find(text string) (unit, bool) {
	for _, u := range d.units {
		if u.name == text {
			return u, true
		}
		for _, s := range u.also {
			if s == text {
				return u, true
			}
		}
	}
	return unit{}, false
}

// dimensions are all of them, to say that mm is a length where a pressure is wanted.
func dimensions() []dimension {
	return []dimension{
		length(), pressure(), gasTemperature(), electronTemperature(), frequency(), voltage(),
		angle(), ratio(), duration(), density(), speed(), energy(), area(), capacitancePerArea(),
		capacitance(), resistanceTimesArea(), resistance(), inductanceTimesArea(), inductance(),
		powerPerArea(), power(), currentPerArea(), current(),
	}
}

func length() dimension {
	return dimension{"a length", "40 mm", []unit{
		{name: "m", words: []string{"metre", "meter", "metres", "meters"}},
		{name: "cm", scale: "1e-2"},
		{name: "mm", scale: "1e-3", words: []string{"millimetre", "millimeter"}},
		{
			name: "um", scale: "1e-6", also: []string{"\u00b5m", "\u03bcm"},
			words: []string{"micron"},
		},
		{name: "nm", scale: "1e-9"},
		{name: "in", scale: "25.4e-3", words: []string{"inch", "inches"}},
	}}
}

// The torr is 101325/760 Pa and the atmosphere 101325 Pa by definition.
func pressure() dimension {
	return dimension{"a pressure", "5 Pa", []unit{
		{name: "Pa", words: []string{"pascal", "pascals"}},
		{name: "hPa", scale: "1e2"},
		{name: "kPa", scale: "1e3"},
		{name: "MPa", scale: "1e6"},
		{name: "mPa", scale: "1e-3"},
		{name: "bar", scale: "1e5"},
		{name: "mbar", scale: "1e2", words: []string{"millibar"}},
		{
			name: "ubar", scale: "1e-1", also: []string{"\u00b5bar", "\u03bcbar"},
			words: []string{"microbar"},
		},
		{name: "Torr", scale: "101325", per: "760"},
		{name: "mTorr", scale: "101.325", per: "760", words: []string{"millitorr"}},
		{name: "atm", scale: "101325", words: []string{"atmosphere", "atmospheres"}},
	}}
}

func gasTemperature() dimension {
	return dimension{"a temperature", "300 K", []unit{
		{name: "K", words: []string{"kelvin"}},
		{
			name: "C", offset: "273.15", also: []string{"degC", "°C", "℃"},
			words: []string{"celsius", "centigrade"},
		},
	}}
}

// One eV is e/k kelvin with the exact values of the SI: e = 1.602176634e-19 C,
// k = 1.380649e-23 J/K.
func electronTemperature() dimension {
	return dimension{"an electron temperature", "3 eV", []unit{
		{name: "K", words: []string{"kelvin"}},
		{
			name: "eV", scale: "1.602176634e4", per: "1.380649",
			words: []string{"electronvolt", "electron volt"},
		},
	}}
}

func frequency() dimension {
	return dimension{"a frequency", "13.56 MHz", []unit{
		{name: "Hz", words: []string{"hertz"}},
		{name: "kHz", scale: "1e3", words: []string{"kilohertz"}},
		{name: "MHz", scale: "1e6", words: []string{"megahertz"}},
		{name: "GHz", scale: "1e9", words: []string{"gigahertz"}},
	}}
}

func voltage() dimension {
	return dimension{"a voltage", "250 V", []unit{
		{name: "V", words: []string{"volt", "volts"}},
		{name: "mV", scale: "1e-3", words: []string{"millivolt"}},
		{name: "kV", scale: "1e3", words: []string{"kilovolt"}},
	}}
}

func angle() dimension {
	const pi = "3.14159265358979323846264338327950288"
	return dimension{"an angle", "90 deg", []unit{
		{name: "rad", words: []string{"radian", "radians"}},
		{
			name: "deg", scale: pi, per: "180", also: []string{"°"},
			words: []string{"degree", "degrees"},
		},
	}}
}

func ratio() dimension {
	return dimension{"a ratio", "1 %", []unit{
		{name: "%", scale: "1e-2", words: []string{"percent", "per cent", "pct"}},
		{name: "ppm", scale: "1e-6"},
	}}
}

func duration() dimension {
	return dimension{"a time", "10 min", []unit{
		{name: "s", words: []string{"sec", "second", "seconds"}},
		{name: "ms", scale: "1e-3"},
		{name: "us", scale: "1e-6", also: []string{"\u00b5s", "\u03bcs"}},
		{name: "ns", scale: "1e-9"},
		{name: "min", scale: "60", words: []string{"minute", "minutes"}},
		{name: "h", scale: "3600", words: []string{"hr", "hour", "hours"}},
		{name: "d", scale: "86400", words: []string{"day", "days"}},
	}}
}

func density() dimension {
	return dimension{"a density", "2.56e14 /m3", []unit{
		{
			name: "/m3", also: []string{"1/m3", "m-3", "m^-3", "/m^3", "1/m^3", "m⁻³", "/m³", "1/m³"},
			words: []string{"per m3"},
		},
		{name: "/cm3", scale: "1e6", also: []string{
			"1/cm3", "cm-3", "cm^-3", "/cm^3", "1/cm^3",
			"cm⁻³", "/cm³", "1/cm³",
		}, words: []string{"per cm3", "/cc"}},
	}}
}

func speed() dimension {
	return dimension{"a growth rate", "0.3 nm/s", []unit{
		{name: "m/s"},
		{name: "mm/s", scale: "1e-3"},
		{name: "um/s", scale: "1e-6", also: []string{"\u00b5m/s", "\u03bcm/s"}},
		{name: "um/min", scale: "1e-6", per: "60", also: []string{"\u00b5m/min", "\u03bcm/min"}},
		{name: "um/h", scale: "1e-6", per: "3600", also: []string{"\u00b5m/h", "\u03bcm/h"}},
		{name: "nm/s", scale: "1e-9"},
		{name: "nm/min", scale: "1e-9", per: "60"},
		{name: "nm/h", scale: "1e-9", per: "3600"},
		{
			name: "Angstrom/s", scale: "1e-10", also: []string{"angstrom/s", "\u00c5/s", "\u212b/s"},
			words: []string{"A/s"},
		},
		{
			name: "Angstrom/min", scale: "1e-10", per: "60",
			also: []string{"angstrom/min", "\u00c5/min", "\u212b/min"}, words: []string{"A/min"},
		},
	}}
}

func energy() dimension {
	return dimension{"an energy", "20 eV", []unit{
		{name: "eV", words: []string{"electronvolt", "electron volt"}},
		{name: "meV", scale: "1e-3"},
		{name: "keV", scale: "1e3"},
	}}
}
