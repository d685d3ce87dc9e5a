package mcc

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

const (
	// balanceStart is where the search for a balance of energy starts in a cold gas [eV].
	balanceStart = 1e-3
	// balanceEnd is where it gives up: the field wins at any energy of a discharge [eV].
	balanceEnd = 1e4
)

// speedAt returns the speed of a particle of the energy [m/s].
func speedAt(energyEV, mass float64) float64 {
	return math.Sqrt(2 * energyEV * phys.ElementaryCharge / mass)
}

// balanceEnergy estimates the mean energy [eV] of a swarm from that of one particle: the lowest
// energy above the thermal one at which the mean loss by collisions outweighs what the field
// gives against friction, (q E)^2/(m nu_m). It serves as a scale only: for the hot start, the
// first time step and the tables.
func (m *Model) balanceEnergy(force, thermalEV float64) float64 {
	mass := m.settings.Mass
	const ratio = 1.05
	e := max(thermalEV, balanceStart)
	for ; e < balanceEnd; e *= ratio {
		friction, loss := m.friction(e, thermalEV)
		gain := force * force / (mass * friction) / phys.ElementaryCharge
		if friction > 0 && loss > gain {
			break
		}
	}
	return e
}

// friction returns the frequency of momentum transfer [1/s] and the mean power lost [eV/s] at
// the energy, from the cross sections themselves, for a target at rest.
func (m *Model) friction(energyEV, thermalEV float64) (momentum, loss float64) {
	g := speedAt(energyEV, m.settings.Mass)
	for i := range m.channels {
		c := &m.channels[i]
		nu := c.density * c.process.Table.At(c.energyEV(g)) * g
		part := 2 * c.share * (1 - c.share) * (energyEV - thermalEV)
		switch c.process.Kind {
		case crosssections.Backscatter:
			momentum += 2 * c.share * nu
			loss += 2 * part * nu
		case crosssections.Ionization:
			// A second particle shares the energy.
			momentum += nu
			loss += (c.process.Threshold + energyEV) * nu
		case crosssections.Attachment, crosssections.Reaction:
			momentum += nu // those that stay have not lost anything
		default:
			momentum += c.share * nu
			loss += (part + c.process.Threshold) * nu
		}
	}
	return momentum, loss
}

// frequency returns the collision frequency [1/s] of a particle of the speed, in a gas that moves
// with its mean thermal energy.
func (m *Model) frequency(speed float64) float64 {
	sum := 0.0
	for i := range m.channels {
		c := &m.channels[i]
		thermal := c.thermal * m.settings.Unit
		g := math.Sqrt(speed*speed + 3*thermal*thermal)
		sum += c.density * c.process.Table.At(c.energyEV(g)) * g
	}
	return sum
}
