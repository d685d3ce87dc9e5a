package main

import (
	"math"
	"slices"
	"strconv"
)

// row is a line of a table: energy [eV] and cross section [m2].
type row struct{ energy, q float64 }

const (
	// tolerance is the relative error of linear interpolation that the rows keep to. It is
	// half of what is promised (0.2 %), for the rounding of the written numbers and for
	// energies between the probes.
	tolerance = 1e-3
	probes    = 15
	// firstStep is the distance of the first row from a threshold [eV].
	firstStep = 1e-3
)

// tabulate chooses rows of f from the first to the last of the points, which are kept, so that
// linear interpolation keeps to the tolerance. The spacing is geometric in the energy above the
// threshold; at the threshold itself f is zero and one short step is taken.
func tabulate(f func(float64) float64, threshold float64, points ...float64) []row {
	var rows []row
	if threshold > 0 {
		rows = append(rows, row{threshold, 0})
		points = append([]float64{threshold + firstStep}, points...)
	}
	for i := range points {
		points[i] = rounded(points[i])
	}
	rows = append(rows, row{points[0], f(points[0])})
	for i := 1; i < len(points); i++ {
		rows = split(rows, f, threshold, points[i-1], points[i])
	}
	return rows
}

// split appends the rows above from up to to.
func split(rows []row, f func(float64) float64, threshold, from, to float64) []row {
	middle := rounded(threshold + math.Sqrt((from-threshold)*(to-threshold)))
	if middle <= from || middle >= to || straight(f, from, to) {
		return append(rows, row{to, f(to)})
	}
	rows = split(rows, f, threshold, from, middle)
	return split(rows, f, threshold, middle, to)
}

// straight tells whether the chord of f keeps to the tolerance.
func straight(f func(float64) float64, from, to float64) bool {
	q0, q1 := f(from), f(to)
	for i := 1; i <= probes; i++ {
		x := float64(i) / (probes + 1)
		exact := f(from + x*(to-from))
		if math.Abs(q0+x*(q1-q0)-exact) > tolerance*exact {
			return false
		}
	}
	return true
}

// rounded is the energy as it is written, with 8 digits.
func rounded(energyEV float64) float64 {
	v, err := strconv.ParseFloat(strconv.FormatFloat(energyEV, 'g', 8, 64), 64)
	if err != nil {
		panic("gen: a formatted number does not parse: " + err.Error())
	}
	return v
}

// kink is where f changes its sign between two energies.
func kink(f func(float64) float64, from, to float64) float64 {
	for range 60 {
		middle := (from + to) / 2
		if (f(middle) > 0) == (f(from) > 0) {
			from = middle
		} else {
			to = middle
		}
	}
	return (from + to) / 2
}

// powerLaw is the curve through the points that is straight on logarithmic axes.
func powerLaw(points []row) func(float64) float64 {
	return func(e float64) float64 {
		i := 1
		for i < len(points)-1 && e > points[i].energy {
			i++
		}
		a, b := points[i-1], points[i]
		slope := math.Log(b.q/a.q) / math.Log(b.energy/a.energy)
		return a.q * math.Pow(e/a.energy, slope)
	}
}

// upTo is the rows not above the energy.
func upTo(rows []row, energyEV float64) []row {
	i := slices.IndexFunc(rows, func(r row) bool { return r.energy > energyEV })
	if i < 0 {
		return rows
	}
	return rows[:i]
}
