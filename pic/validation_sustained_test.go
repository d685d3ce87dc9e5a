package pic

import (
	"math"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/rng"
)

// sustained keeps a plasma up without a gas. Each ion that a wall takes is replaced by an ion at
// rest and an electron at a uniform place of the source region. Electrons are given velocities of
// a Maxwellian afresh at a small rate, which keeps their temperature and refills the fast part
// that the walls take; this conserves a Boltzmann distribution in any potential, and acts as
// friction of that rate. There are no other collisions.
type sustained struct {
	electron float64 // temperature [eV]
	rate     float64 // of new velocities [1/s]
	from, to float64 // source region, parts of the gap; new velocities are given there, too
	everyone bool    // new velocities are given in the whole gap
	stream   rng.Stream
	lost     int // ions since they were last replaced
	total    [2]float64
}

// load fills the source region, ions at rest.
func (p *sustained) load(t *testing.T, s *Simulation, count int) {
	t.Helper()
	p.stream = rng.Key{Seed: s.config.Seed, Purpose: rng.Loading, Species: 7}.Stream()
	profile := make([]float64, s.config.Cells+1)
	for j := range profile {
		if at := float64(j) / float64(s.config.Cells); at >= p.from && at <= p.to {
			profile[j] = 1
		}
	}
	temperature := p.electron * phys.ElementaryCharge / phys.Boltzmann
	for i, kelvin := range []float64{temperature, 0} {
		if err := s.Load(i, count, profile, kelvin); err != nil {
			t.Fatal(err)
		}
	}
}

// count enters ions that the walls took.
func (p *sustained) count(hits []Hit) {
	p.lost += len(hits)
	for _, h := range hits {
		p.total[h.Wall]++
	}
}

// step advances by one step and keeps the plasma up.
func (p *sustained) step(t *testing.T, s *Simulation) {
	t.Helper()
	mustAdvance(t, s, 1)
	cells := float64(s.config.Cells)
	speed := math.Sqrt(p.electron*phys.ElementaryCharge/phys.ElectronMass) / s.config.VelocityUnit(1)
	chunks := len(s.species[0].chunks)
	for ; p.lost > 0; p.lost-- {
		x := cells * (p.from + (p.to-p.from)*p.stream.Float64())
		inject(s, 0, p.lost%chunks, x, speed*p.stream.Normal(), speed*p.stream.Normal(),
			speed*p.stream.Normal())
		inject(s, 1, p.lost%chunks, x, 0, 0, 0)
	}
	next := func() float64 { return p.stream.Exponential() / (p.rate * s.config.TimeStep()) }
	for c := range s.species[0].chunks {
		ch := &s.species[0].chunks[c]
		for at := next(); at < float64(len(ch.x)); at += next() {
			i := int(at)
			if part := ch.x[i] / cells; p.everyone || part >= p.from && part <= p.to {
				ch.vx[i] = speed * p.stream.Normal()
				ch.vy[i], ch.vz[i] = speed*p.stream.Normal(), speed*p.stream.Normal()
			}
		}
	}
}

// debyeLength returns that of electrons [m].
func debyeLength(density, electronEV float64) float64 {
	return math.Sqrt(phys.Epsilon0 * electronEV / (density * phys.ElementaryCharge))
}
