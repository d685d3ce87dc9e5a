package main

import (
	. "github.com/mmcloughlin/avo/build"
	. "github.com/mmcloughlin/avo/operand"
	"github.com/mmcloughlin/avo/reg"
)

// pushAVX2 needs AVX2 and BMI1. A vector of eight lanes is done in two parts.
func pushAVX2() {
	f := open("pushAVX2")
	every := func(g reg.GPVirtual) reg.VecVirtual {
		y := YMM()
		VMOVQ(g, y.AsX())
		VPBROADCASTQ(y.AsX(), y)
		return y
	}
	pattern := func(bits uint64) reg.VecVirtual {
		g := GP64()
		MOVQ(U64(bits), g)
		return every(g)
	}
	shift := pattern(shiftPattern)
	fraction := pattern(1<<fractionBits - 1)
	one := pattern(1 << sumBits)
	last, count := XMM(), GP64()
	Load(Param("cells"), count)
	DECQ(count)
	VMOVD(count.As32(), last)
	VPBROADCASTD(last, last)
	INCQ(count)
	SHLQ(U8(fractionBits), count)
	limit := every(count)

	f.here("loop")
	var cells, words [2]reg.VecVirtual
	var stay [2]reg.GPVirtual
	for part := range 2 {
		q, word := f.move2(32*part, shift, last)
		// 0 <= q < limit, q as a signed number: what is far off is negative or huge.
		inside := YMM()
		VPCMPGTQ(q, limit, inside)
		VPANDN(inside, q, inside)
		stay[part] = GP32()
		VMOVMSKPD(inside, stay[part])
		VPSRLQ(U8(fractionBits), q, q)
		VPAND(fraction, word, word)
		VPOR(one, word, word)
		cells[part], words[part] = q, word
	}
	f.depositOld()
	for part := range 2 {
		VMOVDQU(cells[part], f.cells(32*part))
		VMOVDQU(words[part], f.words(32*part))
	}
	mask := stay[1]
	SHLL(U8(4), mask)
	ORL(stay[0], mask)
	XORL(U32(1<<lanes-1), mask)
	JNE(f.to("leave"))
	f.here("stay")
	f.next()
	f.leave(mask)
	f.drain()
}

// move2 moves the four particles from byte at of the vector on. It returns fixed(x) and the pattern
// of x + roundingShift.
func (f *frame) move2(at int, shift, last reg.VecVirtual) (q, pattern reg.VecVirtual) {
	x, j, left, sum := YMM(), XMM(), YMM(), YMM()
	VMOVUPD(f.position(at), x)
	VCVTTPD2DQY(x, j)
	VCVTDQ2PD(j, left)
	VPMINUD(last, j, j) // whatever x is, no field beyond the last is read
	VPSLLD(U8(4), j, j)
	a, d := fields2(f.field, j)

	// v += A + (x - j) D;  x += v
	VSUBPD(left, x, sum)
	VMULPD(d, sum, sum)
	VADDPD(sum, a, sum)
	VADDPD(f.velocity(at), sum, sum)
	VMOVUPD(sum, f.velocity(at))
	VADDPD(sum, x, x)
	VMOVUPD(x, f.position(at))

	q, pattern = YMM(), YMM()
	VADDPD(shift, x, pattern)
	VPSUBQ(shift, pattern, q)
	return q, pattern
}
