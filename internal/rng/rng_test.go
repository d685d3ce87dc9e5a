package rng

import (
	"math"
	"testing"
)

// Goal: the block function is the published one. Method: the known answers that are
// published with the generator (all zeros, all ones, digits of pi).
func TestPhiloxKnownAnswers(t *testing.T) {
	const f = 0xffffffff
	for _, c := range []struct {
		counter [4]uint32
		key     [2]uint32
		want    [4]uint32
	}{
		{
			[4]uint32{},
			[2]uint32{},
			[4]uint32{0x6627e8d5, 0xe169c58d, 0xbc57ac4c, 0x9b00dbd8},
		},
		{
			[4]uint32{f, f, f, f},
			[2]uint32{f, f},
			[4]uint32{0x408f276d, 0x41c83b0e, 0xa20bc7c6, 0x6d5451fd},
		},
		{
			[4]uint32{0x243f6a88, 0x85a308d3, 0x13198a2e, 0x03707344},
			[2]uint32{0xa4093822, 0x299f31d0},
			[4]uint32{0xd16cfe09, 0x94fdcceb, 0x5001e420, 0x24126ea1},
		},
	} {
		if got := philox4x32(c.counter, c.key); got != c.want {
			t.Errorf("philox(%x, %x) = %x, want %x", c.counter, c.key, got, c.want)
		}
	}
}

// Goal: streams of neighbouring keys have nothing in common. Method: every single-field
// change of a key must give another first number.
func TestKeysSeparateStreams(t *testing.T) {
	base := Key{Seed: 1, Purpose: Collisions, Species: 1, Chunk: 3, Step: 1000}
	seen := map[uint64]Key{}
	for i := uint64(0); i < 64; i++ {
		for _, k := range []Key{
			{base.Seed + i<<1, base.Purpose, base.Species, base.Chunk, base.Step},
			{base.Seed, base.Purpose, base.Species, base.Chunk + uint32(i)<<1 + 1, base.Step},
			{base.Seed, base.Purpose, base.Species, base.Chunk, base.Step + i<<33 + i + 1},
			{base.Seed, base.Purpose, base.Species + uint16(i)<<1 + 1, base.Chunk, base.Step},
		} {
			s := k.Stream()
			u := s.Uint64()
			if other, ok := seen[u]; ok && other != k {
				t.Fatalf("keys %+v and %+v start alike", k, other)
			}
			seen[u] = k
		}
	}
}

// checkMoments compares sample means of x^1..x^4 with the exact ones. The bound is five
// standard errors of each mean: a false alarm once in 1.7e6 for each of the eight.
func checkMoments(t *testing.T, name string, draw func() float64, moment func(k int) float64) {
	t.Helper()
	const n = 2_000_000
	var sum [9]float64
	for range n {
		x := draw()
		p := 1.0
		for k := 1; k <= 8; k++ {
			p *= x
			sum[k] += p
		}
	}
	for k := 1; k <= 4; k++ {
		mean := sum[k] / n
		se := math.Sqrt((moment(2*k) - moment(k)*moment(k)) / n)
		if math.Abs(mean-moment(k)) > 5*se {
			t.Errorf("%s: mean of x^%d is %.6g, want %.6g +- %.2g", name, k, mean, moment(k), se)
		}
	}
}

func TestMoments(t *testing.T) {
	s := Key{Seed: 7, Purpose: Swarm}.Stream()
	factorial := func(k int) float64 { return math.Gamma(float64(k) + 1) }
	checkMoments(t, "uniform", s.Float64, func(k int) float64 { return 1 / float64(k+1) })
	checkMoments(t, "exponential", s.Exponential, factorial)
	checkMoments(t, "normal", s.Normal, func(k int) float64 {
		if k%2 == 1 {
			return 0
		}
		return factorial(k) / (math.Pow(2, float64(k/2)) * factorial(k/2))
	})
	// x^k of a direction's component averages 1/(k+1) for even k.
	checkMoments(t, "direction", func() float64 { _, y, _ := s.Direction(); return y },
		func(k int) float64 {
			if k%2 == 1 {
				return 0
			}
			return 1 / float64(k+1)
		})
}

// Goal: the tails, which moments hardly see. Method: count draws beyond the edges and
// compare with the exact probability, five standard errors of a Poisson count.
func TestTails(t *testing.T) {
	s := Key{Seed: 8, Purpose: Swarm}.Stream()
	const n = 4_000_000
	for _, c := range []struct {
		name string
		draw func() float64
		edge float64
		p    float64
	}{
		{"normal 2", s.Normal, 2, 0.5 * math.Erfc(2/math.Sqrt2)},
		{"normal 3.8", s.Normal, 3.8, 0.5 * math.Erfc(3.8/math.Sqrt2)},
		{"exponential 4", s.Exponential, 4, math.Exp(-4)},
		{"exponential 9", s.Exponential, 9, math.Exp(-9)},
	} {
		count := 0.0
		for range n {
			if c.draw() > c.edge {
				count++
			}
		}
		if want := n * c.p; math.Abs(count-want) > 5*math.Sqrt(want) {
			t.Errorf("%s: %g draws beyond, want %.1f", c.name, count, want)
		}
	}
}

func BenchmarkStream(b *testing.B) {
	var sink uint64
	for i := 0; b.Loop(); i++ {
		s := Key{Seed: 1, Step: uint64(i)}.Stream()
		sink += s.Uint64()
	}
	_ = sink
}

func BenchmarkUint64(b *testing.B) {
	s := Key{Seed: 1}.Stream()
	var sink uint64
	for b.Loop() {
		sink += s.Uint64()
	}
	_ = sink
}

func BenchmarkNormal(b *testing.B) {
	s := Key{Seed: 1}.Stream()
	var sink float64
	for b.Loop() {
		sink += s.Normal()
	}
	_ = sink
}

func BenchmarkExponential(b *testing.B) {
	s := Key{Seed: 1}.Stream()
	var sink float64
	for b.Loop() {
		sink += s.Exponential()
	}
	_ = sink
}

func BenchmarkDirection(b *testing.B) {
	s := Key{Seed: 1}.Stream()
	var sink float64
	for b.Loop() {
		x, _, _ := s.Direction()
		sink += x
	}
	_ = sink
}
