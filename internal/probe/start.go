package probe

import (
	"errors"
	"math"
)

// guess is what a first look at a characteristic tells.
type guess struct {
	floating    float64 // [V]
	temperature float64 // [eV], of the slope below the plasma potential
	knee        float64 // [V], where the first derivative is largest
	hasKnee     bool    // the derivative falls again above it, beyond doubt
	kneeCurrent float64 // [A]
	ions        float64 // ion current far below [A], positive
	spacing     float64 // of the uniform grid [V]
}

// look finds a start for the fits.
func look(d *cleaned) (*guess, error) {
	g := &guess{}
	n := len(d.voltage)
	g.ions = math.Max(0, -median(d.current[:max(3, n/12)]))
	grid, values := uniform(d.voltage, d.current)
	g.spacing = grid[1] - grid[0]
	half := min(max(2, n/40), 12)
	filter, err := NewSavitzkyGolay(half, 2)
	if err != nil {
		return nil, err
	}
	smooth := filter.Apply(values, 0, g.spacing)
	slope := filter.Apply(values, 1, g.spacing)
	best := half
	for k := half; k < len(grid)-half; k++ {
		if slope[k] > slope[best] {
			best = k
		}
	}
	rough := firstTemperature(grid, smooth, best, g.ions)
	if at, ok := bendEnds(d, grid, values, rough); ok {
		best, g.hasKnee = at, true
	}
	g.knee, g.kneeCurrent = grid[best], smooth[best]
	if !(slope[best] > 0 && g.kneeCurrent > 0) {
		return nil, errors.New("the current does not rise with the voltage")
	}
	crossing := false
	for k := 1; k <= best; k++ {
		if smooth[k-1] <= 0 && smooth[k] > 0 {
			g.floating = grid[k-1] + g.spacing*smooth[k-1]/(smooth[k-1]-smooth[k])
			crossing = true
		}
	}
	if !crossing {
		g.floating = math.NaN()
	}
	g.temperature = firstTemperature(grid, smooth, best, g.ions)
	return g, nil
}

const (
	// bendWindow is the width, in temperatures, over which the knee is looked for.
	bendWindow = 1.6
	// bendGone is the part of its maximum below which the second derivative is gone.
	bendGone = 0.35
)

// bendEnds finds the knee: where the second derivative, after a maximum beyond doubt, has fallen to
// half, and stays small up to the end. Below the plasma potential it only grows.
func bendEnds(d *cleaned, grid, values []float64, temperature float64) (int, bool) {
	spacing := grid[1] - grid[0]
	half := min(max(int(bendWindow*temperature/2/spacing), 2), (len(grid)-1)/6)
	filter, err := NewSavitzkyGolay(half, 2)
	if err != nil {
		return 0, false
	}
	second := filter.Apply(values, 2, spacing)
	top := half
	for k := half; k < len(grid)-half; k++ {
		if second[k] > second[top] {
			top = k
		}
	}
	at := top
	for at < len(grid)-half && second[at] > second[top]/2 {
		at++
	}
	from := at + half/2
	if from >= len(grid)-max(half/2, 2) {
		return 0, false
	}
	mean := 0.0
	for _, x := range second[from : len(grid)-1] {
		mean += x / float64(len(grid)-1-from)
	}
	sigma := math.Hypot(d.floor, d.relative*values[at])
	noise := filter.Gain(2) * sigma / (spacing * spacing)
	return at, second[top] > 4*noise && mean < bendGone*second[top] &&
		second[top]-mean > 4*noise
}

// firstTemperature is from the logarithm of the electron current between a twentieth and two thirds
// of that at the knee.
func firstTemperature(grid, smooth []float64, best int, ions float64) float64 {
	var x, y []float64
	top := smooth[best] + ions
	for k := range best {
		if e := smooth[k] + ions; e > top/20 && e < top*2/3 {
			x, y = append(x, grid[k]), append(y, math.Log(e))
		}
	}
	if len(x) < 3 {
		return math.Max((grid[best]-grid[0])/20, 2*(grid[1]-grid[0]))
	}
	_, slope := line(x, y)
	return math.Min(math.Max(1/math.Max(slope, 1e-3), 0.05), 50)
}

// line is the least-squares line y = a + b x.
func line(x, y []float64) (a, b float64) {
	var mx, my, sxx, sxy float64
	for k := range x {
		mx, my = mx+x[k]/float64(len(x)), my+y[k]/float64(len(x))
	}
	for k := range x {
		sxx, sxy = sxx+(x[k]-mx)*(x[k]-mx), sxy+(x[k]-mx)*(y[k]-my)
	}
	b = sxy / sxx
	return my - b*mx, b
}

// uniform interpolates points on a grid of as many equal steps.
func uniform(voltage, current []float64) (grid, values []float64) {
	n := len(voltage)
	lo, h := voltage[0], (voltage[n-1]-voltage[0])/float64(n-1)
	k := 0
	for i := range n {
		v := lo + float64(i)*h
		for k < n-2 && voltage[k+1] < v {
			k++
		}
		part := (v - voltage[k]) / (voltage[k+1] - voltage[k])
		grid = append(grid, v)
		values = append(values, current[k]+part*(current[k+1]-current[k]))
	}
	return grid, values
}

// startFor are the parameters from which a fit of the kind starts.
func (g *guess) startFor(m *model, knee, temperature float64) []float64 {
	p := make([]float64, parCount)
	p[parPotential], p[parTemp] = knee, math.Log(temperature)
	p[parSaturation] = 0.8
	switch m.kind {
	case General:
		p[parShape] = 1.2
	case TwoTemp:
		p[parTemp] = math.Log(temperature * 0.7)
		p[parShape], p[parShape2] = math.Log(2.0), -1.5
	}
	// Densities from the currents, with those of unit density.
	p[parDensity], p[parIon] = 0, 0
	c := m.characteristic(p)
	if c.electrons > 0 {
		p[parDensity] = math.Log(math.Max(g.kneeCurrent, 1e-15) / c.electrons)
	}
	p[parIon] = p[parDensity]
	c = m.characteristic(p)
	far := c.ions(knee - 10*temperature)
	if far > 0 && g.ions > 0 {
		p[parIon] += math.Log(g.ions / far)
	}
	return p
}
