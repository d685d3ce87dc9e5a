package mcc

import (
	"context"
	"fmt"
	"math"

	"ionfall/internal/phys"
)

const (
	// relaxFirst is the first block of the relaxation, in steps; later ones are a fixed part of
	// the time passed, so that any time scale is resolved.
	relaxFirst = 32
	relaxPart  = 16
	// relaxMinSteps is the shortest relaxation: some collisions of each particle.
	relaxMinSteps = 512
	// maxBlockGrowth is the largest growth of the swarm in a block.
	maxBlockGrowth = 0.5
	// tailReach is the end of the tables while measuring, over the largest energy seen before.
	tailReach = 3
)

// relax moves the swarm until its cold and its hot half agree, and then as long again.
//
// The difference of their mean energies falls in the end as exp(-t/tau). When it is no longer
// seen in two blocks in a row, at some percent of the start, tau is a fraction of the
// time passed; as long again takes what is left of it to a tenth of a percent or less.
func (w *swarm) relax(ctx context.Context) error {
	length, within, time := relaxFirst, 0, 0.0
	steps := 0
	for agreed := 0.0; agreed == 0 || time < 2*agreed; {
		if w.run.Steps > w.set.MaxSteps {
			return fmt.Errorf("swarm: %s at %g Td is not relaxed after %d steps (%.3g s): "+
				"want a larger budget of steps", w.set.Projectile, w.set.Field, w.run.Steps, time)
		}
		if err := w.advance(ctx, length, length); err != nil {
			return err
		}
		time += float64(length) * w.step
		steps += length
		growth := w.thinHalves()
		if err := w.extend(); err != nil {
			return err
		}
		difference, noise := w.halves()
		switch {
		case agreed > 0:
		case math.Abs(difference) < 2*noise && steps >= relaxMinSteps:
			if within++; within == 2 {
				agreed = time
				w.run.Relaxation = time
				if err := w.sharpen(); err != nil {
					return err
				}
			}
		default:
			within = 0
		}
		length = max(relaxFirst, steps/relaxPart)
		if growth > 0 {
			length = max(1, min(length, int(maxBlockGrowth/growth)))
		}
	}
	w.run.Warmup = time
	return nil
}

// thinHalves thins each half on its own once it has doubled, and returns the largest growth or
// loss a step of a chunk in the block.
func (w *swarm) thinHalves() float64 {
	growth := 0.0
	for i := range w.chunks {
		c := &w.chunks[i]
		born := 0.0
		for k := range w.model.channels {
			if ch := &w.model.channels[k]; ch.multiplies() || ch.takes() {
				born += c.sums.counts[k]
			}
		}
		growth = math.Max(growth, born/c.sums.particleSteps)
	}
	keep := w.set.Particles / 2
	for _, half := range []bool{false, true} {
		part := func(chunk int) bool { return hot(chunk) == half }
		if w.count(part) > 2*keep {
			w.thin(keep, part)
		}
		w.replenish(keep, part)
	}
	return growth
}

// extend makes the tables longer if a particle has come near their end.
func (w *swarm) extend() error {
	fastest := 0.0
	for i := range w.chunks {
		fastest = math.Max(fastest, w.chunks[i].sums.fastest)
	}
	if fastest < 0.8*w.model.topSpeed2() {
		return nil
	}
	return w.tabulate(2 * w.energyEV(fastest))
}

// energyEV converts a squared speed [m2/s2] into an energy [eV].
func (w *swarm) energyEV(square float64) float64 {
	return 0.5 * w.set.Mass * square / phys.ElementaryCharge
}

// halves returns the difference of the mean squared speeds of the hot and the cold half, with
// its standard error from the scatter among chunks.
func (w *swarm) halves() (difference, noise float64) {
	var mean, square [2]float64
	const n = swarmChunks / 2
	for i := range w.chunks {
		x := w.chunks[i].sums.square / w.chunks[i].sums.particleSteps
		mean[i%2] += x / n
		square[i%2] += x * x / n
	}
	for k := range mean {
		noise += (square[k] - mean[k]*mean[k]) / (n - 1)
	}
	return mean[1] - mean[0], math.Sqrt(noise)
}

// sharpen sets the time step by the collision frequencies that the relaxed swarm has, which are
// often well below the highest of the table, and the table by the fastest particle of the last
// block: three times its energy lie far outside, and what gets there nevertheless is counted.
func (w *swarm) sharpen() error {
	var square, n, fastest float64
	for i := range w.chunks {
		c := &w.chunks[i]
		fastest = math.Max(fastest, c.sums.fastest)
		for k := range c.vx {
			// In the middle of the next flight: some that just collided are at rest.
			v := c.vx[k] + w.half()
			nu := w.model.frequency(math.Sqrt(v*v + c.vy[k]*c.vy[k] + c.vz[k]*c.vz[k]))
			square += nu * nu
			n++
		}
	}
	top := tailReach * w.energyEV(fastest)
	if err := w.tabulate(top); err != nil {
		return err
	}
	highest := w.model.rate / w.step
	step := w.set.Step / math.Sqrt(square/n)
	return w.use(top, math.Min(step, 0.9*maxCandidates/highest))
}
