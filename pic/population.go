package pic

import (
	"cmp"
	"math"
	"slices"

	"ionfall/internal/kernels"
	"ionfall/internal/rng"
)

// ScaleWeight multiplies the weight of all particles: all densities change by the same factor,
// charge densities stay in proportion, that on an isolated electrode, too; in a circuit the powered
// electrode keeps its potential.
func (s *Simulation) ScaleWeight(factor float64) {
	s.scaleCharge(factor)
	s.changeWeight(factor)
}

// changeWeight multiplies the weight of all particles and leaves the charge on the wall.
func (s *Simulation) changeWeight(factor float64) {
	s.config.Weight *= factor
	s.haveField = false // the field jumps: no displacement current is to be read from it
}

// Halve keeps one of every two particles of each species and doubles the weight. Of
// neighbours in x one stays, so that the charge density changes by less than a particle a cell.
func (s *Simulation) Halve() {
	for i := range s.species {
		s.halve(i)
	}
	s.changeWeight(2)
	s.redeposit()
}

func (s *Simulation) halve(i int) {
	stream := rng.Key{
		Seed: s.config.Seed, Purpose: rng.Population, Species: uint16(i), Step: uint64(s.step),
	}.Stream()
	all := s.order(i)
	sp := &s.species[i]
	drop := make([][]bool, len(sp.chunks))
	for c := range drop {
		drop[c] = make([]bool, len(sp.chunks[c].x))
	}
	for k := 0; k < len(all); k += 2 {
		loser := k + int(stream.Uint64()>>63)
		if loser < len(all) {
			drop[all[loser].chunk][all[loser].index] = true
		}
	}
	for c := range sp.chunks {
		ch := &sp.chunks[c]
		n := 0
		for k := range ch.x {
			if !drop[c][k] {
				ch.x[n], ch.vx[n], ch.vy[n], ch.vz[n] = ch.x[k], ch.vx[k], ch.vy[k], ch.vz[k]
				n++
			}
		}
		ch.truncate(n)
	}
}

// place is where a particle is found.
type place struct {
	x            float64
	chunk, index int32
}

// order lists the particles of species i by position.
func (s *Simulation) order(i int) []place {
	sp := &s.species[i]
	all := make([]place, 0, sp.Count())
	for c := range sp.chunks {
		for k, x := range sp.chunks[c].x {
			all = append(all, place{x, int32(c), int32(k)})
		}
	}
	slices.SortFunc(all, func(a, b place) int {
		return cmp.Or(cmp.Compare(a.x, b.x), cmp.Compare(a.chunk, b.chunk), cmp.Compare(a.index, b.index))
	})
	return all
}

// Multiply replaces every particle by copies of equal velocity, spread over reach cells around
// it so that they part, and divides the weight: the charge density stays, smoothed over reach.
func (s *Simulation) Multiply(copies int, reach float64) {
	for i := range s.species {
		stream := rng.Key{
			Seed: s.config.Seed, Purpose: rng.Population, Species: uint16(i), Step: uint64(s.step),
		}.Stream()
		for c := range s.species[i].chunks {
			s.species[i].chunks[c].multiply(&stream, copies, reach, s.config.Cells)
		}
	}
	s.changeWeight(1 / float64(copies))
	s.redeposit()
}

func (c *chunk) multiply(stream *rng.Stream, copies int, reach float64, cells int) {
	n := len(c.x)
	for k := range n {
		x := c.x[k]
		// Copies lie at equal distances around x, the whole comb shifted at random: their
		// centre stays x on average.
		shift := stream.Float64() - 0.5
		for m := range copies {
			at := x + reach*((float64(m)+0.5+shift)/float64(copies)-0.5)
			if !kernels.Inside(at, cells) {
				at = x
			}
			if m == 0 {
				c.x[k] = at
			} else {
				c.add(at, c.vx[k], c.vy[k], c.vz[k])
			}
		}
	}
	c.reserve()
}

// Balance evens out the chunks' sizes when they have drifted apart by more than a fifth. Which
// particles move depends on the state alone.
func (s *Simulation) Balance() {
	for i := range s.species {
		chunks := s.species[i].chunks
		least, most, total := math.MaxInt, 0, 0
		for c := range chunks {
			n := len(chunks[c].x)
			least, most, total = min(least, n), max(most, n), total+n
		}
		if 5*(most-least) > total/len(chunks) {
			level(chunks, total)
		}
	}
	s.redeposit()
}

// level moves particles from the ends of long chunks to short ones.
func level(chunks []chunk, total int) {
	share := func(c int) int { return (c+1)*total/len(chunks) - c*total/len(chunks) }
	to := 0
	for from := range chunks {
		a := &chunks[from]
		for len(a.x) > share(from) {
			for len(chunks[to].x) >= share(to) {
				to++
			}
			b, k := &chunks[to], len(a.x)-1
			b.add(a.x[k], a.vx[k], a.vy[k], a.vz[k])
			a.truncate(k)
		}
	}
	for c := range chunks {
		chunks[c].reserve()
	}
}

// Transfer fills an empty discharge of the same gap and species with the state of another, whose
// grid and steps may differ. Each particle becomes copies, as in Multiply, spread over the coarser
// of the two cells.
func (s *Simulation) Transfer(from *Simulation, copies int) {
	scale := float64(s.config.Cells) / float64(from.config.Cells)
	for i := range s.species {
		src, dst := &from.species[i], &s.species[i]
		v := from.config.VelocityUnit(src.Every) / s.config.VelocityUnit(dst.Every)
		n := 0
		for c := range src.chunks {
			a := &src.chunks[c]
			for k := range a.x {
				x := a.x[k] * scale
				if !kernels.Inside(x, s.config.Cells) {
					x = float64(s.config.Cells) - 0x1p-20
				}
				dst.chunks[n%len(dst.chunks)].add(x, v*a.vx[k], v*a.vy[k], v*a.vz[k])
				n++
			}
		}
		for c := range dst.chunks {
			dst.chunks[c].reserve()
		}
	}
	s.config.Weight = from.config.Weight
	s.takeCharge(from)
	if copies > 1 {
		s.Multiply(copies, max(1, scale))
	}
	s.redeposit()
}
