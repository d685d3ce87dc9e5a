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
	Births []Birth
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
}

// Advancer tells how much vx changes between the time of the velocities and that of the
// collisions, in the model's unit.
type Advancer interface {
	HalfKick(i int) float64
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

// Collide collides the particles of velocities (vx, vy, vz), in the model's unit, for one time
// step. New particles are not added to the slices; they are in out.Births.
func (m *Model) Collide(s *rng.Stream, vx, vy, vz []float64, out *Outcome) {
	vy, vz = vy[:len(vx)], vz[:len(vx)]
	gap := 1 / m.rate
	for at := s.Exponential() * gap; at < float64(len(vx)); at += s.Exponential() * gap {
		i := int(at)
		gr := &m.groups[0]
		if len(m.groups) > 1 {
			gr = m.pickGroup(s.Float64())
		}
		v := velocity{vx[i], vy[i], vz[i]}
		ahead := 0.0
		if out.Advance != nil {
			ahead = out.Advance.HalfKick(i)
			v.x += ahead
		}
		u := s.Float64()
		if !gr.table.mayCollide(math.Sqrt(v.square()), u) {
			continue
		}
		target := velocity{gr.thermal * s.Normal(), gr.thermal * s.Normal(), gr.thermal * s.Normal()}
		g := math.Sqrt(v.minus(target).square())
		c := gr.table.pick(g, u)
		if c < 0 {
			continue
		}
		after, ok := m.channels[gr.first+c].collide(s, v, target, int32(i), int32(gr.first+c), out)
		if !ok {
			continue
		}
		if g > gr.table.end {
			out.Beyond++
		}
		vx[i], vy[i], vz[i] = after.x-ahead, after.y, after.z
		m.count(gr.first+c, i, v.square()-after.square(), ahead, out)
	}
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
		// Half of the excess energy each: mu (g^2 - loss2)/2 = 2 x m g'^2/2, with mu = share m.
		speed := math.Sqrt(0.5 * c.share * rest)
		born := target.plus(speed, direction(s))
		out.Births = append(out.Births, Birth{
			Parent: i, Channel: index,
			Electron: [3]float64{born.x, born.y, born.z},
			Ion:      [3]float64{target.x, target.y, target.z},
		})
		return target.plus(speed, direction(s)), true
	}
	turned := velocity{}.plus(math.Sqrt(rest), direction(s))
	return v.plus(c.share, turned.minus(g)), true
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
