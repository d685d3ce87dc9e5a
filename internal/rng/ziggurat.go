package rng

import "math"

// layers is the number of rectangles of equal area under each density.
const layers = 256

// ziggurat covers a decreasing density f on x > 0 by rectangles of equal area.
//
// Ref: G. Marsaglia and W. W. Tsang, J. Stat. Softw. 5, 8 (2000). Layer and position come
// from different bits of one 64-bit number, as they must be independent (J. A. Doornik,
// "An improved ziggurat method to generate normal random samples" (2005), from memory).
type ziggurat struct {
	x [layers + 1]float64 // right edge of each layer; x[0] is the base's virtual width
	f [layers + 1]float64 // density at that edge
}

// newZiggurat builds the layers above the tail edge r, each of area v.
func newZiggurat(r, v float64, f, inverse func(float64) float64) *ziggurat {
	z := &ziggurat{}
	z.x[0], z.f[0] = v/f(r), 0
	z.x[1], z.f[1] = r, f(r)
	for i := 2; i < layers; i++ {
		z.f[i] = z.f[i-1] + v/z.x[i-1]
		z.x[i] = inverse(z.f[i])
	}
	z.x[layers], z.f[layers] = 0, 1
	return z
}

// The tail edges and areas solve the closure condition of 256 layers (Marsaglia and Tsang).
const (
	normalEdge, normalArea           = 3.6541528853610088, 0.00492867323399
	exponentialEdge, exponentialArea = 7.69711747013104972, 0.0039496598225815571993
)

var (
	normalLayers = newZiggurat(normalEdge, normalArea,
		func(x float64) float64 { return math.Exp(-0.5 * x * x) },
		func(y float64) float64 { return math.Sqrt(-2 * math.Log(y)) })
	exponentialLayers = newZiggurat(exponentialEdge, exponentialArea,
		func(x float64) float64 { return math.Exp(-x) },
		func(y float64) float64 { return -math.Log(y) })
)

// Normal returns a normal deviate of mean 0 and variance 1.
func (s *Stream) Normal() float64 {
	z := normalLayers
	for {
		u := s.Uint64()
		i := u & (layers - 1)
		x := float64(int64(u)>>11) * 0x1p-52 * z.x[i]
		if math.Abs(x) < z.x[i+1] {
			return x
		}
		if i == 0 {
			return math.Copysign(s.normalTail(), x)
		}
		if z.f[i]+s.Float64()*(z.f[i+1]-z.f[i]) < math.Exp(-0.5*x*x) {
			return x
		}
	}
}

// normalTail returns a normal deviate above the tail edge (G. Marsaglia, Technometrics 6,
// 101 (1964)).
func (s *Stream) normalTail() float64 {
	for {
		x := -math.Log(1-s.Float64()) / normalEdge
		y := -math.Log(1 - s.Float64())
		if 2*y > x*x {
			return normalEdge + x
		}
	}
}

// Exponential returns an exponential deviate of mean 1.
func (s *Stream) Exponential() float64 {
	z := exponentialLayers
	shift := 0.0
	for {
		u := s.Uint64()
		i := u & (layers - 1)
		x := float64(u>>11) * 0x1p-53 * z.x[i]
		if x < z.x[i+1] {
			return shift + x
		}
		if i == 0 {
			shift += exponentialEdge // the tail is the same density again
			continue
		}
		if z.f[i]+s.Float64()*(z.f[i+1]-z.f[i]) < math.Exp(-x) {
			return shift + x
		}
	}
}
