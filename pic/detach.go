package pic

import "ionfall/internal/rng"

// detach makes two electrons and a neutral of electron ia and ion ib of chunk c, where the ion is;
// the ion itself is taken out later. Velocities are those that the pair was judged by, half a step
// before the time of the positions. False if the energy does not reach.
func (s *Simulation) detach(w *worker, p *PairReaction, c int, ia, ib int32, stream *rng.Stream,
) bool {
	a, b := &s.species[p.A].chunks[c], &s.species[p.B].chunks[c]
	before := [3]float64{a.vx[ia], a.vy[ia], a.vz[ia]}
	unitA := s.config.VelocityUnit(s.species[p.A].Every)
	inB := float64(s.species[p.B].Every) / float64(s.species[p.A].Every)
	ion := scaledBy(1/inB, [3]float64{b.vx[ib], b.vy[ib], b.vz[ib]})
	out, ok := p.Detach.Free(stream, before, ion, unitA)
	if !ok {
		return false
	}
	after := out.Electrons[0]
	a.vx[ia], a.vy[ia], a.vz[ia] = after[0], after[1], after[2]
	s.place(w, p.A, p.A, c, b.x[ib], out.Electrons[1])
	// The field gave no energy here: what the electron had goes, what both have comes.
	a.tally.goneV2 += square(before)
	a.tally.emittedV2 += square(after) + square(out.Electrons[1])
	if p.Neutral > 0 {
		n := &s.species[p.Neutral]
		v := scaledBy(float64(n.Every)/float64(s.species[p.A].Every), out.Neutral)
		if square(v) >= n.least2 {
			s.place(w, p.A, p.Neutral, c, b.x[ib], v)
		}
	}
	return true
}
