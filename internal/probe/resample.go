package probe

import (
	"math"

	"ionfall/internal/rng"
)

const (
	// sweepsToResample is from how many sweeps their own scatter gives the errors.
	sweepsToResample = 6
	// windows of the derivatives, in temperatures of the coldest group: one is drawn a resampling.
	windowUsual = 2.0
)

func windows() [3]float64 { return [3]float64{1.5, windowUsual, 2.5} }

// sample is the outcome of one resampling.
type sample struct {
	derived
	smoothed
	nearKnee derived // with less of the saturation in the fit
}

// resample repeats the reduction on resampled data, and returns what derivatives give on the data
// themselves.
func (r *reduction) resample() (*smoothed, error) {
	best := &r.candidates[0]
	c := best.model.characteristic(best.p)
	grid, values := uniform(r.cleaned.voltage, r.cleaned.current)
	central, err := r.derivatives(grid, values, c, windowUsual)
	if err != nil {
		return nil, err
	}
	for b := range r.choices.Resamplings {
		stream := rng.Key{
			Seed: r.choices.Seed, Purpose: rng.Resampling, Step: uint64(b),
		}.Stream()
		drawn := r.draw(&stream, c)
		f, err := best.model.fit(best.p, best.free, drawn.within(
			r.used.voltage[len(r.used.voltage)-1]))
		if err != nil {
			continue
		}
		s := sample{derived: derive(f, drawn), nearKnee: r.fitNearKnee(f, drawn)}
		window := windows()[int(3*stream.Float64())]
		grid, values := uniform(drawn.voltage, drawn.current)
		smooth, err := r.derivatives(grid, values, f.model.characteristic(f.p), window)
		if err != nil {
			return nil, err
		}
		s.smoothed = *smooth
		r.samples = append(r.samples, s)
	}
	return central, nil
}

// draw makes data such as might have been measured: from sweeps drawn with repetition, or from the
// fit with noise.
func (r *reduction) draw(stream *rng.Stream, c *characteristic) *data {
	d := r.cleaned
	out := &data{voltage: d.voltage, sigma: d.sigma, current: make([]float64, len(d.voltage))}
	n := len(d.perSweep)
	if n < sweepsToResample {
		for k, v := range d.voltage {
			out.current[k] = c.at(v) + r.scale*d.sigma[k]*stream.Normal()
		}
		return out
	}
	// The scatter of means of n drawn from n is smaller than that of means by sqrt(1 - 1/n).
	widen := math.Sqrt(float64(n) / float64(n-1))
	picked := make([]int, n)
	for i := range picked {
		picked[i] = int(float64(n) * stream.Float64())
	}
	for k := range d.voltage {
		sum, count := 0.0, 0.0
		for _, s := range picked {
			if x := d.perSweep[s][k]; !math.IsNaN(x) {
				sum, count = sum+x, count+1
			}
		}
		out.current[k] = d.current[k]
		if count > 0 {
			out.current[k] += widen * (sum/count - d.current[k])
		}
	}
	return out
}

// derivatives are the plasma potentials and integrals by smoothing, corrected for what the same
// window does to the fitted characteristic, whose values are known: broadening and the rounding of
// the knee.
func (r *reduction) derivatives(grid, values []float64, c *characteristic, window float64) (
	*smoothed, error,
) {
	spacing := grid[1] - grid[0]
	s, err := newSmoothing(window*c.shape.coldest, spacing, len(grid))
	if err != nil {
		return nil, err
	}
	got := s.reduce(grid, values, c, r.setup)
	ideal := make([]float64, len(grid))
	for k, v := range grid {
		ideal[k] = c.at(v)
	}
	known := s.reduce(grid, ideal, c, r.setup)
	return &smoothed{
		zero:        got.zero - known.zero + c.potential,
		steepest:    got.steepest - known.steepest + c.potential,
		crossing:    got.crossing - known.crossing + c.potential,
		density:     got.density / known.density * c.density,
		temperature: got.temperature / known.temperature * c.shape.temperature,
	}, nil
}
