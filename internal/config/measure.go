package config

import (
	"strconv"

	"ionfall/internal/inputerr"
)

// Measure is a kind of quantity that other files and flags than the input state.
type Measure string

// The measures.
const (
	MeasureLength      Measure = "length"
	MeasurePressure    Measure = "pressure"
	MeasureTemperature Measure = "temperature"
	MeasureVoltage     Measure = "voltage"
	MeasureRatio       Measure = "ratio"
	MeasureAngle       Measure = "angle"
	MeasureEnergy      Measure = "energy"
	MeasureResistance  Measure = "resistance"
	MeasureDuration    Measure = "duration"
)

func (m Measure) dimension() dimension {
	switch m {
	case MeasureLength:
		return length()
	case MeasurePressure:
		return pressure()
	case MeasureTemperature:
		return gasTemperature()
	case MeasureVoltage:
		return voltage()
	case MeasureRatio:
		return ratio()
	case MeasureAngle:
		return angle()
	case MeasureEnergy:
		return energy()
	case MeasureDuration:
		return duration()
	}
	return dimension{"a resistance", "50 Ohm", []unit{
		{name: "Ohm", also: []string{"ohm", "\u03a9", "\u2126"}, words: []string{"ohms"}},
		{name: "kOhm", scale: "1e3", also: []string{"kohm"}},
	}}
}

// Read is the value of a text in SI units (angles in rad, energies in eV, ratios as parts of 1), as
// the input file reads it; or what is wrong, without a place.
func (m Measure) Read(text string) (float64, *inputerr.Error) {
	value, bad := m.dimension().parse(text)
	if bad != nil {
		return 0, &inputerr.Error{Got: strconv.Quote(text), Want: bad.want, Hint: bad.hint}
	}
	return value, nil
}

// Units are the accepted texts of the units.
func (m Measure) Units() []string { return m.dimension().spellings() }
