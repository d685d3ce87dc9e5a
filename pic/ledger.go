package pic

import (
	"math"

	"ionfall/internal/phys"
)

// tally counts what happened to the particles of a chunk since the last ledger. Sums of v^2
// are in the species' units.
type tally struct {
	born                         int64    // by collisions
	gone                         int64    // ended by collisions
	emitted, reflected, absorbed [2]int64 // by wall
	bornV2                       float64
	goneV2                       float64 // of those that a pair's reaction ended or changed
	emittedV2                    float64
	absorbedV2                   [2]float64
}

// Ledger is the account of a stretch of steps: everything that changed the particles and the
// energy. Energies and numbers are per electrode area; numbers in units of particles, with
// the weight in Weight.
type Ledger struct {
	Step     int64   // at the end
	Steps    int64   // covered
	Weight   float64 // W [1/m2], constant over the stretch
	Species  []SpeciesLedger
	Electric float64 // energy delivered by the drive [J/m2]
	Field    float64 // energy of the field at the end [J/m2]
	Moved    int64   // particle moves made
}

// SpeciesLedger is one species' part of a Ledger.
type SpeciesLedger struct {
	Count      int64      // particles at the end
	Kinetic    float64    // energy at the end [J/m2]; velocities are half a step behind
	Born       int64      // by collisions
	Gone       int64      // ended by collisions: attached, neutralized, or of another species now
	BornEnergy float64    // [J/m2]
	GoneEnergy float64    // of those that a reaction of a pair ended or changed [J/m2]
	Absorbed   [2]int64   // by Wall
	WallEnergy [2]float64 // carried to it [J/m2]
	Emitted    [2]int64   // electrons set free at the Wall by ions
	EmitEnergy float64    // of these, of electrons set free by ions in the gas, or off ions [J/m2]
	Reflected  [2]int64
	Collisions []int64   // by channel
	Losses     []float64 // energy lost to the gas by channel [J/m2]
	Beyond     int64     // collisions judged by an extrapolated cross section
}

// TakeLedger closes the account since the last call and opens a new one.
func (s *Simulation) TakeLedger() Ledger {
	l := Ledger{
		Step: s.step, Steps: s.step - s.ledgerStart, Weight: s.config.Weight,
		Electric: s.electric, Field: s.fieldEnergy(), Moved: s.moved,
		Species: make([]SpeciesLedger, len(s.species)),
	}
	s.ledgerStart, s.electric, s.moved = s.step, 0, 0
	for i := range s.species {
		l.Species[i] = s.species[i].takeLedger(s.config.Weight)
	}
	return l
}

func (sp *Species) takeLedger(weight float64) SpeciesLedger {
	var l SpeciesLedger
	joule := weight * sp.energyPer
	if sp.Collisions != nil {
		n := len(sp.Collisions.Processes())
		l.Collisions, l.Losses = make([]int64, n), make([]float64, n)
	}
	for c := range sp.chunks {
		ch := &sp.chunks[c]
		t := &ch.tally
		l.Count += int64(len(ch.x))
		l.Kinetic += joule * ch.v2()
		l.Born += t.born
		l.Gone += t.gone
		l.BornEnergy += joule * t.bornV2
		l.GoneEnergy += joule * t.goneV2
		l.EmitEnergy += joule * t.emittedV2
		for w := range 2 {
			l.Absorbed[w] += t.absorbed[w]
			l.WallEnergy[w] += joule * t.absorbedV2[w]
			l.Emitted[w] += t.emitted[w]
			l.Reflected[w] += t.reflected[w]
		}
		*t = tally{}
		if o := ch.outcome; o != nil {
			for k := range o.Counts {
				l.Collisions[k] += o.Counts[k]
				l.Losses[k] += joule * o.Loss[k]
			}
			l.Beyond += o.Beyond
			clear(o.Counts)
			clear(o.Loss)
			o.Beyond = 0
		}
	}
	return l
}

// v2 returns the sum of v^2 over the chunk.
func (c *chunk) v2() float64 {
	sum := 0.0
	for i := range c.x {
		sum += c.vx[i]*c.vx[i] + c.vy[i]*c.vy[i] + c.vz[i]*c.vz[i]
	}
	return sum
}

// fieldEnergy returns eps0/2 times the integral of E^2 [J/m2], for the charges and the drive
// voltage of the current step.
func (s *Simulation) fieldEnergy() float64 {
	w := s.workers[0]
	s.sumCharge(w, s.step)
	s.solvePotential(w, s.step)
	dx := s.config.CellSize()
	sum := 0.0
	for j := range s.config.Cells {
		e := (w.phi[j] - w.phi[j+1]) / dx
		if s.poisson.face != nil {
			e *= math.Sqrt(s.poisson.face[j])
		}
		sum += e * e
	}
	return 0.5 * phys.Epsilon0 * sum * dx
}

// Kinetic returns the kinetic energy of each species [J/m2].
func (s *Simulation) Kinetic() []float64 {
	list := make([]float64, len(s.species))
	for i := range s.species {
		sp := &s.species[i]
		for c := range sp.chunks {
			list[i] += s.config.Weight * sp.energyPer * sp.chunks[c].v2()
		}
	}
	return list
}
