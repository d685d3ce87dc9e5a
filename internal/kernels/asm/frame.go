package main

import (
	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

// Of package kernels; its tests compare the bits.
const (
	fractionBits = 23
	sumBits      = 44
	shiftPattern = 0x41C8 << 48 // of the float64 roundingShift = 3 * 2^28
)

const (
	lanes = 8
	// ringVectors is how many vectors wait for their deposit. Fewer are read back before they
	// have left the store queue; more were slower, too.
	ringVectors = 8
	// slotBytes of the ring hold a vector's cell numbers, then its words, of 64 bits.
	slotBytes = 2 * 8 * lanes
	ringBytes = ringVectors * slotBytes
)

// frame is what both kernels have in common: the general registers and the ring.
type frame struct {
	name string

	x, v  reg.Register  // just behind the last particle
	i     reg.GPVirtual // index of the vector, counted from there: negative
	field reg.Register  // byte address of pairs (A, D)
	acc   reg.Register
	out   reg.Register  // where the next index goes
	end   reg.GPVirtual // index of the particle behind the last one, in the caller's count
	full  reg.GPVirtual // value of i from which on the ring is full
	ring  reg.GPVirtual // aligned to its slots
	slot  reg.GPVirtual // offset of the current slot
}

// open begins a kernel: n particles, a positive multiple of lanes, with all x in the given number
// of cells before. The indices of those that leave, base for the first particle, go to out; their
// number is returned.
func open(name string) *frame {
	f := &frame{name: name}
	TEXT(name, 0, "func(x, v *float64, n int, field *float64, cells int, "+
		"acc *uint64, out *int32, base int) int")
	Pragma("noescape")
	f.x = Load(Param("x"), GP64())
	f.v = Load(Param("v"), GP64())
	f.i, f.end, f.full = GP64(), GP64(), GP64()
	Load(Param("n"), f.i)
	f.field = Load(Param("field"), GP64())
	f.acc = Load(Param("acc"), GP64())
	f.out = Load(Param("out"), GP64())
	Load(Param("base"), f.end)
	ADDQ(f.i, f.end)
	LEAQ(Mem{Base: f.x, Index: f.i, Scale: 8}, f.x.(reg.GPVirtual))
	LEAQ(Mem{Base: f.v, Index: f.i, Scale: 8}, f.v.(reg.GPVirtual))
	NEGQ(f.i)
	LEAQ(Mem{Base: f.i, Disp: ringVectors * lanes}, f.full)
	memory := AllocLocal(ringBytes + slotBytes)
	f.ring, f.slot = GP64(), GP64()
	LEAQ(memory.Offset(slotBytes-1), f.ring)
	ANDQ(I32(-slotBytes), f.ring)
	XORL(f.slot.As32(), f.slot.As32())
	return f
}

func (f *frame) label(name string) string { return f.name + "_" + name }
func (f *frame) to(name string) LabelRef  { return LabelRef(f.label(name)) }
func (f *frame) here(name string)         { Label(f.label(name)) }
func (f *frame) position(part int) Mem    { return f.vector(f.x, part) }
func (f *frame) velocity(part int) Mem    { return f.vector(f.v, part) }
func (f *frame) vector(p reg.Register, b int) Mem {
	return Mem{Base: p, Index: f.i, Scale: 8, Disp: b}
}

// cells and words of the current slot, from the given byte on.
func (f *frame) cells(b int) Mem { return Mem{Base: f.ring, Index: f.slot, Scale: 1, Disp: b} }
func (f *frame) words(b int) Mem { return f.cells(8*lanes + b) }

// depositOld adds the words that were put into the current slot a ring ago, if there were.
func (f *frame) depositOld() {
	CMPQ(f.i, f.full)
	JLT(f.to("fresh"))
	f.deposit()
	f.here("fresh")
}

// deposit adds the words of the current slot to their cells.
func (f *frame) deposit() {
	for l := range lanes {
		cell, word := GP64(), GP64()
		MOVQ(f.cells(8*l), cell)
		MOVQ(f.words(8*l), word)
		ADDQ(word, Mem{Base: f.acc, Index: cell, Scale: 8})
	}
}

// next goes on to the next vector and slot.
func (f *frame) next() {
	ADDL(U32(slotBytes), f.slot.As32())
	ANDL(U32(ringBytes-1), f.slot.As32())
	ADDQ(U8(lanes), f.i)
	JNE(f.to("loop"))
	JMP(f.to("drain"))
}

// leave is the way of vectors with lanes that leave, set in mask: it writes their indices and
// takes their deposits back, which is to say that they add 0 to cell 0.
func (f *frame) leave(mask reg.GPVirtual) {
	f.here("leave")
	lane, index, slot := GP64(), GP64(), GP64()
	TZCNTL(mask, lane.As32())
	LEAQ(Mem{Base: f.end, Index: f.i, Scale: 1}, index)
	ADDQ(lane, index)
	MOVL(index.As32(), Mem{Base: f.out})
	ADDQ(U8(4), f.out.(reg.GPVirtual))
	LEAQ(f.cells(0), slot)
	MOVQ(I32(0), Mem{Base: slot, Index: lane, Scale: 8})
	MOVQ(I32(0), Mem{Base: slot, Index: lane, Scale: 8, Disp: 8 * lanes})
	BLSRL(mask, mask)
	JNE(f.to("leave"))
	JMP(f.to("stay"))
}

// drain deposits what is left in the ring, and returns. The order does not matter to the sums.
func (f *frame) drain() {
	f.here("drain")
	filled := GP64()
	Load(Param("n"), filled)
	SHLQ(U8(4), filled) // slotBytes / lanes
	limit := GP64()
	MOVL(U32(ringBytes), limit.As32())
	CMPQ(filled, limit)
	CMOVQHI(limit, filled)
	XORL(f.slot.As32(), f.slot.As32())
	f.here("rest")
	f.deposit()
	ADDQ(U32(slotBytes), f.slot)
	CMPQ(f.slot, filled)
	JNE(f.to("rest"))
	VZEROUPPER()
	first := Load(Param("out"), GP64())
	SUBQ(first, f.out.(reg.GPVirtual))
	SHRQ(U8(2), f.out.(reg.GPVirtual))
	Store(f.out, ReturnIndex(0))
	RET()
}
