package main

import (
	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

// addMomentsAVX512 needs AVX-512 F, DQ and VL, and POPCNT.
func addMomentsAVX512() {
	s := sum("addMomentsAVX512")
	pattern := func(bits uint64) reg.VecVirtual {
		g, z := GP64(), ZMM()
		MOVQ(U64(bits), g)
		VPBROADCASTQ(g, z)
		return z
	}
	half := pattern(0x3FE << 52)
	one := pattern(0x3FF << 52)
	magnitude := pattern(1<<63 - 1)
	last, count := YMM(), GP64()
	Load(Param("cells"), count)
	DECQ(count)
	VPBROADCASTD(count.As32(), last)

	s.here("loop")
	x, j, right := ZMM(), YMM(), ZMM()
	VMOVUPD(s.at(s.x, 0), x)
	VCVTTPD2DQ(x, j)
	VCVTDQ2PD(j, right)
	VPMINUD(last, j, j)
	VSUBPD(right, x, right) // x - j, the right node's part
	offset, cell := YMM(), YMM()
	VPSLLD(U8(4), j, offset)
	VPSLLD(U8(5), j, cell)
	a, d := fields512(s.field, offset)

	// a = A + (x - j) D;  v = vx + a/2;  e = v^2 + vy^2 + vz^2
	v, e, w := ZMM(), ZMM(), ZMM()
	VMULPD(right, d, d)
	VADDPD(d, a, a)
	VMULPD(half, a, v)
	VADDPD(s.at(s.vx, 0), v, v)
	VMULPD(v, v, e)
	for _, p := range []reg.GPVirtual{s.vy, s.vz} {
		VMOVUPD(s.at(p, 0), w)
		VMULPD(w, w, w)
		VADDPD(w, e, e)
	}
	VMOVUPD(e, s.at(s.energy, 0))
	quick, number := K(), GP32()
	VPANDQ(magnitude, v, w)
	VCMPPD(U8(0x1E), one, w, quick) // greater
	KMOVB(quick, number)
	POPCNTL(number, number)
	ADDQ(number.As64(), s.fast)

	VMULPD(v, a, a) // power
	rightPower, rightEnergy := ZMM(), ZMM()
	VMULPD(right, a, rightPower)
	VMULPD(right, e, rightEnergy)
	s.addOld()
	for k, of := range [][2]reg.VecVirtual{{a, rightPower}, {e, rightEnergy}} {
		even, odd := ZMM(), ZMM()
		VUNPCKLPD(of[1], of[0], even)
		VUNPCKHPD(of[1], of[0], odd)
		VMOVUPD(even, s.terms(2*k*pairBytes))
		VMOVUPD(odd, s.terms((2*k+1)*pairBytes))
	}
	VMOVDQU(cell, s.cells(0))
	s.finish()
}
