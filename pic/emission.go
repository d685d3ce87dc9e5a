package pic

import (
	"math"

	"ionfall/internal/kernels"
	"ionfall/internal/phys"
	"ionfall/internal/rng"
	"ionfall/internal/surfaces"
)

// workFunctionEV is that of most metals within half an eV; it sets the scale of the energies of
// true secondaries.
const workFunctionEV = 4.5

// emits tells whether impacts of species i may set electrons free at a wall.
func (s *Simulation) emits(i int, wall Wall) bool {
	e := &s.config.Electrodes[wall]
	if s.species[0].Charge >= 0 || i == 0 {
		return false
	}
	if i < len(e.Yields) && e.Yields[i] != nil {
		return true
	}
	return s.species[i].Charge > 0 && e.IonSecondaryYield != 0
}

// yield returns the mean number of electrons that a hit of species i sets free.
func (s *Simulation) yield(i int, hit *Hit) float64 {
	e := &s.config.Electrodes[hit.Wall]
	if i < len(e.Yields) && e.Yields[i] != nil {
		return e.Yields[i](s.species[i].energyEV(hit))
	}
	return e.IonSecondaryYield
}

// energyEV returns the energy of a hit [eV].
func (sp *Species) energyEV(h *Hit) float64 {
	v2 := float64(h.VX*h.VX) + float64(h.VY*h.VY) + float64(h.VZ*h.VZ)
	return sp.energyPer / phys.ElementaryCharge * v2
}

// emit sets electrons free at the wall where an ion arrived: isotropic into the gap, with the
// electrode's emission energy, at a random moment of the step.
func (s *Simulation) emit(w *worker, stream *rng.Stream, c int, wall Wall, yield float64) {
	e := &s.config.Electrodes[wall]
	electrons := &s.species[0]
	speed := math.Sqrt(e.SecondaryEnergyEV * phys.ElementaryCharge / electrons.energyPer)
	for range int(yield + stream.Float64()) {
		vx, vy, vz := stream.Direction()
		s.release(w, stream, c, wall, speed*math.Abs(vx), speed*vy, speed*vz)
	}
}

// release puts an electron into the gap, vx away from the wall.
func (s *Simulation) release(
	w *worker, stream *rng.Stream, c int, wall Wall, vx, vy, vz float64,
) {
	ch := &s.species[0].chunks[c]
	x := vx * stream.Float64()
	if wall == Grounded {
		vx, x = -vx, float64(s.config.Cells)-x
	}
	if !kernels.Inside(x, s.config.Cells) {
		x = max(0, math.Nextafter(float64(s.config.Cells), 0)-0x1p-20)
	}
	ch.add(x, vx, vy, vz)
	ch.tally.emitted[wall]++
	ch.tally.emittedV2 += vx*vx + vy*vy + vz*vz
	kernels.Deposit(ch.x[len(ch.x)-1:], w.deposit[(w.step+1)&1][0])
	if wall == Powered {
		w.absorbed[(w.step+1)&1] -= int64(s.species[0].Charge)
	}
}

// rebound reflects electron p elastically with the probability of its energy and angle; false if it
// is not reflected. A yield is a mean number, so what of it is elastic is a probability.
func (s *Simulation) rebound(w *worker, stream *rng.Stream, i int, ch *chunk, p int, wall Wall,
	a, depth float64,
) bool {
	e := s.config.Electrodes[wall].Emission
	h := Hit{wall, ch.vx[p], ch.vy[p], ch.vz[p]}
	part := e.Elastic * e.Yield(s.species[i].energyEV(&h), h.angle())
	return stream.Float64() < part && s.reflect(w, i, ch, p, wall, a, depth)
}

// angle returns that of the velocity from the normal [rad].
func (h *Hit) angle() float64 { return math.Atan2(math.Hypot(h.VY, h.VZ), math.Abs(h.VX)) }

// emitByElectron sets free what an absorbed electron does: one that comes back with a uniform part
// of its energy, or true secondaries; directions by the cosine law. Means are kept: what is not
// reflected elastically, of the probability 1 - pe, makes up for its share.
func (s *Simulation) emitByElectron(w *worker, stream *rng.Stream, c int, hit *Hit) {
	e := s.config.Electrodes[hit.Wall].Emission
	sp := &s.species[0]
	energy := sp.energyEV(hit)
	yield := e.Yield(energy, hit.angle())
	rest := 1 - math.Min(1, e.Elastic*yield)
	if yield == 0 || rest == 0 {
		return
	}
	back := math.Min(1, e.Inelastic*yield/rest)
	if stream.Float64() < back {
		s.releaseCosine(w, stream, c, hit.Wall, energy*stream.Float64())
		return
	}
	mean := (1 - e.Elastic - e.Inelastic) * yield / rest / (1 - back)
	for range int(mean + stream.Float64()) {
		own := surfaces.SecondaryEnergyEV(stream.Float64(), workFunctionEV, energy)
		s.releaseCosine(w, stream, c, hit.Wall, own)
	}
}

// releaseCosine releases an electron of an energy [eV] by the cosine law.
func (s *Simulation) releaseCosine(
	w *worker, stream *rng.Stream, c int, wall Wall, energyEV float64,
) {
	speed := math.Sqrt(energyEV * phys.ElementaryCharge / s.species[0].energyPer)
	sin2 := stream.Float64()
	sin, cos := math.Sqrt(sin2), math.Sqrt(1-sin2)
	side, up := math.Sincos(2 * math.Pi * stream.Float64())
	s.release(w, stream, c, wall, speed*cos, speed*sin*side, speed*sin*up)
}
