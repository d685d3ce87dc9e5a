package kernels

import "math"

// shiftBits is the bit pattern of roundingShift; a position's fixed-point form is the
// difference of patterns.
var shiftBits = math.Float64bits(roundingShift)

// fixed returns x in units of 2^-FractionBits, to nearest. A negative x gives a huge number.
func fixed(x float64) uint64 {
	return math.Float64bits(x+roundingShift) - shiftBits
}

// PushDeposit advances particles by one step of the leapfrog and deposits those that stay:
//
//	v[i] += field at x[i];  x[i] += v[i]
//
// with the field linear in each cell. Those that end outside 0 <= x < len(field) are
// not deposited; their indices go to out, in increasing order, and their number is
// returned; the rest of out is left as it is. All x must be inside before. Needs len(acc) >=
// len(field), len(out) >= len(x), and less than 2^26 cells.
//
// Ref: C. K. Birdsall and A. B. Langdon, Plasma Physics via Computer Simulation (1985), ch. 2.
func PushDeposit(x, v []float64, field []Field, acc []uint64, out []int32) int {
	v = v[:len(x)]
	out = out[:len(x)]
	acc = acc[:len(field)]
	limit := uint64(len(field)) << FractionBits
	left := 0
	for i, xi := range x {
		j := int(xi)
		f := &field[j]
		vi := v[i] + (f.A + float64((xi-float64(j))*f.D))
		xi += vi
		v[i] = vi
		x[i] = xi
		q := fixed(xi)
		if q >= limit {
			out[left] = int32(i)
			left++
			continue
		}
		acc[q>>FractionBits] += one + q&fraction
	}
	return left
}

// Deposit adds particles at rest to the cell words; x must be inside.
func Deposit(x []float64, acc []uint64) {
	for _, xi := range x {
		q := fixed(xi)
		acc[q>>FractionBits] += one + q&fraction
	}
}

// Inside tells whether a position is on the grid of the given number of cells, by the same
// rounding as the deposition.
func Inside(x float64, cells int) bool {
	return fixed(x) < uint64(cells)<<FractionBits
}

// Deposits returns the number of particles that a cell word holds.
func Deposits(word uint64) int { return int(word >> FractionSumBits) }

// AddDensity adds the cell words to node sums: number[j] is the particle number at node j,
// linear weighting. Needs len(number) > len(acc). The sums are exact while fewer than 2^29
// particles meet at a node.
func AddDensity(acc []uint64, number []float64) {
	number = number[:len(acc)+1]
	carry := 0.0
	for j, word := range acc {
		count := float64(word >> FractionSumBits)
		right := float64(word&(1<<FractionSumBits-1)) * (1.0 / (1 << FractionBits))
		number[j] += count - right + carry
		carry = right
	}
	number[len(acc)] += carry
}
