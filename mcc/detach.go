package mcc

import (
	"math"

	"ionfall/internal/phys"
	"ionfall/internal/rng"
)

// Detachment is the kinematics of e + A- -> A + 2 e. It is read-only.
type Detachment struct {
	electron, ion float64 // masses [kg]
	threshold     float64 // [J]
	width         float64 // of OpalSharing [J]
	sharing       Sharing
}

// NewDetachment returns the kinematics for the masses of electron and negative ion [kg], at the
// cost of the threshold [eV].
func NewDetachment(masses [2]float64, thresholdEV float64, sharing Sharing) *Detachment {
	threshold := thresholdEV * phys.ElementaryCharge
	return &Detachment{
		electron: masses[0], ion: masses[1], threshold: threshold, width: opalPart * threshold,
		sharing: sharing,
	}
}

// Detached are the velocities after a detachment.
type Detached struct {
	Electrons [2][3]float64 // the one that came and the one set free
	Neutral   [3]float64
}

// Free lets an electron of velocity v detach that of an ion of velocity ion, all in units of unit
// [m/s]; false if the energy does not reach. In the centre of mass both electrons go out
// isotropically and share what is left above the threshold; the neutral balances the momentum. All
// three are then slowed by the same factor, off from 1 by about the ratio of the masses, so that
// momentum and energy are those before, less the threshold.
func (d *Detachment) Free(s *rng.Stream, v, ion [3]float64, unit float64) (out Detached, ok bool) {
	e, i := velocity{v[0], v[1], v[2]}, velocity{ion[0], ion[1], ion[2]}
	m, all := d.electron, d.electron+d.ion
	g := e.minus(i)
	rest := 0.5*m*d.ion/all*g.square() - d.threshold/(unit*unit)
	if rest <= 0 {
		return out, false
	}
	part := d.sharing.share(s, d.width/(unit*unit)/rest)
	first := velocity{}.plus(math.Sqrt(2*(1-part)*rest/m), direction(s))
	second := velocity{}.plus(math.Sqrt(2*part*rest/m), direction(s))
	neutral := d.ion - m
	back := velocity{}.plus(-m/neutral, first.plus(1, second))
	slow := math.Sqrt(rest / (rest + 0.5*neutral*back.square()))
	centre := i.plus(m/all, g)
	for k, u := range []velocity{first, second} {
		after := centre.plus(slow, u)
		out.Electrons[k] = [3]float64{after.x, after.y, after.z}
	}
	after := centre.plus(slow, back)
	out.Neutral = [3]float64{after.x, after.y, after.z}
	return out, true
}
