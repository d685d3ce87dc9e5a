package pic

import (
	"math"
	"testing"
)

// account adds up ledgers: energy in, and where it went [J/m2].
type account struct {
	in, wall, gas, made, kinetic, field float64
}

func (a *account) add(l Ledger) {
	a.in += l.Electric
	a.kinetic, a.field = 0, l.Field
	for i, sp := range l.Species {
		a.wall += sp.WallEnergy[0] + sp.WallEnergy[1]
		for _, loss := range sp.Losses {
			a.gas += loss
		}
		a.made += sp.EmitEnergy
		if i > 0 { // an electron's own losses count what a new electron got, not its ion
			a.made += sp.BornEnergy
		}
		a.kinetic += sp.Kinetic
	}
}

// halfStep returns the work of the field on electrons over the half step by which velocities are
// behind [J/m2]: with it the kinetic energy belongs to the time of the field's.
func halfStep(s *Simulation) float64 {
	w, sp := s.workers[0], &s.species[0]
	s.sumCharge(w, s.step)
	s.solvePotential(w, s.step)
	s.differentiate(w)
	// differentiate adds to the sums of sub-cycled species: take that back.
	for i := range s.species {
		if s.species[i].Every > 1 {
			for j := range w.fieldSum[i] {
				w.fieldSum[i][j].A -= w.fieldA[j]
				w.fieldSum[i][j].D -= w.fieldD[j]
			}
			w.summed[i]--
		}
	}
	sum := 0.0
	for c := range sp.chunks {
		ch := &sp.chunks[c]
		for k, x := range ch.x {
			j := int(x)
			f := w.fieldA[j] + (x-float64(j))*w.fieldD[j]
			sum += sp.kickPerE * f * ch.vx[k]
		}
	}
	return sum * s.config.Weight * sp.energyPer
}

// missing returns the energy that is not accounted for, over that put in.
func (a account) missing(start account) float64 {
	stored := a.kinetic + a.field - start.kinetic - start.field
	return (a.in + a.made - a.wall - a.gas - stored) / a.in
}

// budget runs a discharge over whole periods and returns the unaccounted part of the energy and
// the collisions an electron makes in a step.
func budget(t *testing.T, scheme Scheme, steps, every, periods int, inert bool) (
	missing, collisions float64,
) {
	d := smallDischarge()
	d.scheme, d.steps, d.every, d.inert, d.plain = scheme, steps, every, inert, true
	d.particles, d.density, d.cells = 10_000, 3e14, 32
	s := d.build(t)
	mustAdvance(t, s, d.steps) // the first current is known at step 1
	var start, a account
	start.add(s.TakeLedger())
	start.kinetic += halfStep(s)
	moves := 0.0
	for range periods {
		mustAdvance(t, s, d.steps)
		l := s.TakeLedger()
		a.add(l)
		for _, n := range l.Species[0].Collisions {
			collisions += float64(n)
		}
		moves += float64(l.Species[0].Count) * float64(d.steps)
	}
	a.kinetic += halfStep(s)
	missing = a.missing(start)
	t.Logf("%v, %d steps, K %d, inert %v: in %.3g J/m2, walls %.3g, gas %.3g, missing %.5f",
		scheme, steps, every, inert, a.in, a.wall, a.gas, missing)
	return missing, collisions / moves
}

// Goal: what the drive puts in is found again in particles, field, walls and gas. Method: the
// ledgers of 20 periods (short: 5) of a discharge, from a quiet start.
//
// Without collisions what is missing is numerical heating. The energy-conserving scheme has none
// in the limit of small steps: halving dt must take off half of it at least. The momentum-
// conserving grid heats at any step. At 800 steps a period (omega_p dt = 0.09, dx = lambda_D)
// 1.1 and 1.4 % were measured in 20 periods; 2 % are allowed. With collisions the same heating is
// a smaller part of three times the power: 0.2 % were measured, 0.5 % are allowed. Half of the
// collisions an electron makes in a step, 1.1 % here, would be the error of colliding velocities
// half a step too early: the bound must tell the difference.
//
// Ref: C. K. Birdsall and A. B. Langdon, Plasma Physics via Computer Simulation (1985), ch. 4
// and 8; energy-conserving scheme: H. R. Lewis, J. Comput. Phys. 6, 136 (1970).
func TestEnergyBudget(t *testing.T) {
	const heating = 0.02
	periods := 20
	if testing.Short() {
		periods = 5
	}
	for _, scheme := range schemes() {
		for _, every := range []int{1, 8} {
			coarse, _ := budget(t, scheme, 400, every, periods, true)
			fine, _ := budget(t, scheme, 800, every, periods, true)
			second := scheme == MomentumConserving || math.Abs(fine) < math.Abs(coarse)/2
			if !(math.Abs(fine) < heating) || !second {
				t.Errorf("%v, K %d: %.4f of the energy is missing at 800 steps, %.4f at 400",
					scheme, every, fine, coarse)
			}
		}
		missing, collisions := budget(t, scheme, 800, 4, periods, false)
		if bound := 0.005; !(math.Abs(missing) < bound) || bound > collisions/4 {
			t.Errorf("%v: %.4f of the energy is missing, bound %.4f; %.4f collisions a step",
				scheme, missing, bound, collisions)
		}
	}
}
