package main

import (
	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

// pushAVX512 needs AVX-512 F, DQ and VL, and BMI1.
func pushAVX512() {
	f := open("pushAVX512")
	every := func(g reg.GPVirtual) reg.VecVirtual {
		z := ZMM()
		VPBROADCASTQ(g, z)
		return z
	}
	pattern := func(bits uint64) reg.VecVirtual {
		g := GP64()
		MOVQ(U64(bits), g)
		return every(g)
	}
	shift := pattern(shiftPattern)
	fraction := pattern(1<<fractionBits - 1)
	one := pattern(1 << sumBits)
	last, limit, count := YMM(), ZMM(), GP64()
	Load(Param("cells"), count)
	DECQ(count)
	VPBROADCASTD(count.As32(), last)
	INCQ(count)
	SHLQ(U8(fractionBits), count)
	VPBROADCASTQ(count, limit)

	f.here("loop")
	x, j, left, sum := ZMM(), YMM(), ZMM(), ZMM()
	VMOVUPD(f.position(0), x)
	VCVTTPD2DQ(x, j)
	VCVTDQ2PD(j, left)
	VPMINUD(last, j, j) // whatever x is, no field beyond the last is read
	VPSLLD(U8(4), j, j)
	a, d := fields512(f.field, j)

	// v += A + (x - j) D;  x += v
	VSUBPD(left, x, sum)
	VMULPD(d, sum, sum)
	VADDPD(sum, a, sum)
	VADDPD(f.velocity(0), sum, sum)
	VMOVUPD(sum, f.velocity(0))
	VADDPD(sum, x, x)
	VMOVUPD(x, f.position(0))

	word, q := ZMM(), ZMM()
	VADDPD(shift, x, word)
	VPSUBQ(shift, word, q) // fixed(x)
	leaves := K()
	VPCMPUQ(U8(5), limit, q, leaves) // not less
	VPSRLQ(U8(fractionBits), q, q)
	VPTERNLOGQ(U8(0xEA), one, fraction, word) // word & fraction | one

	f.depositOld()
	VMOVDQU64(q, f.cells(0))
	VMOVDQU64(word, f.words(0))
	mask := GP32()
	KMOVB(leaves, mask)
	TESTL(mask, mask)
	JNE(f.to("leave"))
	f.here("stay")
	f.next()
	f.leave(mask)
	f.drain()
}
