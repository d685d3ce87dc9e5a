package pic

import (
	"ionfall/internal/kernels"
	"ionfall/internal/rng"
)

// carryDensity prepares the other side of the deposits: species that move start from nothing,
// those that rest keep what they had.
func (s *Simulation) carryDensity(w *worker) {
	now, next := w.step&1, (w.step+1)&1
	for i := range s.species {
		if s.species[i].due(w.step) {
			clear(w.deposit[next][i])
		} else {
			copy(w.deposit[next][i], w.deposit[now][i])
		}
	}
	w.absorbed[next] = 0
}

// collide collides chunk c of species i with the gas, before it moves: a new pair of charges
// starts at one place, so the field does not change.
func (s *Simulation) collide(w *worker, i, c int) {
	sp := &s.species[i]
	if sp.Collisions == nil {
		return
	}
	ch := &sp.chunks[c]
	stream := rng.Key{
		Seed: s.config.Seed, Purpose: rng.Collisions,
		Species: uint16(i), Chunk: uint32(c), Step: uint64(w.step),
	}.Stream()
	out := ch.outcome
	out.Births, out.Events = out.Births[:0], out.Events[:0]
	out.Made, out.Gone = out.Made[:0], out.Gone[:0]
	w.half = halfKick{ch.x, w.kick[i]}
	out.Advance = &w.half
	sp.Collisions.Collide(&stream, ch.vx, ch.vy, ch.vz, out)
	if len(s.observers) > 0 && len(out.Events) > 0 {
		w.events = w.events[:0]
		for _, e := range out.Events {
			w.events = append(w.events, Event(e))
		}
		for _, o := range s.observers {
			o.Events(w.step, i, c, ch.x, w.events)
		}
	}
	for b := range out.Births {
		birth := &out.Births[b]
		s.bear(w, sp, c, sp.ionOf[birth.Channel], ch.x[birth.Parent], birth.Electron, birth.Ion)
	}
	if len(out.Made)+len(out.Gone) > 0 {
		s.change(w, i, c, out)
	}
}

// halfKick brings a particle's velocity from n-1/2 to n, where its position is and the collision
// happens (mcc.Advancer).
type halfKick struct {
	x    []float64
	kick []kernels.Field
}

// HalfKicks implements mcc.Advancer.
func (h *halfKick) HalfKicks(index []int32, change []float64) {
	x, kick := h.x, h.kick
	for k, i := range index {
		j := int(x[i])
		f := &kick[j]
		change[k] = 0.5 * (f.A + (x[i]-float64(j))*f.D)
	}
}

// push kicks and moves chunk c of species i and deposits it for the next step.
func (s *Simulation) push(w *worker, i, c int) {
	ch := &s.species[i].chunks[c]
	n := len(ch.x)
	if len(ch.out) < n { // births beyond what was reserved
		ch.out = make([]int32, n+n/4)
	}
	acc := w.deposit[(w.step+1)&1][i]
	var left int
	if s.config.Geometry.Shape == Plates {
		left = s.config.Kernels.PushDeposit(ch.x, ch.vx, w.kick[i], acc, ch.out)
	} else {
		left = s.pushShells(ch, w.kick[i], acc)
	}
	w.moved += int64(n)
	ch.hits = ch.hits[:0]
	if left > 0 {
		s.leave(w, i, c, ch.out[:left])
	}
}

// startLeapfrog takes velocities half a move back, from time 0 to -1/2.
func (s *Simulation) startLeapfrog() {
	w := s.workers[0]
	s.sumCharge(w, 0)
	s.solvePotential(w, 0)
	s.differentiate(w)
	for i := range s.species {
		sp := &s.species[i]
		clear(w.fieldSum[i])
		w.summed[i] = 0
		for c := range sp.chunks {
			ch := &sp.chunks[c]
			for k, x := range ch.x {
				j := int(x)
				f := w.fieldA[j] + (x-float64(j))*w.fieldD[j]
				ch.vx[k] -= 0.5 * sp.kickPerE * f
			}
		}
	}
}
