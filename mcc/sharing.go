package mcc

import (
	"math"

	"ionfall/internal/rng"
)

// Sharing is how both electrons of an ionization share the excess energy.
type Sharing int

// The laws of energy sharing.
const (
	// EqualSharing gives half to each.
	EqualSharing Sharing = iota
	// UniformSharing makes every division equally likely.
	UniformSharing
	// OpalSharing prefers a slow second electron: dQ/dE ~ 1/(1 + (E/w)^2.1), w a width of the gas.
	//
	// Ref: C. B. Opal, W. K. Peterson and E. C. Beaty, J. Chem. Phys. 55, 4100 (1971).
	OpalSharing
)

// opalPart is the width w over the ionization energy where a gas has none of its own: that of most
// gases is 0.6 to 1.
const opalPart = 0.6

// share returns the part of the excess energy that the second electron gets; width is w over the
// excess. With equal sharing no random number is drawn.
func (k Sharing) share(s *rng.Stream, width float64) float64 {
	switch k {
	case UniformSharing:
		return s.Float64()
	case OpalSharing:
		return width * opal(s, 0.5/width)
	}
	return 0.5
}

// opalExcess is above the largest ratio of the law to that with the exponent 2: 1.01368 at 0.54.
const opalExcess = 1.0137

// opal draws x from 1/(1 + x^2.1) up to most, by rejection from 1/(1 + x^2), which has an inverse
// in closed form.
func opal(s *rng.Stream, most float64) float64 {
	angle := math.Atan(most)
	for {
		x := math.Tan(s.Float64() * angle)
		if s.Float64()*opalExcess*(1+math.Pow(x, 2.1)) < 1+x*x {
			return x
		}
	}
}

// Scattering is the angular distribution of elastic collisions of electrons.
type Scattering int

// The angular distributions.
const (
	// IsotropicScattering takes the cross section of momentum transfer for the total one.
	IsotropicScattering Scattering = iota
	// ScreenedCoulomb is forward peaked, as in a screened Coulomb field; the total cross section is
	// that which has the same momentum transfer.
	//
	// Ref: A. Okhrimovskyy, A. Bogaerts and R. Gijbels, Phys. Rev. E 65, 037402 (2002).
	ScreenedCoulomb
)

// hartree [eV] is the scale of energy of the screened field.
const hartree = 27.211386

// forwardness is xi of the law dP/dOmega = (1 - xi^2)/(4 pi (1 - xi cos chi)^2) at the energy.
func forwardness(energyEV float64) float64 {
	e := 4 * energyEV / hartree
	return e / (1 + e)
}

// momentumPart is the momentum-transfer over the total cross section of the law: the mean of
// 1 - cos chi.
func momentumPart(xi float64) float64 {
	if xi < 1e-3 {
		return 1 - 2*xi/3
	}
	return (1 - xi) / (2 * xi * xi) * ((1+xi)*math.Log((1+xi)/(1-xi)) - 2*xi)
}

// turned returns a vector of the length to which the direction of g is turned, by an angle of the
// law at xi.
func turned(s *rng.Stream, g velocity, length, xi float64) velocity {
	u := s.Float64()
	cos := 1 - 2*u*(1-xi)/(1+xi*(1-2*u))
	sin := math.Sqrt(math.Max(0, 1-cos*cos))
	azimuth := 2 * math.Pi * s.Float64()
	size := math.Sqrt(g.square())
	if size == 0 {
		return velocity{}.plus(length, direction(s))
	}
	e := velocity{g.x / size, g.y / size, g.z / size}
	// Two directions across e; the helper is the axis that e is farthest from.
	helper := velocity{1, 0, 0}
	if math.Abs(e.x) > 0.7 {
		helper = velocity{0, 1, 0}
	}
	a := e.cross(helper)
	a = velocity{}.plus(1/math.Sqrt(a.square()), a)
	b := e.cross(a)
	c, t := math.Cos(azimuth), math.Sin(azimuth)
	return velocity{
		length * (cos*e.x + sin*(c*a.x+t*b.x)),
		length * (cos*e.y + sin*(c*a.y+t*b.y)),
		length * (cos*e.z + sin*(c*a.z+t*b.z)),
	}
}

func (a velocity) cross(b velocity) velocity {
	return velocity{a.y*b.z - a.z*b.y, a.z*b.x - a.x*b.z, a.x*b.y - a.y*b.x}
}
