package pic

import (
	"ionfall/internal/rng"
	"ionfall/mcc"
)

// Relaxation has the electrons collide with each other: once every Every steps, each with one
// other of its chunk and neighbourhood, for the time since. Chunks are random samples of all
// electrons, so a partner from the same chunk stands for any.
type Relaxation struct {
	Pairs *mcc.Coulomb // in units of VelocityUnit of the electrons; nil for none
	Every int          // steps of the electrons
}

// pairing orders a chunk's electrons by cell, at random within one.
type pairing struct {
	order []int32
	first []int32 // where a cell begins in order; once sorted, where it ends
}

// reserve makes room for n electrons in the given number of cells.
func (p *pairing) reserve(n, cells int) {
	if len(p.order) < n {
		p.order = make([]int32, n+n/4)
	}
	if len(p.first) != cells+1 {
		p.first = make([]int32, cells+1)
	}
}

// sort fills order.
func (p *pairing) sort(s *rng.Stream, x []float64) []int32 {
	clear(p.first)
	for _, at := range x {
		p.first[int(at)+1]++
	}
	for j := 1; j < len(p.first); j++ {
		p.first[j] += p.first[j-1]
	}
	order := p.order[:len(x)]
	for i, at := range x {
		j := int(at)
		order[p.first[j]] = int32(i)
		p.first[j]++
	}
	from := int32(0)
	for _, to := range p.first[:len(p.first)-1] {
		for k := to - 1; k > from; k-- {
			other := from + int32(s.Float64()*float64(k-from+1))
			order[k], order[other] = order[other], order[k]
		}
		from = to
	}
	return order
}

// relax collides the electrons of chunk c with each other, when it is time.
func (s *Simulation) relax(w *worker, c int) {
	r := &s.config.Relaxation
	if r.Pairs == nil || w.step%int64(r.Every) != 0 {
		return
	}
	ch := &s.species[0].chunks[c]
	w.pairs.reserve(len(ch.x), s.config.Cells)
	stream := rng.Key{
		Seed: s.config.Seed, Purpose: rng.Coulomb, Chunk: uint32(c), Step: uint64(w.step),
	}.Stream()
	order := w.pairs.sort(&stream, ch.x)
	if len(order)%2 == 1 && stream.Float64() < 0.5 {
		order = order[1:] // the odd one out is the first or the last
	}
	dt := s.config.TimeStep() * float64(r.Every)
	for i := 0; i+1 < len(order); i += 2 {
		n := s.electronDensity(w, int(ch.x[order[i]]))
		r.Pairs.Pair(&stream, order[i], order[i+1], n*dt, ch.vx, ch.vy, ch.vz)
	}
}

// electronDensity returns the density in a cell from that at its nodes [1/m3]; a node at a wall
// stands for half a cell.
func (s *Simulation) electronDensity(w *worker, cell int) float64 {
	left, right := w.number[0][cell], w.number[0][cell+1]
	if cell == 0 {
		left *= 2
	}
	if cell == s.config.Cells-1 {
		right *= 2
	}
	if s.area != nil {
		left, right = w.number[0][cell], w.number[0][cell+1]
		dx := s.config.CellSize()
		left *= dx / s.config.NodeVolume(cell)
		right *= dx / s.config.NodeVolume(cell+1)
	}
	return 0.5 * (left + right) * s.config.Weight / s.config.CellSize()
}
