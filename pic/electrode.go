package pic

import (
	"math"

	"ionfall/internal/kernels"
	"ionfall/internal/rng"
)

// leave takes the particles that crossed a wall out of chunk c, or sends them back. out holds
// their indices in increasing order; they are treated from the last, so that filling the gap
// with the chunk's last particle never moves one that is still to come.
func (s *Simulation) leave(w *worker, i, c int, out []int32) {
	sp := &s.species[i]
	ch := &sp.chunks[c]
	stream := rng.Key{
		Seed: s.config.Seed, Purpose: rng.Walls,
		Species: uint16(i), Chunk: uint32(c), Step: uint64(w.step),
	}.Stream()
	cells := float64(s.config.Cells)
	for k := len(out) - 1; k >= 0; k-- {
		p := int(out[k])
		wall, kick := Powered, w.kick[i][0]
		depth := -ch.x[p] // how far behind the wall
		if ch.x[p] > 0.5*cells {
			wall, kick = Grounded, w.kick[i][s.config.Cells-1]
			kick.A += kick.D
			depth = ch.x[p] - cells
		}
		if i == 0 && sp.Charge < 0 && s.config.Electrodes[wall].ElectronReflection > 0 &&
			stream.Float64() < s.config.Electrodes[wall].ElectronReflection {
			if s.reflect(w, i, ch, p, wall, kick.A, depth) {
				continue
			}
		}
		electron := i == 0 && sp.Charge < 0 && s.config.Electrodes[wall].Emission != nil
		if electron && s.rebound(w, &stream, i, ch, p, wall, kick.A, depth) {
			continue
		}
		ch.take(p, wall, kick.A, depth)
		if wall == Powered {
			w.absorbed[(w.step+1)&1] += int64(sp.Charge)
		}
		switch hit := &ch.hits[len(ch.hits)-1]; {
		case electron:
			s.emitByElectron(w, &stream, c, hit)
		case s.emits(i, wall):
			s.emit(w, &stream, c, wall, s.yield(i, hit))
		}
	}
}

// take removes particle p, counting its energy and noting its velocity where it crossed the
// wall: a part f of the move after its start, v = v^(n+1/2) + a (f - 1/2).
func (c *chunk) take(p int, wall Wall, a, depth float64) {
	vx, vy, vz := c.vx[p], c.vy[p], c.vz[p]
	f := 1.0
	if speed := math.Abs(vx); speed > 0 {
		f = 1 - max(0, min(1, depth/speed))
	}
	hit := vx + a*(f-0.5)
	if hit*vx < 0 {
		hit = 0
	}
	c.tally.absorbed[wall]++
	c.tally.absorbedV2[wall] += hit*hit + vy*vy + vz*vz
	c.hits = append(c.hits, Hit{wall, hit, vy, vz})
	c.remove(p)
}

// reflect sends particle p back from the wall; false if it would be out at the other side. The
// particle flies the parabola of the field at the wall, of kick a, before and after the turn:
// mirroring the end of the step instead would heat what bounces in a sheath, by (a v)^2/3 each
// time. With y and u the distance and velocity into the gap, u^2 = u0^2 - 2 a y0 at the wall.
func (s *Simulation) reflect(
	w *worker, i int, ch *chunk, p int, wall Wall, a, depth float64,
) bool {
	if s.area != nil {
		return s.mirror(w, i, ch, p, wall, depth)
	}
	u := ch.vx[p]
	if wall == Grounded {
		u, a = -u, -a
	}
	y0, u0 := -depth-u, u-0.5*a
	turn := math.Sqrt(max(0, u0*u0-2*a*y0))
	rest := 1 - 2*y0/(turn-u0) // of the step, after the turn
	x := turn*rest + 0.5*a*rest*rest
	if x > 0 {
		u = turn + a*(rest-0.5)
	} else { // it hops along the wall, more than once a step
		x, u = depth, -u
	}
	x = max(x, 0x1p-20) // more than the rounding of positions
	if wall == Grounded {
		x, u = float64(s.config.Cells)-x, -u
	}
	if !kernels.Inside(x, s.config.Cells) {
		return false
	}
	ch.x[p], ch.vx[p] = x, u
	ch.tally.reflected[wall]++
	kernels.Deposit(ch.x[p:p+1], w.deposit[(w.step+1)&1][i])
	return true
}

// absorb shows the observers what the electrodes took from chunk c.
func (s *Simulation) absorb(_ *worker, i, c int) {
	hits := s.species[i].chunks[c].hits
	if len(hits) == 0 {
		return
	}
	for _, o := range s.observers {
		o.Hits(i, c, hits)
	}
}
