package mcc

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/rng"
)

// Made is a particle that comes out of a collision and is not of the projectile's species: a
// product of a reaction, or a target that was hit hard.
type Made struct {
	Parent  int32
	Channel int32
	Product int32      // index into Process.Out; Recoil for the target
	V       [3]float64 // velocity in the model's unit, at the time of the projectiles' velocities
}

// Recoil is Made.Product of a target.
const Recoil = -1

// product is a product of a reaction, with its kinematics prepared.
type product struct {
	mass float64 // over the reduced mass of the collision
	kick float64 // change of velocity by the field over that of the projectile
}

// changing is what a channel needs to make particles of another species.
type changing struct {
	products   []product
	same       int     // index of the product that is the projectile itself, -1 for none
	gain2      float64 // 2 release/mu in the caller's unit squared
	scattering crosssections.Scattering
}

// newChanging prepares a channel of attachment or reaction; nil for others.
func newChanging(p *crosssections.Process, set *Settings, mu, unit float64) *changing {
	if p.Kind != crosssections.Attachment && p.Kind != crosssections.Reaction {
		return nil
	}
	c := &changing{
		same: -1, gain2: 2 * p.Release * phys.ElementaryCharge / mu / (unit * unit),
		scattering: p.Scattering,
	}
	for i, out := range p.Out {
		made := product{mass: out.Mass / mu}
		// Species that move at the same moments have half a kick in the same proportion.
		if set.Charge != 0 && out.Charge != 0 && out.Name != crosssections.ElectronName &&
			set.Projectile != crosssections.ElectronName {
			made.kick = float64(out.Charge) / float64(set.Charge) * set.Mass / out.Mass
		}
		if out.Name == set.Projectile && c.same < 0 {
			c.same = i
		}
		c.products = append(c.products, made)
	}
	return c
}

// change lets the projectile and the target become other particles. Momentum and energy are those
// before, less the threshold and with the release. With more than two products the energy is
// shared out at random, one product after the other. A projectile that is not among the products
// is noted in Outcome.Gone.
func (m *Model) change(
	s *rng.Stream, v, target velocity, i, index int32, ahead float64, out *Outcome,
) (after velocity, ok bool) {
	c := &m.channels[index]
	g := v.minus(target)
	rest := g.square() - c.loss2
	if rest < 0 {
		return v, false
	}
	d := c.changing
	frame := v.plus(-c.share, g)
	energy := 0.5 * (rest + d.gain2) // over the reduced mass
	left := 0.0
	for _, p := range d.products {
		left += p.mass
	}
	along := direction(s)
	if forward := g.square(); d.scattering != crosssections.Anywhere && forward > 0 {
		k := 1 / math.Sqrt(forward)
		if d.scattering == crosssections.Backward {
			k = -k
		}
		along = velocity{}.plus(k, g)
	}
	last := len(d.products) - 1
	for k := range d.products {
		speed := frame
		if k < last {
			one, others := d.products[k].mass, left-d.products[k].mass
			part := energy
			if k < last-1 {
				part *= s.Float64()
			}
			relative := math.Sqrt(2 * part * left / (one * others))
			speed = frame.plus(relative*others/left, along)
			frame = frame.plus(-relative*one/left, along)
			energy, left = energy-part, others
			along = direction(s)
		}
		if k == d.same {
			after = speed
			continue
		}
		out.Made = append(out.Made, Made{
			Parent: i, Channel: index, Product: int32(k),
			V: [3]float64{speed.x - ahead*d.products[k].kick, speed.y, speed.z},
		})
	}
	lost := v.square()
	if d.same >= 0 {
		lost -= after.square()
	} else {
		out.Gone = append(out.Gone, i)
	}
	out.Counts[index]++
	out.Loss[index] += lost
	if out.KeepEvents {
		out.Events = append(out.Events, Event{i, index})
	}
	return after, d.same >= 0
}

// recoil reports a target that was hit hard, and ends a projectile that has become slow.
func (m *Model) recoil(
	v, target, after velocity, i int32, index int, gr *group, out *Outcome,
) (goes bool) {
	if gr.recoil2 > 0 {
		// Momentum is conserved: m (v - after) = M (hit - target).
		hit := target.plus(m.channels[index].heavier, v.minus(after))
		if hit.square() > gr.recoil2 {
			out.Made = append(out.Made, Made{
				Parent: i, Channel: int32(index), Product: Recoil, V: [3]float64{hit.x, hit.y, hit.z},
			})
		}
	}
	if m.stop2 > 0 && after.square() < m.stop2 {
		out.Loss[index] += after.square()
		out.Gone = append(out.Gone, i)
		return false
	}
	return true
}
