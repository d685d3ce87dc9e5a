package mcc

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/rng"
)

// Birth is a new electron and its ion, made by an electron at index Parent.
type Birth struct {
	Parent   int32
	Channel  int32
	Electron [3]float64 // velocity in the model's unit
	Ion      [3]float64 // velocity in the model's unit
}

// Outcome collects what collisions did. Collide adds to it; nothing is allocated once Births
// has grown.
type Outcome struct {
	Births []Birth   // of ionization by electrons
	Made   []Made    // other new particles
	Gone   []int32   // particles that are no longer of the species, in increasing order
	Counts []int64   // collisions by channel
	Loss   []float64 // sum of v^2 the particles lost, by channel, in units squared
	Events []Event   // non-elastic collisions and where they happened, if KeepEvents
	Beyond int64     // collisions above TopEnergy or by an extrapolated cross section
	// KeepEvents asks for Events.
	KeepEvents bool
	// Advance, if not nil, gives the velocity along x that particle i gains until the time of the
	// collision. Velocities that lag half a step behind are so collided at their own time:
	// without it, each collision would cost half a kick, an error of first order in the step.
	Advance Advancer

	work candidates
}

// Advancer tells how much vx of particles changes between the time of the velocities and that of
// the collisions, in the model's unit: change[k] for the particle index[k].
type Advancer interface {
	HalfKicks(index []int32, change []float64)
}

// Event is a collision of the particle at index Particle.
type Event struct {
	Particle int32
	Channel  int32
}

// NewOutcome returns an empty outcome for the model.
func (m *Model) NewOutcome() *Outcome {
	return &Outcome{Counts: make([]int64, len(m.channels)), Loss: make([]float64, len(m.channels))}
}

// batch is how many candidates are drawn and fetched together, so that waiting for one particle's
// memory overlaps with the next's.
const batch = 64

// candidates are particles that may collide, with their velocities at the time of the collision.
type candidates struct {
	n        int
	index    [batch]int32
	v        [batch]velocity
	ahead    [batch]float64
	at, stop float64 // in particle times
}

// draw fills the batch; false when the step is over.
func (c *candidates) draw(s *rng.Stream, gap float64) bool {
	for c.n = 0; c.n < batch && c.at < c.stop; c.n++ {
		c.index[c.n] = int32(c.at)
		c.at += s.Exponential() * gap
	}
	return c.n > 0
}

// Collide collides the particles of velocities (vx, vy, vz), in the model's unit, for one time
// step. New particles are not added to the slices; they are in out.Births.
func (m *Model) Collide(s *rng.Stream, vx, vy, vz []float64, out *Outcome) {
	vy, vz = vy[:len(vx)], vz[:len(vx)]
	gap := 1 / m.rate
	takes := m.takes
	c := &out.work
	c.at, c.stop = s.Exponential()*gap, float64(len(vx))
	if out.Advance == nil {
		clear(c.ahead[:])
	}
	for c.draw(s, gap) {
		if out.Advance != nil {
			out.Advance.HalfKicks(c.index[:c.n], c.ahead[:c.n])
		}
		for k, i := range c.index[:c.n] {
			c.v[k] = velocity{vx[i] + c.ahead[k], vy[i], vz[i]}
		}
		for k, i := range c.index[:c.n] {
			if takes && len(out.Gone) > 0 && out.Gone[len(out.Gone)-1] == i {
				continue
			}
			if k > 0 && c.index[k-1] == i { // may have collided a moment ago
				c.v[k] = velocity{vx[i] + c.ahead[k], vy[i], vz[i]}
			}
			if after, ok := m.tryOne(s, c.v[k], i, c.ahead[k], out); ok {
				vx[i], vy[i], vz[i] = after.x-c.ahead[k], after.y, after.z
			}
		}
	}
}

// tryOne decides about candidate i of velocity v and returns its velocity after a collision.
func (m *Model) tryOne(s *rng.Stream, v velocity, i int32, ahead float64, out *Outcome) (
	after velocity, ok bool,
) {
	gr := &m.groups[0]
	if len(m.groups) > 1 {
		gr = m.pickGroup(s.Float64())
	}
	u := s.Float64()
	if !gr.table.mayCollide(math.Sqrt(v.square()), u) {
		return v, false
	}
	target := velocity{gr.thermal * s.Normal(), gr.thermal * s.Normal(), gr.thermal * s.Normal()}
	g := math.Sqrt(v.minus(target).square())
	c := gr.table.pick(g, u)
	if c < 0 {
		return v, false
	}
	c += gr.first
	if m.channels[c].changing != nil {
		before := out.Counts[c]
		after, ok = m.change(s, v, target, i, int32(c), ahead, out)
		if g > m.channels[c].end {
			out.Beyond += out.Counts[c] - before
		}
		return after, ok
	}
	after, ok = m.channels[c].collide(s, v, target, i, int32(c), out)
	if !ok {
		return v, false
	}
	if g > m.channels[c].end {
		out.Beyond++
	}
	m.count(c, int(i), v.square()-after.square(), ahead, out)
	if m.recoils {
		return after, m.recoil(v, target, after, i, c, gr, out)
	}
	return after, true
}

// pickGroup returns the group that the uniform number u selects.
func (m *Model) pickGroup(u float64) *group {
	k := 0
	for u >= m.groups[k].upTo {
		k++
	}
	return &m.groups[k]
}

// count enters a collision into the outcome. A birth's share of the energy has not been lost.
func (m *Model) count(c, i int, lost, ahead float64, out *Outcome) {
	kind := m.channels[c].process.Kind
	if kind == crosssections.Ionization {
		e := &out.Births[len(out.Births)-1].Electron
		lost -= e[0]*e[0] + e[1]*e[1] + e[2]*e[2]
		e[0] -= ahead
	}
	out.Counts[c]++
	out.Loss[c] += lost
	if out.KeepEvents && kind != crosssections.Elastic {
		out.Events = append(out.Events, Event{int32(i), int32(c)})
	}
}

// collide returns the projectile's velocity after a collision with the target; false if the energy
// does not reach the threshold (the table is linear between rows on both sides of it).
func (c *channel) collide(
	s *rng.Stream, v, target velocity, i, index int32, out *Outcome,
) (after velocity, ok bool) {
	g := v.minus(target)
	if c.process.Kind == crosssections.Backscatter {
		return v.plus(-2*c.share, g), true
	}
	rest := g.square() - c.loss2
	if rest < 0 {
		return v, false
	}
	if c.process.Kind == crosssections.Ionization {
		// The parts of the excess energy: mu (g^2 - loss2)/2 = m (g1^2 + g2^2)/2, mu = share m.
		part := 0.5
		if c.sharing != EqualSharing {
			part = c.sharing.share(s, c.width2/rest)
		}
		second, speed := math.Sqrt(part*c.share*rest), math.Sqrt((1-part)*c.share*rest)
		born := target.plus(second, direction(s))
		out.Births = append(out.Births, Birth{
			Parent: i, Channel: index,
			Electron: [3]float64{born.x, born.y, born.z},
			Ion:      [3]float64{target.x, target.y, target.z},
		})
		return target.plus(speed, direction(s)), true
	}
	var to velocity
	if c.scattering == ScreenedCoulomb {
		to = turned(s, g, math.Sqrt(rest), forwardness(c.energyEV(math.Sqrt(g.square()*c.unit2))))
	} else {
		to = velocity{}.plus(math.Sqrt(rest), direction(s))
	}
	return v.plus(c.share, to.minus(g)), true
}

// velocity is a velocity.
type velocity struct{ x, y, z float64 }

func direction(s *rng.Stream) velocity {
	x, y, z := s.Direction()
	return velocity{x, y, z}
}

func (a velocity) square() float64 { return a.x*a.x + a.y*a.y + a.z*a.z }

func (a velocity) minus(b velocity) velocity { return velocity{a.x - b.x, a.y - b.y, a.z - b.z} }

// plus returns a + k b.
func (a velocity) plus(k float64, b velocity) velocity {
	return velocity{a.x + k*b.x, a.y + k*b.y, a.z + k*b.z}
}
