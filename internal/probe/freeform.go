package probe

import "math"

// Free is the form of the distribution that is exponential between knots, with a temperature of
// its own in each cell.
const Free = "piecewise exponential"

// freeKnots are the energies at which the temperature changes, in units of the scale of the model;
// the last cell goes on for ever.
func freeKnots() []float64 { return []float64{0, 0.8, 1.8, 3.2, 5, 8} }

// freeCells is the number of cells; the first has the temperature parTemp, the others its ratios.
const freeCells = 6

// freeTail is how far the last cell is followed, in its temperatures.
const freeTail = 35

// freeForm is the distribution of the parameters.
func (m *model) freeForm(p []float64) (*Distribution, error) {
	knots := freeKnots()
	var energy, value []float64
	logF := 0.0
	for k := range freeCells {
		t := cellTemperature(p, k)
		from := knots[k] * m.scale
		to := from + freeTail*t
		if k+1 < freeCells {
			to = knots[k+1] * m.scale
		}
		// Cells are cut finer so that moments, which are not exact, are good.
		parts := 4
		if k+1 == freeCells {
			parts = 30
		}
		for i := range parts {
			e := from + (to-from)*float64(i)/float64(parts)
			energy = append(energy, e)
			value = append(value, math.Exp(logF-(e-from)/t))
		}
		logF -= (to - from) / t
		if k+1 == freeCells {
			energy, value = append(energy, to), append(value, math.Exp(logF))
		}
	}
	return NewDistribution(energy, value)
}

// cellTemperature is the temperature of a cell [eV].
func cellTemperature(p []float64, k int) float64 {
	if k == 0 {
		return math.Exp(p[parTemp])
	}
	return math.Exp(p[parTemp] + p[parShape+k-1])
}

// freeShape is the current of the free form. Above the plasma potential it is enhanced like that
// of a Maxwellian, whose factor is fitted in any case.
func (m *model) freeShape(p []float64) shape {
	d, err := m.freeForm(p)
	if err != nil {
		return maxwellShape(math.NaN())
	}
	flux, t := d.Retarded(0), d.Temperature()
	coldest := math.Inf(1)
	for k := range freeCells - 1 { // the tail has few electrons
		coldest = math.Min(coldest, cellTemperature(p, k))
	}
	return shape{
		flux: flux, temperature: t, coldest: math.Max(coldest, t/4),
		part:     func(u float64) float64 { return d.Retarded(u) / flux },
		enhanced: func(u float64) float64 { return OMLCylinder(u / t) },
	}
}

// freePriors hold the temperatures of neighbouring cells together, loosely.
const freePriors = 0.5
