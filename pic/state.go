package pic

import (
	"fmt"

	"ionfall/internal/codec"
	"ionfall/internal/kernels"
)

// Save writes the whole state to enc, under names that start with prefix. The arrays are not
// copied: write enc out before the next Advance.
func (s *Simulation) Save(enc *codec.Encoder, prefix string) {
	enc.Int64s(prefix+"counters", []int64{
		s.step, s.moved, s.ledgerStart, s.absorbedNow(), b2i(s.haveField),
		int64(len(s.species)), int64(s.config.Chunks), int64(s.config.Cells),
	})
	enc.Float64s(prefix+"scalars", []float64{s.config.Weight, s.electric, s.lastE0, s.lastVoltage})
	s.saveCharge(enc, prefix)
	for i, p := range s.pendingField() {
		enc.Int64(fmt.Sprintf("%s%d.summed", prefix, i), p.summed)
		enc.Float64s(fmt.Sprintf("%s%d.field", prefix, i), p.flat())
	}
	for i := range s.species {
		for c := range s.species[i].chunks {
			ch := &s.species[i].chunks[c]
			name := fmt.Sprintf("%s%d.%d.", prefix, i, c)
			enc.Float64s(name+"x", ch.x)
			enc.Float64s(name+"vx", ch.vx)
			enc.Float64s(name+"vy", ch.vy)
			enc.Float64s(name+"vz", ch.vz)
			counts, sums := ch.tally.flat()
			if o := ch.outcome; o != nil {
				counts = append(append(counts, o.Beyond), o.Counts...)
				sums = append(sums, o.Loss...)
			}
			enc.Int64s(name+"counts", counts)
			enc.Float64s(name+"sums", sums)
		}
	}
}

// Restore replaces the state by one that Save wrote for the same configuration.
func (s *Simulation) Restore(dec *codec.Decoder, prefix string) error {
	n := dec.Int64s(prefix + "counters")
	f := dec.Float64s(prefix + "scalars")
	if err := dec.Err(); err != nil {
		return err
	}
	if len(n) != 8 || len(f) != 4 || n[5] != int64(len(s.species)) ||
		n[6] != int64(s.config.Chunks) || n[7] != int64(s.config.Cells) {
		return fmt.Errorf("pic: the saved state is of another case")
	}
	charge, err := s.restoreCharge(dec, prefix)
	if err != nil {
		return err
	}
	pending := make([]pending, len(s.species))
	for i := range s.species {
		for c := range s.species[i].chunks {
			if err := s.species[i].chunks[c].restore(
				dec, fmt.Sprintf("%s%d.%d.", prefix, i, c), s.config.Cells); err != nil {
				return err
			}
		}
		flat := dec.Float64s(fmt.Sprintf("%s%d.field", prefix, i))
		pending[i].summed = dec.Int64(fmt.Sprintf("%s%d.summed", prefix, i))
		if dec.Err() == nil && len(flat) != 2*s.config.Cells {
			return fmt.Errorf("pic: field sum of %d values, want %d", len(flat), 2*s.config.Cells)
		}
		for j := 0; j+1 < len(flat); j += 2 {
			pending[i].sum = append(pending[i].sum, kernels.Field{A: flat[j], D: flat[j+1]})
		}
	}
	if err := dec.Err(); err != nil {
		return err
	}
	if n[0] < 0 || !(f[0] > 0) {
		return fmt.Errorf("pic: saved step %d or weight %g is impossible", n[0], f[0])
	}
	s.step, s.moved, s.ledgerStart, s.haveField = n[0], n[1], n[2], n[4] != 0
	s.config.Weight, s.electric, s.lastE0, s.lastVoltage = f[0], f[1], f[2], f[3]
	for _, w := range s.workers {
		w.step, w.moved = s.step, 0
		w.absorbed = [2]int64{}
	}
	s.workers[0].absorbed[s.step&1] = n[3]
	s.setCharge(charge)
	s.setPendingField(pending)
	s.redeposit()
	return nil
}

func (c *chunk) restore(dec *codec.Decoder, name string, cells int) error {
	c.x, c.vx = dec.Float64s(name+"x"), dec.Float64s(name+"vx")
	c.vy, c.vz = dec.Float64s(name+"vy"), dec.Float64s(name+"vz")
	counts, sums := dec.Int64s(name+"counts"), dec.Float64s(name+"sums")
	if err := dec.Err(); err != nil {
		return err
	}
	if len(c.vx) != len(c.x) || len(c.vy) != len(c.x) || len(c.vz) != len(c.x) {
		return fmt.Errorf("pic: %s: positions and velocities differ in number", name)
	}
	for i, x := range c.x {
		if !kernels.Inside(x, cells) {
			return fmt.Errorf("pic: %s: particle %d is at %g cells, want 0 to %d", name, i, x, cells)
		}
	}
	if c.outcome != nil {
		channels := len(c.outcome.Counts)
		if len(counts) == tallyCounts+1+channels && len(sums) == tallySums+channels {
			c.outcome.Beyond = counts[tallyCounts]
			copy(c.outcome.Counts, counts[tallyCounts+1:])
			copy(c.outcome.Loss, sums[tallySums:])
			counts, sums = counts[:tallyCounts], sums[:tallySums]
		}
	}
	if len(counts) != tallyCounts || len(sums) != tallySums {
		return fmt.Errorf("pic: %s: tallies do not fit the collision processes", name)
	}
	c.tally.restore(counts, sums)
	c.reserve()
	return nil
}

const tallyCounts, tallySums = 8, 5

func (t *tally) flat() ([]int64, []float64) {
	return []int64{
			t.born, t.emitted[0], t.emitted[1],
			t.reflected[0], t.reflected[1], t.absorbed[0], t.absorbed[1], t.gone,
		},
		[]float64{t.bornV2, t.emittedV2, t.absorbedV2[0], t.absorbedV2[1], t.goneV2}
}

func (t *tally) restore(n []int64, f []float64) {
	*t = tally{
		born: n[0], emitted: [2]int64{n[1], n[2]},
		reflected: [2]int64{n[3], n[4]}, absorbed: [2]int64{n[5], n[6]}, gone: n[7],
		bornV2: f[0], emittedV2: f[1], absorbedV2: [2]float64{f[2], f[3]}, goneV2: f[4],
	}
}

// pending is the field summed since a sub-cycled species last moved.
type pending struct {
	sum    []kernels.Field
	summed int64
}

func (p pending) flat() []float64 {
	list := make([]float64, 0, 2*len(p.sum))
	for _, f := range p.sum {
		list = append(list, f.A, f.D)
	}
	return list
}

func (s *Simulation) pendingField() []pending {
	if len(s.workers) == 0 {
		return nil
	}
	w := s.workers[0]
	list := make([]pending, len(s.species))
	for i := range list {
		list[i] = pending{append([]kernels.Field(nil), w.fieldSum[i]...), w.summed[i]}
	}
	return list
}

func (s *Simulation) setPendingField(list []pending) {
	for i := range list {
		for _, w := range s.workers {
			copy(w.fieldSum[i], list[i].sum)
			w.summed[i] = list[i].summed
		}
	}
}

func b2i(b bool) int64 {
	if b {
		return 1
	}
	return 0
}
