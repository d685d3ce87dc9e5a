package main

import (
	"fmt"
	"io"
	"math"
	"time"

	"ionfall/internal/stats"
)

// result is a finished run.
type result struct {
	Case            int       `json:"case"`
	CrossSections   string    `json:"cross_sections"`
	Scheme          string    `json:"scheme"`
	Seed            uint64    `json:"seed"`
	Periods         int       `json:"periods"`
	Averaged        int       `json:"averaged_periods"`
	Complete        bool      `json:"complete"` // as many periods as published
	StartDensity    float64   `json:"start_density_m3"`
	MidPlane        float64   `json:"mid_plane_ion_density_m3"`
	MidPlaneError   *float64  `json:"mid_plane_ion_density_m3_se"` // null with too few periods
	Published       float64   `json:"published_m3"`
	Drift           float64   `json:"count_drift_per_period"` // relative, over the averaged periods
	Particles       [2]int    `json:"particles"`              // electrons, ions at the end
	Moves           int64     `json:"particle_moves"`
	Wall            float64   `json:"wall_s"`
	Cores           int       `json:"cores"`
	Beyond          int64     `json:"collisions_beyond_tables"`
	X               []float64 `json:"x_m"`
	IonDensity      []float64 `json:"ion_density_m3"`
	ElectronDensity []float64 `json:"electron_density_m3"`
}

// simulate runs the case with the gas.
func (c *benchmarkCase) simulate(g namedGas, o *options, m meter) (result, error) {
	s, err := c.setup(g.gas, o)
	if err != nil {
		return result{}, err
	}
	r := result{
		Case: c.Number, CrossSections: g.name, Scheme: o.scheme.String(), Seed: o.seed,
		Periods: c.Periods, Published: c.Published, Cores: o.cores, StartDensity: c.Density,
	}
	if o.periods > 0 {
		r.Periods = o.periods
	}
	if o.startDensity > 0 {
		r.StartDensity = o.startDensity
	}
	r.Complete = r.Periods >= c.Periods
	r.Averaged = min(averagedPeriods, r.Periods)
	first := r.Periods - r.Averaged
	d := newDensities(s.Config(), int64(first)*int64(c.StepsPerPeriod))
	s.Observe(d)
	begin, counts := time.Now(), [2]float64{}
	for period := range r.Periods {
		if err := s.Advance(int64(c.StepsPerPeriod)); err != nil {
			return result{}, err
		}
		l := s.TakeLedger()
		r.Moves += l.Moved
		r.Beyond += l.Species[0].Beyond
		if period >= first {
			d.endPeriod()
		}
		if period == first {
			counts[0] = float64(l.Species[1].Count)
		}
		counts[1] = float64(l.Species[1].Count)
		m.show(g.name, period+1, r.Periods, s.Species()[1].Count(), begin)
	}
	if r.Averaged > 1 {
		r.Drift = math.Log(counts[1]/counts[0]) / float64(r.Averaged-1)
	}
	r.Wall = time.Since(begin).Seconds()
	r.Particles = [2]int{s.Species()[0].Count(), s.Species()[1].Count()}
	r.fill(d)
	return r, nil
}

func (r *result) fill(d *densities) {
	e := d.midPlane()
	r.MidPlane = e.Mean
	if e.N >= stats.MinBatches {
		r.MidPlaneError = &e.StdErr
	}
	for j := range d.cells + 1 {
		r.X = append(r.X, float64(j)*d.dx)
	}
	r.ElectronDensity, r.IonDensity = d.profile(0), d.profile(1)
}

// meter shows how far a run is, now and then.
type meter struct {
	out   io.Writer
	every time.Duration
	last  time.Time
}

func (m *meter) show(name string, done, all, ions int, begin time.Time) {
	now := time.Now()
	if now.Sub(m.last) < m.every && done < all {
		return
	}
	m.last = now
	spent := now.Sub(begin)
	left := time.Duration(float64(spent) * float64(all-done) / float64(done))
	// A lost line of progress is no reason to stop.
	_, _ = fmt.Fprintf(m.out, "%s: period %d of %d, %d ions, %v left\n", name, done, all, ions,
		left.Round(time.Second))
}
