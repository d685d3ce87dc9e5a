package main

import (
	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

// addMomentsAVX2 needs AVX2 and POPCNT. A vector of eight lanes is done in two parts.
func addMomentsAVX2() {
	s := sum("addMomentsAVX2")
	pattern := func(bits uint64) reg.VecVirtual {
		g, y := GP64(), YMM()
		MOVQ(U64(bits), g)
		VMOVQ(g, y.AsX())
		VPBROADCASTQ(y.AsX(), y)
		return y
	}
	half := pattern(0x3FE << 52)
	one := pattern(0x3FF << 52)
	magnitude := pattern(1<<63 - 1)
	last, count := XMM(), GP64()
	Load(Param("cells"), count)
	DECQ(count)
	VMOVD(count.As32(), last)
	VPBROADCASTD(last, last)

	s.here("loop")
	s.addOld()
	for part := range 2 {
		s.terms2(32*part, half, one, magnitude, last)
	}
	s.finish()
}

// terms2 puts the terms of the four particles from byte at of the vector on into the slot.
func (s *summer) terms2(at int, half, one, magnitude, last reg.VecVirtual) {
	x, j, right := YMM(), XMM(), YMM()
	VMOVUPD(s.at(s.x, at), x)
	VCVTTPD2DQY(x, j)
	VCVTDQ2PD(j, right)
	VPMINUD(last, j, j)
	VSUBPD(right, x, right) // x - j, the right node's part
	offset, cell := XMM(), XMM()
	VPSLLD(U8(4), j, offset)
	VPSLLD(U8(5), j, cell)
	VMOVDQU(cell, s.cells(at/2))
	a, d := fields2(s.field, offset)

	// a = A + (x - j) D;  v = vx + a/2;  e = v^2 + vy^2 + vz^2
	v, e, w := YMM(), YMM(), YMM()
	VMULPD(right, d, d)
	VADDPD(d, a, a)
	VMULPD(half, a, v)
	VADDPD(s.at(s.vx, at), v, v)
	VMULPD(v, v, e)
	for _, p := range []reg.GPVirtual{s.vy, s.vz} {
		VMOVUPD(s.at(p, at), w)
		VMULPD(w, w, w)
		VADDPD(w, e, e)
	}
	VMOVUPD(e, s.at(s.energy, at))
	number := GP32()
	VPAND(magnitude, v, w)
	VCMPPD(U8(0x1E), one, w, w) // greater
	VMOVMSKPD(w, number)
	POPCNTL(number, number)
	ADDQ(number.As64(), s.fast)

	VMULPD(v, a, a) // power
	for k, of := range []reg.VecVirtual{a, e} {
		part, even, odd := YMM(), YMM(), YMM()
		VMULPD(right, of, part)
		VUNPCKLPD(part, of, even)
		VUNPCKHPD(part, of, odd)
		VMOVUPD(even, s.terms(2*k*pairBytes+at))
		VMOVUPD(odd, s.terms((2*k+1)*pairBytes+at))
	}
}
