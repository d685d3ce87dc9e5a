// Package kernels holds the hot loops over particles, as free functions on slices and scalars.
//
// The plain functions are the definition of each kernel. They avoid contraction of a*b+c (an
// explicit float64 conversion of the product forbids it), so that every platform gives the same
// bits. For some of them there are twins in assembly, which agree with them in every bit; a Set
// holds one form of each, chosen once and passed on as a value:
//
//	set := kernels.Best() // or Select(name)
//	left := set.PushDeposit(x, v, field, acc, out)
//
// The build tag purego leaves the assembly out. It is generated, by the module in asm.
//
// Units: positions in cells, velocities in cells per step of their species, so that a step is
// x += v; fields in the same units (velocity gained in a step).
package kernels

// Weights of linear deposition are kept as integers, in units of 2^-FractionBits. Integer sums are
// exact and do not depend on their order: the charge density is the same bits for any order
// of the particles and any number of workers.
//
// One 64-bit word a cell holds the number of its particles (above FractionSumBits) and the sum of
// their distances to its left node (below).
const (
	// FractionBits is the resolution of a position within its cell: 2^-23 of a cell, some
	// 1e4 times below the noise of a million particles in the cell.
	FractionBits = 23
	// FractionSumBits holds the sum of MaxDeposits distances.
	FractionSumBits = 44
	// MaxDeposits is how many particles may be added before the words could overflow.
	MaxDeposits = 1 << (64 - FractionSumBits)

	one      = 1 << FractionSumBits
	fraction = 1<<FractionBits - 1
)

// roundingShift moves a position's fixed-point form into the low bits of the sum's mantissa:
// adding it rounds x to the nearest multiple of 2^-FractionBits.
const roundingShift = 3 << (51 - FractionBits)

// Field is the kick at the left node of a cell and its change across the cell: a particle at
// fraction s of the cell gains A + s*D.
type Field struct{ A, D float64 }
