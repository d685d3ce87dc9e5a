package surrogate

import (
	"math/rand/v2"
)

const (
	// draws of the parameters that a prediction averages over, and how many sweeps lie between them
	// and before the first.
	drawCount, sweepsBetween, sweepsBefore = 16, 1, 3
	// slice is the first width of a slice, in the logarithm of a parameter.
	slice = 1.0
	// widest is how many times that width a slice may grow to.
	widest = 4
	// drawSeed makes a model a function of its samples.
	drawSeed = 1
)

// sampleParams draws parameters from their posterior density, by slice sampling along each of them
// and along all together (lengths and amplitude grow together where a quantity is nearly a
// plane), from the most likely ones on.
//
// Ref: R. M. Neal, Ann. Stat. 31, 705 (2003), stepping out and shrinkage (from memory).
func (m *Model) sampleParams(best params) []*process {
	r := rand.New(rand.NewPCG(drawSeed, uint64(len(m.x))))
	v := best.pack()
	level := -m.badness(v)
	var list []*process
	for sweep := 1; len(list) < drawCount; sweep++ {
		for k := range len(v) + 1 {
			v, level = m.sliceAlong(r, v, level, k)
		}
		if sweep > sweepsBefore && (sweep-sweepsBefore)%sweepsBetween == 0 {
			if c, _, ok := m.condition(unpack(v)); ok {
				list = append(list, c)
			}
		}
	}
	return list
}

// sliceAlong moves v along its k-th part, along all of it for the number after the last. level is
// the logarithm of the density at v.
func (m *Model) sliceAlong(r *rand.Rand, v []float64, level float64, k int) ([]float64, float64) {
	at := func(t float64) []float64 {
		w := append([]float64(nil), v...)
		for i := range w {
			if i == k || k == len(v) {
				w[i] += t
			}
		}
		return w
	}
	height := level - r.ExpFloat64()
	low := -slice * r.Float64()
	high := low + slice
	left := r.IntN(widest)
	for right := widest - 1 - left; right > 0 && -m.badness(at(high)) > height; right-- {
		high += slice
	}
	for ; left > 0 && -m.badness(at(low)) > height; left-- {
		low -= slice
	}
	for high-low > 1e-9 {
		t := low + (high-low)*r.Float64()
		w := at(t)
		if l := -m.badness(w); l > height {
			return w, l
		}
		if t < 0 {
			low = t
		} else {
			high = t
		}
	}
	return v, level
}
