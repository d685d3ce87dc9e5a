package main

import (
	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

// A slot of the ring holds the terms of a vector: four vectors of pairs, which are (power, its
// right part) of the even and of the odd lanes, then (energy, its right part). Behind all slots
// are the cells, as byte offsets of 32 bits.
const (
	pairBytes  = 8 * lanes
	termBytes  = 4 * pairBytes
	termsBytes = ringVectors * termBytes
	cellBytes  = 4 * lanes
	cellsBytes = ringVectors * cellBytes
	// termScale makes offsets of terms from those of cells.
	termScale = termBytes / cellBytes
)

// summer is what both forms of kernels.AddMoments have in common.
type summer struct {
	name string

	x, vx, vy, vz, energy reg.GPVirtual // just behind the last particle
	i                     reg.GPVirtual // index of the vector, counted from there: negative
	field, sums           reg.Register
	fast                  reg.GPVirtual // number of particles
	ring, slot            reg.GPVirtual // address; offset of the current slot's cells
	full                  Mem           // value of i from which on the ring is full
}

// sum begins a form: n particles, a positive multiple of lanes.
func sum(name string) *summer {
	s := &summer{name: name}
	TEXT(name, 0, "func(x, vx, vy, vz *float64, n int, field *float64, cells int, "+
		"sums, energy *float64) int")
	Pragma("noescape")
	s.i = GP64()
	Load(Param("n"), s.i)
	behind := func(name string) reg.GPVirtual {
		p := GP64()
		Load(Param(name), p)
		LEAQ(Mem{Base: p, Index: s.i, Scale: 8}, p)
		return p
	}
	s.x, s.vx, s.vy, s.vz = behind("x"), behind("vx"), behind("vy"), behind("vz")
	s.energy = behind("energy")
	NEGQ(s.i)
	s.field = Load(Param("field"), GP64())
	s.sums = Load(Param("sums"), GP64())
	memory := AllocLocal(termsBytes + cellsBytes + pairBytes)
	s.full = AllocLocal(8)
	s.ring, s.slot, s.fast = GP64(), GP64(), GP64()
	LEAQ(Mem{Base: s.i, Disp: ringVectors * lanes}, s.slot)
	MOVQ(s.slot, s.full)
	LEAQ(memory.Offset(pairBytes-1), s.ring)
	ANDQ(I32(-pairBytes), s.ring)
	XORL(s.slot.As32(), s.slot.As32())
	XORL(s.fast.As32(), s.fast.As32())
	return s
}

func (s *summer) to(name string) LabelRef { return LabelRef(s.name + "_" + name) }
func (s *summer) here(name string)        { Label(s.name + "_" + name) }

// at is the vector of an array, from the given byte on.
func (s *summer) at(p reg.GPVirtual, b int) Mem {
	return Mem{Base: p, Index: s.i, Scale: 8, Disp: b}
}

// terms and cells of the current slot, from the given byte on.
func (s *summer) terms(b int) Mem {
	return Mem{Base: s.ring, Index: s.slot, Scale: termScale, Disp: b}
}

func (s *summer) cells(b int) Mem {
	return Mem{Base: s.ring, Index: s.slot, Scale: 1, Disp: termsBytes + b}
}

// addOld adds the terms that were put into the current slot a ring ago, if there were.
func (s *summer) addOld() {
	CMPQ(s.i, s.full)
	JLT(s.to("fresh"))
	s.add()
	s.here("fresh")
}

// add adds the terms of the current slot, lane by lane: sums in floating point depend on the order.
func (s *summer) add() {
	for l := range lanes {
		at := l%2*pairBytes + l/2*16
		cell, four := GP64(), YMM()
		MOVL(s.cells(4*l), cell.As32())
		VBROADCASTF128(s.terms(at), four) // the lower half; writes all of the register
		VINSERTF128(U8(1), s.terms(2*pairBytes+at), four, four)
		place := Mem{Base: s.sums, Index: cell, Scale: 1}
		VADDPD(place, four, four)
		VMOVUPD(four, place)
	}
}

func (s *summer) advance() {
	ADDL(U32(cellBytes), s.slot.As32())
	ANDL(U32(cellsBytes-1), s.slot.As32())
}

// finish goes on to the next vector; after the last one it adds what is left in the ring, the
// oldest first, and returns.
func (s *summer) finish() {
	s.advance()
	ADDQ(U8(lanes), s.i)
	JNE(s.to("loop"))
	left, zero := GP64(), GP64()
	Load(Param("n"), left)
	XORL(zero.As32(), zero.As32())
	CMPQ(left, U32(ringVectors*lanes))
	CMOVQLT(zero, s.slot) // the ring was not filled: the oldest is the first
	JLE(s.to("drain"))
	MOVL(U32(ringVectors*lanes), left.As32())
	s.here("drain")
	s.add()
	s.advance()
	SUBQ(U8(lanes), left)
	JNE(s.to("drain"))
	VZEROUPPER()
	Store(s.fast, ReturnIndex(0))
	RET()
}
