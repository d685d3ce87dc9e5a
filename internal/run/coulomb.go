package run

import (
	"ionfall/mcc"
	"ionfall/pic"
)

const (
	// mostTurn bounds nu dt between two collisions of an electron with others: at 1e-3 an
	// anisotropy dies as fast as with 2e-4, at 1e-2 12 to 15 % too slowly (bulk temperature; the
	// homogeneous model, from which nu comes, may be a factor of 3 off).
	mostTurn = 2e-4
	// leastRelaxations in a period of the fundamental.
	leastRelaxations = 4
)

// relaxation returns the collisions of the electrons with each other, as often as the expected
// plasma needs them. Its Coulomb logarithm holds for the whole run: a factor of 3 in the density
// changes it by 5 %.
func (p *Plan) relaxation(c *pic.Config) pic.Relaxation {
	if !p.Case.CoulombCollisions {
		return pic.Relaxation{}
	}
	q, _ := p.firstGuess()
	logarithm := mcc.CoulombLogarithm(q.Density, q.ElectronEV)
	nu := mcc.CoulombFrequency(q.Density, q.ElectronEV, logarithm)
	every := 1
	for k := 2; k <= c.StepsPerPeriod/leastRelaxations; k++ {
		if c.StepsPerPeriod%k == 0 && nu*c.TimeStep()*float64(k) < mostTurn {
			every = k
		}
	}
	return pic.Relaxation{Pairs: mcc.NewCoulomb(logarithm, c.VelocityUnit(1)), Every: every}
}
