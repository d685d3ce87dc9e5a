package mcc

import (
	"math"
	"sort"

	"ionfall/internal/phys"
	"ionfall/internal/rng"
)

// Coulomb lets electrons collide with each other, in pairs. The many small deflections that a pair
// sees in the time dt are drawn as one turn chi of its relative velocity g, from
//
//	f(chi) sin chi dchi,  f = A/(2 sinh A) exp(A cos chi),  coth A - 1/A = exp(-s),
//	s = (ln L/4 pi) (e^2/(eps0 mu))^2 n g^-3 dt,  mu = m/2
//
// so that <cos chi> = exp(-s). Momentum and energy of the pair are kept. It is read-only.
//
// Ref: K. Nanbu, Phys. Rev. E 55, 4642 (1997).
type Coulomb struct {
	strength float64 // s g^3/(n dt), g in the model's unit [m3/s]
}

// NewCoulomb returns the collisions of electrons among themselves. logarithm is ln L (see
// CoulombLogarithm), unit one unit of velocity [m/s].
func NewCoulomb(logarithm, unit float64) *Coulomb {
	k := phys.ElementaryCharge * phys.ElementaryCharge / (phys.Epsilon0 * 0.5 * phys.ElectronMass)
	return &Coulomb{logarithm / (4 * math.Pi) * k * k / (unit * unit * unit)}
}

// CoulombLogarithm returns ln L of electrons with electrons for the density [1/m3] and the
// temperature [eV]; at least 2, below which the idea of many small deflections fails.
//
// Ref: NRL Plasma Formulary (2019), p. 34 (Te < 10 eV; from memory).
func CoulombLogarithm(density, temperatureEV float64) float64 {
	perCubicCM := 1e-6 * density
	return math.Max(2, 23-math.Log(math.Sqrt(perCubicCM)*math.Pow(temperatureEV, -1.5)))
}

// CoulombFrequency returns the rate nu [1/s] at which a small anisotropy of the electron
// temperature dies away as exp(-3 nu t), for density n [1/m3] and temperature [eV]:
//
//	nu = (8 sqrt(pi)/15) (e^2/(4 pi eps0))^2 n ln L/(sqrt(m) T^1.5)
//
// Ref: NRL Plasma Formulary (2019), p. 33, isotropization, small anisotropy (from memory).
func CoulombFrequency(density, temperatureEV, logarithm float64) float64 {
	t := temperatureEV * phys.ElementaryCharge
	k := phys.ElementaryCharge * phys.ElementaryCharge / (4 * math.Pi * phys.Epsilon0)
	return 8 * math.Sqrt(math.Pi) / 15 * k * k * density * logarithm /
		(math.Sqrt(phys.ElectronMass) * math.Pow(t, 1.5))
}

// Pair collides electrons a and b of velocities (vx, vy, vz), in the unit of NewCoulomb; path is
// the electron density [1/m3] times the time since they last collided [s].
func (c *Coulomb) Pair(s *rng.Stream, a, b int32, path float64, vx, vy, vz []float64) {
	g := velocity{vx[a] - vx[b], vy[a] - vy[b], vz[a] - vz[b]}
	square := g.square()
	if square == 0 {
		return
	}
	speed := math.Sqrt(square)
	cos := turn(c.strength*path/(square*speed), s.Float64())
	sin := math.Sqrt(math.Max(0, 1-cos*cos))
	// Two unit vectors normal to g; the second is the vector product's.
	n := velocity{-g.y, g.x, 0}
	if math.Abs(g.z) > 0.9*speed {
		n = velocity{0, -g.z, g.y}
	}
	length := math.Sqrt(n.square())
	n = velocity{n.x / length, n.y / length, n.z / length}
	h := velocity{
		(g.y*n.z - g.z*n.y) / speed, (g.z*n.x - g.x*n.z) / speed, (g.x*n.y - g.y*n.x) / speed,
	}
	sinPhi, cosPhi := math.Sincos(2 * math.Pi * s.Float64())
	p, q := 0.5*speed*sin*cosPhi, 0.5*speed*sin*sinPhi
	r := 0.5 * (1 - cos)
	d := velocity{
		r*g.x - p*n.x - q*h.x, r*g.y - p*n.y - q*h.y, r*g.z - p*n.z - q*h.z,
	}
	vx[a], vy[a], vz[a] = vx[a]-d.x, vy[a]-d.y, vz[a]-d.z
	vx[b], vy[b], vz[b] = vx[b]+d.x, vy[b]+d.y, vz[b]+d.z
}

// turn returns cos chi for the mean turn s and a uniform number u.
func turn(s, u float64) float64 {
	if s > isotropic {
		return 2*u - 1
	}
	a := concentration(s)
	if a > 20 { // sinh A = exp(A)/2 to rounding
		return math.Max(-1, 1+math.Log(1-u)/a)
	}
	return math.Min(1, math.Max(-1, math.Log(math.Exp(-a)+2*u*math.Sinh(a))/a))
}

const (
	// isotropic is s from which on directions are all alike: exp(-s) < 0.0025.
	isotropic = 6
	// denseS is s below which coth A = 1 to rounding.
	denseS = 0.05
	rowsA  = 512
)

// tableA holds s A(s) at rowsA+1 points, even in ln s from denseS to isotropic.
var tableA = newTableA()

func newTableA() (table [rowsA + 1]float64) {
	for i := range table {
		s := denseS * math.Pow(isotropic/denseS, float64(i)/rowsA)
		// Langevin's function rises with A from 0 to 1.
		lo, hi := math.Log(1e-4), math.Log(1e3)
		half := func(a float64) bool { return 1/math.Tanh(a)-1/a >= math.Exp(-s) }
		k := sort.Search(1<<40, func(k int) bool {
			return half(math.Exp(lo + (hi-lo)*float64(k)/(1<<40)))
		})
		table[i] = s * math.Exp(lo+(hi-lo)*float64(k)/(1<<40))
	}
	return table
}

// concentration solves coth A - 1/A = exp(-s).
func concentration(s float64) float64 {
	if s < denseS {
		return -1 / math.Expm1(-s)
	}
	at := rowsA * math.Log(s/denseS) / math.Log(isotropic/denseS)
	i := min(int(at), rowsA-1)
	f := at - float64(i)
	return ((1-f)*tableA[i] + f*tableA[i+1]) / s
}
