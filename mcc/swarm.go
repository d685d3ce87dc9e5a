package mcc

import (
	"context"
	"errors"
	"fmt"
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// townsend is the unit of the reduced field E/N [V m2].
const townsend = 1e-21

// SwarmSettings describe a swarm: one species of charged particles in a uniform field, without
// boundaries and without space charge. Zero values mean the defaults given.
type SwarmSettings struct {
	Projectile string  // "e", or an ion's name
	Mass       float64 // m [kg]; default: the electron's, or that of the ion declared by the gas
	Charge     int     // in elementary charges, its sign does not matter; default 1
	Field      float64 // E/N [Td], not negative

	// RelativeError is the standard error asked for of the mean energy and the flux drift
	// velocity, as a part of the value; default 0.01.
	RelativeError float64
	// RateError is the same for the ionization rate coefficient; 0 asks for nothing.
	RateError float64
	MaxSteps  int // budget, in steps of all particles; default 20 million

	Particles int // smallest number of particles; default 4096
	// Step is the time step in mean times between collisions: the squares of the collision
	// frequency and the step are averaged. The error of the step is of the order Step^2/12;
	// default 0.1, an error of 0.1 %.
	Step float64
	Seed uint64
	// Sharing and Scattering are the choices of the collision model of electrons.
	Sharing    Sharing
	Scattering Scattering
	// Workers is the number of goroutines; default 1. Results do not depend on it.
	Workers int
}

const (
	// swarmChunks is the number of independent parts of a swarm, half of them started cold and
	// half hot. It is fixed, so that results do not depend on the number of workers.
	swarmChunks = 16
	// minSwarmParticles keeps enough particles in a chunk for its mean energy to be nearly normal.
	minSwarmParticles = 16 * swarmChunks
	maxSwarmParticles = 10_000_000
	// maxSwarmStep is where the error of the step exceeds a few percent.
	maxSwarmStep = 0.7
)

// filled returns the settings with defaults in place of zeros.
func (set SwarmSettings) filled(gas []Background) SwarmSettings {
	if set.Mass == 0 {
		set.Mass = projectileMass(set.Projectile, gas)
	}
	if set.Charge == 0 {
		set.Charge = 1
	}
	if set.RelativeError == 0 {
		set.RelativeError = 0.01
	}
	if set.MaxSteps == 0 {
		set.MaxSteps = 20_000_000
	}
	if set.Particles == 0 {
		set.Particles = 4096
	}
	if set.Step == 0 {
		set.Step = 0.1
	}
	set.Workers = min(max(set.Workers, 1), swarmChunks)
	return set
}

// projectileMass looks the projectile up among the ions of the gases; 0 if none declares it.
func projectileMass(name string, gas []Background) float64 {
	if name == crosssections.ElectronName {
		return phys.ElectronMass
	}
	for _, b := range gas {
		if ion, ok := b.Gas.Ion(name); ok {
			return ion.Mass
		}
	}
	return 0
}

// check returns everything that is wrong with filled settings.
func (set SwarmSettings) check(gas []Background) error {
	var list []error
	want := func(ok bool, format string, values ...any) {
		if !ok {
			list = append(list, fmt.Errorf("swarm: "+format, values...))
		}
	}
	want(set.Mass > 0 && !math.IsInf(set.Mass, 1),
		"mass of %q: got %g kg, want more than 0 or an ion the gas declares",
		set.Projectile, set.Mass)
	want(set.Field >= 0 && set.Field <= 1e6, "field: got %g Td, want 0 to 1e6 Td", set.Field)
	want(set.RelativeError > 0, "relative error: got %g, want more than 0", set.RelativeError)
	want(set.RateError >= 0, "rate error: got %g, want 0 or more", set.RateError)
	want(set.MaxSteps > 0, "steps: got %d, want more than 0", set.MaxSteps)
	want(set.Particles >= minSwarmParticles && set.Particles <= maxSwarmParticles,
		"particles: got %d, want %d to %d", set.Particles, minSwarmParticles, maxSwarmParticles)
	want(set.Step > 0 && set.Step <= maxSwarmStep,
		"step: got %g, want more than 0 and at most %g", set.Step, maxSwarmStep)
	want(len(gas) > 0, "no gas")
	for _, b := range gas {
		want(b.Density > 0 && !math.IsInf(b.Density, 1),
			"density of %s: got %g /m3, want more than 0", b.Gas.Name, b.Density)
		want(b.Temperature >= 0 && b.Temperature <= 1e5,
			"temperature of %s: got %g K, want 0 to 1e5 K", b.Gas.Name, b.Temperature)
	}
	return errors.Join(list...)
}

// Swarm follows charged particles in a uniform field and gas with the collisions of Model until
// their transport coefficients are known to the errors asked for or the budget is spent.
//
// Half of the swarm starts at rest with the gas and half twice as hot as it can stay; it counts
// as relaxed some time after the two can no longer be told apart. Then batches in time are
// averaged. Between collisions the motion is exact, and velocities are observed in the middle of
// a step, which makes the splitting into flight and collisions symmetric and its error
// quadratic in the step. Ionization makes the swarm grow; when it has doubled, it is thinned at
// random, and the jumps that this causes are left out of the drift and the spread.
//
// Ref: R. E. Robson, Aust. J. Phys. 44, 685 (1991) for flux and bulk coefficients (from memory).
func Swarm(ctx context.Context, gas []Background, set SwarmSettings) (SwarmResult, error) {
	set = set.filled(gas)
	if err := set.check(gas); err != nil {
		return SwarmResult{}, err
	}
	w, err := newSwarm(gas, set)
	if err != nil {
		return SwarmResult{}, err
	}
	if err := w.relax(ctx); err != nil {
		return SwarmResult{}, err
	}
	return w.measure(ctx)
}
