package main

import (
	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

// pairs returns the addresses of the field at two cells, whose byte offsets are in the halves
// of packed, which is lost.
func pairs(field reg.Register, packed reg.GPVirtual) (a, b Mem) {
	low := GP64()
	MOVL(packed.As32(), low.As32())
	SHRQ(U8(32), packed)
	return Mem{Base: field, Index: low, Scale: 1}, Mem{Base: field, Index: packed, Scale: 1}
}

// fields512 loads the field at eight cells of byte offsets j: A and D in the order of the lanes.
func fields512(field reg.Register, j reg.VecVirtual) (a, d reg.VecVirtual) {
	upper := XMM()
	VEXTRACTI128(U8(1), j, upper)
	// even holds the pairs of lanes 0, 2, 4, 6; odd those of 1, 3, 5, 7.
	var even, odd [2]reg.VecVirtual
	for half, from := range []reg.Register{j.AsX(), upper} {
		even[half], odd[half] = ZMM(), ZMM()
		low, high := GP64(), GP64()
		VMOVQ(from, low)
		p, q := pairs(field, low)
		VMOVUPD(p, even[half].AsX())
		VMOVUPD(q, odd[half].AsX())
		VPEXTRQ(U8(1), from, high)
		p, q = pairs(field, high)
		VINSERTF64X2(U8(1), p, even[half].AsY(), even[half].AsY())
		VINSERTF64X2(U8(1), q, odd[half].AsY(), odd[half].AsY())
	}
	VINSERTF64X4(U8(1), even[1].AsY(), even[0], even[0])
	VINSERTF64X4(U8(1), odd[1].AsY(), odd[0], odd[0])
	a, d = ZMM(), ZMM()
	VUNPCKLPD(odd[0], even[0], a)
	VUNPCKHPD(odd[0], even[0], d)
	return a, d
}

// fields2 loads the field at four cells of byte offsets j: A and D in the order of the lanes.
func fields2(field reg.Register, j reg.VecVirtual) (a, d reg.VecVirtual) {
	even, odd := YMM(), YMM()
	low, high := GP64(), GP64()
	VMOVQ(j, low)
	p, q := pairs(field, low)
	VBROADCASTF128(p, even) // the lower half; writes all of the register
	VBROADCASTF128(q, odd)
	VPEXTRQ(U8(1), j, high)
	p, q = pairs(field, high)
	VINSERTF128(U8(1), p, even, even)
	VINSERTF128(U8(1), q, odd, odd)
	a, d = YMM(), YMM()
	VUNPCKLPD(odd, even, a)
	VUNPCKHPD(odd, even, d)
	return a, d
}
