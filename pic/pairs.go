package pic

import (
	"fmt"
	"math"
	"slices"

	"ionfall/internal/rng"
	"ionfall/mcc"
)

// PairReaction lets particles of two species react in pairs within a cell. They end each other, as
// electrons and positive ions, or positive and negative ions do; or, with Detach, an electron sets
// that of a negative ion free.
type PairReaction struct {
	A, B int // indices of the species
	Rate *mcc.PairRate
	// Detach, if not nil, makes another electron and a neutral of B; A are the electrons.
	Detach *mcc.Detachment
	// Neutral is the species of the neutral, if such are followed; 0 for none.
	Neutral int
}

// Chunks are random samples of all particles, so the particles of one chunk meet each other as
// often as all would: in a cell with N1 and N2 particles of the chunk, each pair has the
// probability Chunks W k(g) dt/dx in a time dt, between shells over the cell's area factor. Of all
// pairs only N1 N2 k_max/k of them are looked at.
//
// Ref: common practice; compare the test of decay by 1/(1 + k n t).

// checkPairs demands what the pairing needs.
func (c *Config) checkPairs() error {
	if len(c.Pairs) == 0 {
		return nil
	}
	most := 1
	for _, p := range c.Pairs {
		switch {
		case p.A < 0 || p.B < 0 || p.A >= len(c.Species) || p.B >= len(c.Species) || p.A == p.B:
			return fmt.Errorf("pic: no species %d and %d that could react", p.A, p.B)
		case p.Detach == nil && c.Species[p.A].Charge+c.Species[p.B].Charge != 0:
			return fmt.Errorf("pic: species %d and %d cannot end each other", p.A, p.B)
		case p.Detach != nil && (p.A != 0 || c.Species[p.A].Charge != -1 ||
			c.Species[p.B].Charge != -1):
			return fmt.Errorf("pic: species %d cannot detach electrons of %d", p.A, p.B)
		case p.Neutral < 0 || p.Neutral >= len(c.Species) ||
			p.Neutral > 0 && c.Species[p.Neutral].Charge != 0:
			return fmt.Errorf("pic: species %d is no neutral", p.Neutral)
		}
		most = max(most, c.Species[p.A].Every, c.Species[p.B].Every)
	}
	for _, sp := range c.Species {
		if most%sp.Every != 0 || c.PairEvery%most != 0 {
			return fmt.Errorf("pic: pairs every %d steps, want a multiple of the %d of every species",
				c.PairEvery, sp.Every)
		}
	}
	if c.PairEvery < 1 || c.StepsPerPeriod%c.PairEvery != 0 {
		return fmt.Errorf("pic: pairs every %d steps, which does not divide the %d of a period",
			c.PairEvery, c.StepsPerPeriod)
	}
	return nil
}

// react lets pairs of chunk c react when it is time: at a step in which all species move.
func (s *Simulation) react(w *worker, c int) {
	if len(s.config.Pairs) == 0 {
		return
	}
	every := int64(s.config.PairEvery)
	for i := range s.config.Pairs {
		p := &s.config.Pairs[i]
		slow := int64(max(s.species[p.A].Every, s.species[p.B].Every))
		if w.step%every != slow/2 {
			continue
		}
		stream := rng.Key{
			Seed: s.config.Seed, Purpose: rng.Pairs, Species: uint16(i), Chunk: uint32(c),
			Step: uint64(w.step),
		}.Stream()
		s.reactPair(w, p, c, &stream)
	}
}

func (s *Simulation) reactPair(w *worker, p *PairReaction, c int, stream *rng.Stream) {
	a, b := &s.species[p.A].chunks[c], &s.species[p.B].chunks[c]
	if len(a.x) == 0 || len(b.x) == 0 {
		return
	}
	first, second := &w.meeting[0], &w.meeting[1]
	first.reserve(len(a.x), s.config.Cells)
	second.reserve(len(b.x), s.config.Cells)
	orderA, orderB := first.sort(stream, a.x), second.sort(stream, b.x)
	dt := s.config.TimeStep() * float64(s.config.PairEvery)
	perPair := float64(s.config.Chunks) * s.config.Weight * p.Rate.Most() * dt / s.config.CellSize()
	unitA := s.config.VelocityUnit(s.species[p.A].Every)
	unitB := s.config.VelocityUnit(s.species[p.B].Every)
	w.ended[0], w.ended[1] = w.ended[0][:0], w.ended[1][:0]
	fromA, fromB := int32(0), int32(0)
	for j := range s.config.Cells {
		listA, listB := orderA[fromA:first.first[j]], orderB[fromB:second.first[j]]
		fromA, fromB = first.first[j], second.first[j]
		here := perPair / s.config.Area(float64(j)+0.5)
		candidates := int(float64(len(listA))*float64(len(listB))*here + stream.Float64())
		for ; candidates > 0 && len(listA) > 0 && len(listB) > 0; candidates-- {
			ka := int(stream.Float64() * float64(len(listA)))
			kb := int(stream.Float64() * float64(len(listB)))
			ia, ib := listA[ka], listB[kb]
			dx := unitA*a.vx[ia] - unitB*b.vx[ib]
			dy := unitA*a.vy[ia] - unitB*b.vy[ib]
			dz := unitA*a.vz[ia] - unitB*b.vz[ib]
			g := math.Sqrt(dx*dx + dy*dy + dz*dz)
			if stream.Float64()*p.Rate.Most() >= p.Rate.At(g) {
				continue
			}
			if p.Detach != nil {
				if !s.detach(w, p, c, ia, ib, stream) {
					continue
				}
			} else {
				w.ended[0] = append(w.ended[0], ia)
				last := len(listA) - 1
				listA[ka], listA = listA[last], listA[:last]
			}
			w.ended[1] = append(w.ended[1], ib)
			last := len(listB) - 1
			listB[kb], listB = listB[last], listB[:last]
		}
	}
	a.end(w.ended[0])
	b.end(w.ended[1])
}

// end takes particles out that met another, and counts what they had.
func (c *chunk) end(list []int32) {
	slices.Sort(list)
	for _, i := range slices.Backward(list) {
		c.tally.gone++
		c.tally.goneV2 += c.vx[i]*c.vx[i] + c.vy[i]*c.vy[i] + c.vz[i]*c.vz[i]
		c.remove(int(i))
	}
}

// ScaleNegative multiplies the number of particles of negative ions by about the factor, with as
// much positive charge at the same places, so that the charge density stays.
func (s *Simulation) ScaleNegative(negative int, factor float64) {
	stream := rng.Key{
		Seed: s.config.Seed, Purpose: rng.Population, Species: uint16(negative),
		Step: uint64(s.step), Chunk: 1 << 31,
	}.Stream()
	whole := int(math.Floor(math.Abs(factor - 1)))
	rest := math.Abs(factor-1) - float64(whole)
	for c := range s.species[negative].chunks {
		ch := &s.species[negative].chunks[c]
		for i := len(ch.x) - 1; i >= 0; i-- {
			times := whole
			if stream.Float64() < rest {
				times++
			}
			if times == 0 {
				continue
			}
			partner, k := s.near(&stream, c, ch.x[i])
			switch {
			case partner == nil: // none in the cell: it stays as it is
			case factor < 1:
				ch.remove(i)
				partner.remove(k)
			default:
				for range times {
					ch.add(ch.x[i], ch.vx[i], ch.vy[i], ch.vz[i])
					partner.add(ch.x[i], partner.vx[k], partner.vy[k], partner.vz[k])
				}
			}
		}
	}
	for i := range s.species {
		for c := range s.species[i].chunks {
			s.species[i].chunks[c].reserve()
		}
	}
	s.haveField = false
	s.redeposit()
}

// near picks a singly charged positive ion of chunk c in the cell of x, or nil: from a random place
// on, the first that fits.
func (s *Simulation) near(stream *rng.Stream, c int, x float64) (of *chunk, index int) {
	total := 0
	for i := range s.species {
		if s.species[i].Charge == 1 {
			total += len(s.species[i].chunks[c].x)
		}
	}
	if total == 0 {
		return nil, 0
	}
	at, cell := int(stream.Float64()*float64(total)), int(x)
	for pass := range 2 {
		seen := 0
		for i := range s.species {
			if s.species[i].Charge != 1 {
				continue
			}
			ch := &s.species[i].chunks[c]
			for k := range ch.x {
				if past := seen+k >= at; past == (pass == 0) && int(ch.x[k]) == cell {
					return ch, k
				}
			}
			seen += len(ch.x)
		}
	}
	return nil, 0
}
