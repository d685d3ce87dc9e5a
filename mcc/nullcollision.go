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
	if m.settings.Projectile == "e" {
		m.collideElectrons(s, vx, vy, vz, out)
		return
	}
	m.collideIons(s, vx, vy, vz, out)
}

func (m *Model) collideElectrons(s *rng.Stream, vx, vy, vz []float64, out *Outcome) {
	t := &m.groups[0].table
	vy, vz = vy[:len(vx)], vz[:len(vx)]
	gap := 1 / m.rate
	for at := s.Exponential() * gap; at < float64(len(vx)); at += s.Exponential() * gap {
		i := int(at)
		x, y, z := vx[i], vy[i], vz[i]
		ahead := 0.0
		if out.Advance != nil {
			ahead = out.Advance.HalfKick(i)
			x += ahead
		}
		v2 := x*x + y*y + z*z
		v := math.Sqrt(v2)
		c := t.pick(v, s.Float64())
		if c < 0 {
			continue
		}
		if v > t.end {
			out.Beyond++
		}
		ch := &m.channels[c]
		n0 := len(out.Births)
		x, y, z, ok := ch.electron(s, x, y, z, int32(i), int32(c), out)
		if !ok {
			continue
		}
		vx[i], vy[i], vz[i] = x-ahead, y, z
		after := x*x + y*y + z*z
		if len(out.Births) > n0 {
			e := &out.Births[n0].Electron
			after += e[0]*e[0] + e[1]*e[1] + e[2]*e[2]
			e[0] -= ahead
		}
		out.Counts[c]++
		out.Loss[c] += v2 - after
		if out.KeepEvents && ch.process.Kind != crosssections.Elastic {
			out.Events = append(out.Events, Event{int32(i), int32(c)})
		}
	}
}

// electron returns the electron's velocity after the collision; false if its energy does not
// reach the threshold (the table is linear between rows on both sides of it).
func (c *channel) electron(s *rng.Stream, x, y, z float64, i, index int32, out *Outcome) (
	_, _, _ float64, ok bool) {
	ux, uy, uz := c.thermal*s.Normal(), c.thermal*s.Normal(), c.thermal*s.Normal()
	gx, gy, gz := x-ux, y-uy, z-uz
	rest := gx*gx + gy*gy + gz*gz - c.loss2
	if rest < 0 {
		return 0, 0, 0, false
	}
	if c.process.Kind == crosssections.Ionization {
		// Half of the excess energy each: mu (g^2 - loss2)/2 = 2 x m g'^2/2, with mu = share m.
		g := math.Sqrt(0.5 * c.share * rest)
		ex, ey, ez := s.Direction()
		out.Births = append(out.Births, Birth{
			Parent: i, Channel: index,
			Electron: [3]float64{ux + g*ex, uy + g*ey, uz + g*ez},
			Ion:      [3]float64{ux, uy, uz},
		})
		ex, ey, ez = s.Direction()
		return ux + g*ex, uy + g*ey, uz + g*ez, true
	}
	g := math.Sqrt(rest)
	ex, ey, ez := s.Direction()
	f := c.share
	return x + f*(g*ex-gx), y + f*(g*ey-gy), z + f*(g*ez-gz), true
}

func (m *Model) collideIons(s *rng.Stream, vx, vy, vz []float64, out *Outcome) {
	vy, vz = vy[:len(vx)], vz[:len(vx)]
	gap := 1 / m.rate
	for at := s.Exponential() * gap; at < float64(len(vx)); at += s.Exponential() * gap {
		i := int(at)
		k := 0
		if len(m.groups) > 1 {
			for u := s.Float64(); u >= m.groups[k].upTo; k++ {
			}
		}
		gr := &m.groups[k]
		x, y, z := vx[i], vy[i], vz[i]
		ahead := 0.0
		if out.Advance != nil {
			ahead = out.Advance.HalfKick(i)
			x += ahead
		}
		ux, uy, uz := gr.thermal*s.Normal(), gr.thermal*s.Normal(), gr.thermal*s.Normal()
		gx, gy, gz := x-ux, y-uy, z-uz
		g := math.Sqrt(gx*gx + gy*gy + gz*gz)
		c := gr.table.pick(g, s.Float64())
		if c < 0 {
			continue
		}
		if g > gr.table.end {
			out.Beyond++
		}
		c += gr.first
		ch := &m.channels[c]
		before := x*x + y*y + z*z
		f := ch.share
		if ch.process.Kind == crosssections.Backscatter {
			x, y, z = x-2*f*gx, y-2*f*gy, z-2*f*gz
		} else {
			ex, ey, ez := s.Direction()
			x, y, z = x+f*(g*ex-gx), y+f*(g*ey-gy), z+f*(g*ez-gz)
		}
		vx[i], vy[i], vz[i] = x-ahead, y, z
		out.Counts[c]++
		out.Loss[c] += before - (x*x + y*y + z*z)
		if out.KeepEvents {
			out.Events = append(out.Events, Event{int32(i), int32(c)})
		}
	}
}
