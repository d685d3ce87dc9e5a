package mcc

import (
	"context"
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/stats"
)

const (
	// windowParts is the number of blocks of a window; the first half is waited for.
	windowParts = 32
	// windowLength is the length of a window in relaxation times (until hot and cold starts
	// agree). Positions start anew with each; after half of it, some six decay times, they are
	// correlated with the velocities as they will stay.
	windowLength = 3.0
	// minWindows is the smallest number of windows to stop after.
	minWindows = stats.MinBatches
	// sampleCollisions is the mean number of collisions between samples of the speeds.
	sampleCollisions = 0.5
	// thinAt is the growth at which the swarm is thinned.
	thinAt = 2
)

// moments are those of the positions of all particles, in units of position.
type moments struct {
	n                        float64
	mean                     float64 // of x
	longitudinal, transverse float64 // variances, the latter of one component
}

// series are the observations of a measurement, one a block or one a window.
type series struct {
	particleSteps, velocity, square []float64
	counts                          [][]float64 // by channel
	// By window, in units of velocity or velocity squared times steps:
	growthDrift, longitudinal, transverse []float64
	speeds                                *stats.Vector
	above, seen, extrapolated, collisions float64
}

// measure averages windows until the errors are reached or the budget is spent.
func (w *swarm) measure(ctx context.Context) (SwarmResult, error) {
	d := &series{
		counts: make([][]float64, len(w.model.channels)),
		speeds: stats.NewVector(swarmBins),
	}
	block := max(1, int(windowLength*w.run.Relaxation/w.step/windowParts))
	blocks := windowParts
	for w.growth()*float64(block) > 0.1 && block > 1 {
		block, blocks = (block+1)/2, 2*blocks
	}
	for {
		if err := w.window(ctx, d, block, blocks); err != nil {
			return SwarmResult{}, err
		}
		w.run.Windows++
		r := w.result(d)
		enough := w.run.Windows >= minWindows && w.reached(&r)
		if enough || w.run.Steps+block*blocks > w.set.MaxSteps {
			r.Run.Reached = enough
			return r, nil
		}
	}
}

// growth returns the mean number of births and losses a particle and step in the last block.
func (w *swarm) growth() float64 {
	var born, particleSteps float64
	for i := range w.chunks {
		particleSteps += w.chunks[i].sums.particleSteps
		for k := range w.model.channels {
			if ch := &w.model.channels[k]; ch.multiplies() || ch.takes() {
				born += w.chunks[i].sums.counts[k]
			}
		}
	}
	return born / particleSteps
}

func (c *channel) multiplies() bool { return c.process.Kind == crosssections.Ionization }

// takes tells whether the projectile is no more after a collision of the channel.
func (c *channel) takes() bool { return c.changing != nil && c.changing.same < 0 }

// window moves the swarm by one window from positions zero and adds what it saw.
func (w *swarm) window(ctx context.Context, d *series, block, blocks int) error {
	for i := range w.chunks {
		c := &w.chunks[i]
		clear(c.x)
		clear(c.y)
		clear(c.z)
	}
	all := func(int) bool { return true }
	every := max(1, int(sampleCollisions/w.set.Step))
	total := newSwarmSums(len(w.model.channels))
	sums := newSwarmSums(len(w.model.channels))
	var grown, longitudinal, transverse float64
	for b := range blocks {
		if w.count(all) > thinAt*w.set.Particles {
			w.thin(w.set.Particles, all)
			w.run.Thinnings++
		}
		w.replenish(w.set.Particles, all)
		before := w.moments()
		if err := w.advance(ctx, block, every); err != nil {
			return err
		}
		sums.reset()
		for i := range w.chunks {
			sums.add(&w.chunks[i].sums)
		}
		d.add(&sums)
		total.add(&sums)
		if b >= blocks/2 {
			after := w.moments()
			flown := sums.velocity / sums.particleSteps * float64(block)
			grown += after.mean - before.mean - flown
			longitudinal += after.longitudinal - before.longitudinal
			transverse += after.transverse - before.transverse
		}
	}
	steps := float64(block * (blocks - blocks/2))
	d.growthDrift = append(d.growthDrift, grown/steps)
	d.longitudinal = append(d.longitudinal, 0.5*longitudinal/steps)
	d.transverse = append(d.transverse, 0.5*transverse/steps)
	d.addSpeeds(total.speeds)
	w.run.Measured += float64(block*blocks) * w.step
	return nil
}

func (d *series) add(s *swarmSums) {
	d.particleSteps = append(d.particleSteps, s.particleSteps)
	d.velocity = append(d.velocity, s.velocity)
	d.square = append(d.square, s.square)
	for i, n := range s.counts {
		d.counts[i] = append(d.counts[i], n)
		d.collisions += n
	}
	d.extrapolated += s.extrapolated
}

// addSpeeds takes the speeds of a window as parts of all particles seen.
func (d *series) addSpeeds(speeds []float64) {
	seen := 0.0
	for _, n := range speeds {
		seen += n
	}
	d.seen += seen
	d.above += speeds[swarmBins]
	parts := make([]float64, swarmBins)
	for i := range parts {
		parts[i] = speeds[i] / seen
	}
	d.speeds.Add(parts)
}

// moments of the positions; variances with n-1, so that thinning does not change their
// expectation.
func (w *swarm) moments() moments {
	var m moments
	var x, y, z, xx, yy, zz float64
	for i := range w.chunks {
		c := &w.chunks[i]
		m.n += float64(len(c.x))
		for k := range c.x {
			x += c.x[k]
			y += c.y[k]
			z += c.z[k]
			xx += c.x[k] * c.x[k]
			yy += c.y[k] * c.y[k]
			zz += c.z[k] * c.z[k]
		}
	}
	m.mean = x / m.n
	m.longitudinal = (xx - x*x/m.n) / (m.n - 1)
	m.transverse = (yy + zz - (y*y+z*z)/m.n) / (2 * (m.n - 1))
	return m
}

// reached tells whether the errors asked for are met.
func (w *swarm) reached(r *SwarmResult) bool {
	within := func(e stats.Estimate, relative float64) bool {
		return e.StdErr <= relative*math.Abs(e.Mean)
	}
	if !within(r.MeanEnergy, w.set.RelativeError) {
		return false
	}
	if w.set.Field > 0 && !within(r.FluxDrift, w.set.RelativeError) {
		return false
	}
	return w.set.RateError == 0 || within(r.Ionization, w.set.RateError)
}

// result makes the estimates from the series.
func (w *swarm) result(d *series) SwarmResult {
	perN := w.step * w.density
	r := SwarmResult{
		Field: w.set.Field, Density: w.density,
		Temperature: w.thermal / 1.5 * phys.ElementaryCharge / phys.Boltzmann,
		FluxDrift:   stats.Ratio(d.velocity, d.particleSteps),
		MeanEnergy:  scaled(stats.Ratio(d.square, d.particleSteps), w.energyEV(1)),
		// Positions are in velocity times step, and so are D's units velocity squared times step.
		DiffusionLongitudinal: scaled(stats.Mean(d.longitudinal), perN),
		DiffusionTransverse:   scaled(stats.Mean(d.transverse), perN),
		Run:                   w.run,
	}
	grown := stats.Mean(d.growthDrift)
	r.BulkDrift = r.FluxDrift
	born, taken := make([]float64, len(d.velocity)), make([]float64, len(d.velocity))
	for c, counts := range d.counts {
		ch := &w.model.channels[c]
		r.Rates = append(r.Rates, SwarmRate{
			Gas: ch.target, Process: ch.process.Name,
			Rate: scaled(stats.Ratio(counts, d.particleSteps), 1/(w.step*ch.density)),
		})
		if ch.multiplies() {
			for i, n := range counts {
				born[i] += n
			}
		}
		if ch.takes() {
			for i, n := range counts {
				taken[i] += n
			}
		}
	}
	r.Ionization = scaled(stats.Ratio(born, d.particleSteps), 1/perN)
	r.Loss = scaled(stats.Ratio(taken, d.particleSteps), 1/perN)
	for i, n := range taken {
		born[i] -= n
	}
	r.Growth = scaled(stats.Ratio(born, d.particleSteps), 1/perN)
	if r.Growth.Mean != 0 {
		r.BulkDrift.Mean += grown.Mean
		r.BulkDrift.StdErr = math.Hypot(r.BulkDrift.StdErr, grown.StdErr)
		r.BulkDrift.N, r.BulkDrift.Batch, r.BulkDrift.Lag = grown.N, grown.Batch, grown.Lag
	}
	r.Townsend = townsendOf(r.BulkDrift, r.DiffusionLongitudinal, r.Growth)
	if w.set.Field > 0 {
		r.Mobility = scaled(r.FluxDrift, 1e4/(w.set.Field*townsend*loschmidt))
	}
	r.Energies = w.energies(d)
	r.Beyond, r.Extrapolated = d.above/d.seen, d.extrapolated/d.collisions
	drift, noise := stats.Drift(ratios(d.square, d.particleSteps))
	r.Run.Drift = drift / noise
	return r
}

func ratios(a, b []float64) []float64 {
	list := make([]float64, len(a))
	for i := range a {
		list[i] = a[i] / b[i]
	}
	return list
}

// energies turns the counts of speeds into the energy distribution: a bin of equal weight over
// the integral of sqrt(E) dE.
func (w *swarm) energies(d *series) SwarmEnergies {
	e := SwarmEnergies{
		EdgesEV: make([]float64, swarmBins+1),
		EEPF:    make([]float64, swarmBins), StdErr: make([]float64, swarmBins),
	}
	for i := range e.EdgesEV {
		part := float64(i) / swarmBins
		e.EdgesEV[i] = w.run.TopEnergy * part * part
	}
	for i := range e.EEPF {
		volume := 2. / 3 * (math.Pow(e.EdgesEV[i+1], 1.5) - math.Pow(e.EdgesEV[i], 1.5))
		e.EEPF[i] = d.speeds.Mean[i] / volume
		e.StdErr[i] = d.speeds.StdErr(i) / volume
	}
	return e
}
