// Package rng gives every use of randomness in a run its own stream of numbers.
//
// A stream is named by (seed, purpose, species, step, chunk). Its start is one block of the
// counter-based generator Philox4x32-10; the numbers that follow come from xoroshiro128++.
// No stream depends on another, so results do not depend on the number of workers, and a
// checkpoint holds no generator state.
//
// References: J. K. Salmon, M. A. Moraes, R. O. Dror and D. E. Shaw, Proc. Int. Conf. High
// Performance Computing (SC11), 16 (2011); D. Blackman and S. Vigna, ACM Trans. Math. Softw.
// 47, 36 (2021).
package rng

import (
	"math"
	"math/bits"
)

// Key names a stream.
type Key struct {
	Seed    uint64
	Purpose Purpose
	Species uint16
	Chunk   uint32
	Step    uint64
}

// Stream is a sequence of random numbers. The zero value is not usable: see Key.Stream.
type Stream struct {
	s0, s1 uint64
}

// Stream returns the stream of the key, at its start.
func (k Key) Stream() Stream {
	counter := [4]uint32{
		uint32(k.Step), uint32(k.Step >> 32),
		k.Chunk, uint32(k.Purpose)<<16 | uint32(k.Species),
	}
	out := philox4x32(counter, [2]uint32{uint32(k.Seed), uint32(k.Seed >> 32)})
	s := Stream{uint64(out[0]) | uint64(out[1])<<32, uint64(out[2]) | uint64(out[3])<<32}
	if s.s0|s.s1 == 0 {
		s.s1 = 1 // the one state from which xoroshiro does not move
	}
	return s
}

// philox4x32 is Philox4x32 with ten rounds: four 32-bit words of counter, two of key.
func philox4x32(c [4]uint32, k [2]uint32) [4]uint32 {
	const (
		m0, m1 = 0xD2511F53, 0xCD9E8D57
		w0, w1 = 0x9E3779B9, 0xBB67AE85
	)
	for range 10 {
		p0 := uint64(c[0]) * m0
		p1 := uint64(c[2]) * m1
		c = [4]uint32{
			uint32(p1>>32) ^ c[1] ^ k[0], uint32(p1),
			uint32(p0>>32) ^ c[3] ^ k[1], uint32(p0),
		}
		k[0] += w0
		k[1] += w1
	}
	return c
}

// Uint64 returns 64 random bits (xoroshiro128++).
func (s *Stream) Uint64() uint64 {
	s0, s1 := s.s0, s.s1
	out := bits.RotateLeft64(s0+s1, 17) + s0
	s1 ^= s0
	s.s0 = bits.RotateLeft64(s0, 49) ^ s1 ^ s1<<21
	s.s1 = bits.RotateLeft64(s1, 28)
	return out
}

// Float64 returns a number uniform in [0, 1), a multiple of 2^-53.
func (s *Stream) Float64() float64 {
	return float64(s.Uint64()>>11) * 0x1p-53
}

// Direction returns a unit vector, isotropic.
//
// Ref: G. Marsaglia, Ann. Math. Stat. 43, 645 (1972).
func (s *Stream) Direction() (x, y, z float64) {
	for {
		u := s.Uint64()
		a := float64(int32(u)) * 0x1p-31
		b := float64(int32(u>>32)) * 0x1p-31
		r := float64(a*a) + float64(b*b)
		if r >= 1 {
			continue
		}
		q := 2 * math.Sqrt(1-r)
		return a * q, b * q, 1 - 2*r
	}
}
