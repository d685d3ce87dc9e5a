package probe

import (
	"math"

	"ionfall/internal/phys"
)

// derived are the numbers that one fit, or one resampling, gives. The order is that of derivedKeys.
type derived [5]float64

func derivedKeys() [5]string {
	return [5]string{
		KeyElectronDensity, KeyIonDensity, KeyTemperature, KeyPlasma, KeyFloating,
	}
}

// The places in derived.
const (
	isDensity = iota
	isIons
	isTemperature
	isPlasma
	isFloating
)

// derive takes the numbers out of a fit; the floating potential is from the points around it.
func derive(f *fitted, d *data) derived {
	c := f.model.characteristic(f.p)
	return derived{
		c.density, c.ionDensity, c.shape.temperature, c.potential,
		floatingPotential(d, c),
	}
}

// root of the characteristic between lo and hi, by bisection; NaN if there is none.
func (c *characteristic) root(lo, hi float64) float64 {
	if c.at(lo) > 0 || c.at(hi) < 0 {
		return math.NaN()
	}
	for range 60 {
		if mid := (lo + hi) / 2; c.at(mid) > 0 {
			hi = mid
		} else {
			lo = mid
		}
	}
	return (lo + hi) / 2
}

// floatingPotential is where the current changes its sign: the fitted characteristic, moved by
// what the points within half a temperature of its root say.
func floatingPotential(d *data, c *characteristic) float64 {
	at := c.root(d.voltage[0], c.potential)
	if math.IsNaN(at) {
		return at
	}
	const step = 1e-3
	slope := (c.at(at+step) - c.at(at-step)) / (2 * step)
	var sum, weight float64
	for k, v := range d.voltage {
		if math.Abs(v-at) < c.shape.temperature/2 {
			w := 1 / (d.sigma[k] * d.sigma[k])
			sum, weight = sum+w*(d.current[k]-c.at(v)), weight+w
		}
	}
	if weight == 0 || !(slope > 0) {
		return at
	}
	return at - sum/weight/slope
}

// smoothed are the results that need derivatives, for one window.
type smoothed struct {
	zero, steepest, crossing float64 // plasma potentials [V]
	density, temperature     float64 // integrals of the EEPF
}

const (
	// smoothOrder of the polynomials: the window may be wider for the same broadening.
	smoothOrder = 4
	// crossFrom and crossTo are where the two straight lines of the logarithm are laid, in
	// temperatures from the knee: below and above.
	crossLow, crossLowTo   = -2.0, -0.5
	crossHigh, crossHighTo = 0.7, 2.0
)

// smoothing is a filter fitted to a uniform grid.
type smoothing struct {
	filter  *SavitzkyGolay
	spacing float64
	width   float64 // of the whole window [V]
}

// newSmoothing has a window of about the width [V].
func newSmoothing(width, spacing float64, points int) (*smoothing, error) {
	half := int(width/2/spacing + 0.5)
	half = min(max(half, smoothOrder), (points-1)/4)
	filter, err := NewSavitzkyGolay(half, smoothOrder)
	if err != nil {
		return nil, err
	}
	return &smoothing{filter, spacing, float64(2*half) * spacing}, nil
}

// reduce finds the plasma potential in three ways, and the integrals below it; ion currents are
// those of the fit.
func (s *smoothing) reduce(grid, values []float64, c *characteristic, setup *Setup) smoothed {
	first := s.filter.Apply(values, 1, s.spacing)
	second := s.filter.Apply(values, 2, s.spacing)
	t := c.shape.coldest
	lo, hi := indexRange(grid, c.potential-2*t, c.potential+2*t)
	out := smoothed{zero: math.NaN(), steepest: math.NaN()}
	best, bend := lo, lo
	for k := lo; k < hi; k++ {
		if first[k] > first[best] {
			best = k
		}
		if second[k] > second[bend] {
			bend = k
		}
	}
	out.steepest = vertex(grid, first, best)
	for k := bend; k+1 < hi; k++ {
		if second[k] > 0 && second[k+1] <= 0 {
			out.zero = grid[k] + s.spacing*second[k]/(second[k]-second[k+1])
			break
		}
	}
	out.crossing = crossing(grid, values, c)
	out.density, out.temperature = s.integrals(grid, second, c, setup)
	return out
}

// indexRange is the part of an increasing grid between two values.
func indexRange(grid []float64, from, to float64) (lo, hi int) {
	for lo < len(grid)-1 && grid[lo] < from {
		lo++
	}
	hi = lo
	for hi < len(grid) && grid[hi] <= to {
		hi++
	}
	return lo, hi
}

// vertex refines the place of a maximum by a parabola.
func vertex(grid, y []float64, k int) float64 {
	if k <= 0 || k >= len(y)-1 {
		return grid[k]
	}
	bend := y[k-1] - 2*y[k] + y[k+1]
	if bend >= 0 {
		return grid[k]
	}
	return grid[k] + (grid[k+1]-grid[k])*(y[k-1]-y[k+1])/(2*bend)
}

// crossing is where straight lines through the logarithm of the electron current below and above
// the knee meet.
func crossing(grid, values []float64, c *characteristic) float64 {
	t := c.shape.coldest
	var a, b [2]float64
	for side, span := range [2][2]float64{{crossLow, crossLowTo}, {crossHigh, crossHighTo}} {
		var x, y []float64
		for k, v := range grid {
			e := values[k] + c.ions(v)
			if u := (v - c.potential) / t; u >= span[0] && u <= span[1] && e > 0 {
				x, y = append(x, v), append(y, math.Log(e))
			}
		}
		if len(x) < 4 {
			return math.NaN()
		}
		a[side], b[side] = line(x, y)
	}
	return (a[1] - a[0]) / (b[0] - b[1])
}

// integrals are density [1/m3] and effective temperature [eV] from the second derivative by
// Druyvesteyn's formula: with I_e” = (A e n/4) sqrt(2e/m) f, the integral of sqrt(E) I_e” gives n.
func (s *smoothing) integrals(grid, second []float64, c *characteristic, setup *Setup) (
	density, temperature float64,
) {
	var n, energy float64
	end := c.potential - 12*c.shape.temperature
	for k, v := range grid {
		u := c.potential - v
		if u <= 0 || v < end {
			continue
		}
		d2 := second[k] + ionCurvature(c, v, s.width)
		n += math.Sqrt(u) * d2 * s.spacing
		energy += u * math.Sqrt(u) * d2 * s.spacing
	}
	return 4 * n / (setup.Area() * phys.ElementaryCharge * electronScale()), 2.0 / 3 * energy / n
}

// ionCurvature is the second derivative of the fitted ion current, over the width of the window.
func ionCurvature(c *characteristic, v, width float64) float64 {
	h := width / 4
	if c.potential-v < 2*h {
		return 0
	}
	return (c.ions(v+h) - 2*c.ions(v) + c.ions(v-h)) / (h * h)
}
