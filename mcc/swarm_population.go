package mcc

import (
	"context"
	"fmt"
	"math"
	"sync"
	"sync/atomic"

	"ionfall/internal/phys"
	"ionfall/internal/rng"
)

// Streams of a swarm are told apart by the species of their key.
const (
	streamMotion uint16 = iota
	streamStart
	streamThinning
)

// firstTop is the end of the first table over the scale of energy.
const firstTop = 6

// swarm is the state of a calculation.
type swarm struct {
	set     SwarmSettings
	gas     []Background
	density float64 // of the whole gas
	thermal float64 // mean thermal energy of the gas, 3/2 kT [eV]
	force   float64 // q E [N]
	scale   float64 // energy from the balance of one particle [eV]

	model  *Model
	step   float64 // dt [s]
	chunks [swarmChunks]swarmChunk
	blocks uint64 // moved so far: the step of the streams' keys
	run    SwarmRun
}

func newSwarm(gas []Background, set SwarmSettings) (*swarm, error) {
	w := &swarm{set: set, gas: gas}
	temperature := 0.0
	for _, b := range gas {
		w.density += b.Density
		temperature += b.Density * b.Temperature
	}
	w.thermal = 1.5 * phys.Boltzmann * temperature / w.density / phys.ElementaryCharge
	w.force = math.Abs(float64(set.Charge)) * phys.ElementaryCharge *
		set.Field * townsend * w.density
	w.run.Particles = set.Particles
	// Any table will do to look at the cross sections.
	scout, err := NewModel(w.settings(1, 0), gas)
	if err != nil {
		return nil, err
	}
	w.scale = scout.balanceEnergy(w.force, w.thermal)
	// Above the hot start; what is faster is noticed.
	if err := w.tabulate(firstTop * w.scale); err != nil {
		return nil, err
	}
	w.start()
	return w, nil
}

// settings returns those of the model for a table up to the energy.
func (w *swarm) settings(topEV, step float64) Settings {
	return Settings{
		Projectile: w.set.Projectile, Mass: w.set.Mass, Unit: 1, TimeStep: step, TopEnergy: topEV,
		Charge: w.set.Charge, Sharing: w.set.Sharing, Scattering: w.set.Scattering,
	}
}

// tabulate prepares the collisions up to the energy, with the step that is short against the
// highest frequency there.
func (w *swarm) tabulate(topEV float64) error {
	m, err := NewModel(w.settings(topEV, 1e-30), w.gas)
	if err != nil {
		return err
	}
	if m.rate == 0 {
		return fmt.Errorf("swarm: %s does not collide below %.3g eV", w.set.Projectile, topEV)
	}
	return w.use(topEV, w.set.Step*1e-30/m.rate)
}

// use sets the table and the time step.
func (w *swarm) use(topEV, step float64) error {
	m, err := NewModel(w.settings(topEV, step), w.gas)
	if err != nil {
		return err
	}
	w.model, w.step = m, step
	for i := range w.chunks {
		c := &w.chunks[i]
		if c.out == nil {
			c.out, c.sums = m.NewOutcome(), newSwarmSums(len(m.channels))
		}
	}
	w.run.TopEnergy, w.run.TimeStep, w.run.Candidates = topEV, step, m.rate
	return nil
}

// half returns half the change of velocity by the field in a step [m/s].
func (w *swarm) half() float64 { return 0.5 * w.force / w.set.Mass * w.step }

// hot tells whether the chunk was started hot.
func hot(chunk int) bool { return chunk%2 == 1 }

// start fills the chunks: even ones at the temperature of the gas, odd ones isotropic at twice
// the energy at which collisions outweigh the field.
func (w *swarm) start() {
	spread := speedAt(w.thermal/1.5, w.set.Mass) / math.Sqrt2
	speed := speedAt(2*w.scale, w.set.Mass)
	for i := range w.chunks {
		s := rng.Key{
			Seed: w.set.Seed, Purpose: rng.Swarm, Species: streamStart, Chunk: uint32(i),
		}.Stream()
		for range (w.set.Particles + swarmChunks - 1) / swarmChunks {
			x, y, z := spread*s.Normal(), spread*s.Normal(), spread*s.Normal()
			if hot(i) {
				x, y, z = s.Direction()
				x, y, z = speed*x, speed*y, speed*z
			}
			w.chunks[i].add(x, y, z, 0, 0, 0)
		}
	}
}

// advance moves all chunks by a block of steps; chunks go to the workers as they come.
func (w *swarm) advance(ctx context.Context, steps, every int) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	var next atomic.Int64
	work := func() {
		for {
			i := int(next.Add(1)) - 1
			if i >= swarmChunks {
				return
			}
			s := rng.Key{
				Seed: w.set.Seed, Purpose: rng.Swarm, Species: streamMotion,
				Chunk: uint32(i), Step: w.blocks,
			}.Stream()
			w.chunks[i].block(w.model, &s, w.half(), steps, every)
		}
	}
	if w.set.Workers == 1 {
		work()
	} else {
		var group sync.WaitGroup
		for range w.set.Workers {
			group.Go(work)
		}
		group.Wait()
	}
	w.blocks++
	w.run.Steps += steps
	return nil
}

// count returns the number of particles of the chunks that take part.
func (w *swarm) count(part func(chunk int) bool) int {
	n := 0
	for i := range w.chunks {
		if part(i) {
			n += len(w.chunks[i].vx)
		}
	}
	return n
}

// replenish doubles the particles of the chunks that take part once half of them are lost.
func (w *swarm) replenish(keep int, part func(chunk int) bool) {
	if n := w.count(part); n == 0 || 2*n > keep {
		return
	}
	for i := range w.chunks {
		if part(i) {
			w.chunks[i].double()
		}
	}
	w.run.Doublings++
}

// thin keeps a random choice of the particles of the chunks that take part, every subset of the
// size being equally likely, and deals them out evenly.
//
// Ref: C. T. Fan, M. E. Muller and I. Rezucha, J. Am. Stat. Assoc. 57, 387 (1962).
func (w *swarm) thin(keep int, part func(chunk int) bool) {
	s := rng.Key{
		Seed: w.set.Seed, Purpose: rng.Swarm, Species: streamThinning, Step: w.blocks,
	}.Stream()
	left := w.count(part)
	var kept swarmChunk
	members := 0
	for i := range w.chunks {
		if !part(i) {
			continue
		}
		members++
		c := &w.chunks[i]
		for k := range c.vx {
			if s.Float64()*float64(left) < float64(keep-len(kept.vx)) {
				kept.add(c.vx[k], c.vy[k], c.vz[k], c.x[k], c.y[k], c.z[k])
			}
			left--
		}
		c.cut(0)
	}
	dealt := 0
	for i := range w.chunks {
		if !part(i) {
			continue
		}
		upTo := dealt + (keep-dealt+members-1)/members
		for k := dealt; k < upTo; k++ {
			w.chunks[i].add(kept.vx[k], kept.vy[k], kept.vz[k], kept.x[k], kept.y[k], kept.z[k])
		}
		dealt, members = upTo, members-1
	}
	w.run.Doublings++
}
