package probe

import "math"

const (
	// radialStart is the potential, in units of T, from which the radial solution starts: still
	// quasi-neutral, where a series gives it.
	radialStart = 1e-3
	// radialPhase is the step, as a part of a radian of the oscillation that a wrong start makes.
	radialPhase = 0.05
)

// RadialPotential is eta(x) of cold ions that fall radially onto a cylinder:
//
//	d/dx (x d eta/dx) = J eta^-1/2 - x exp(-eta), x = r/lambda_D,
//
// for the current J = I'/(2 pi lambda_D e n sqrt(2 e T/M)), I' the current per length.
//
// Ref: J. E. Allen, R. L. F. Boyd and P. Reynolds, Proc. Phys. Soc. B 70, 297 (1957); for
// cylinders F. F. Chen, J. Nucl. Energy C 7, 47 (1965).
func RadialPotential(current, x float64) float64 {
	// With s = ln x: eta'' = x (J eta^-1/2 - x exp(-eta)).
	if far := current / math.Sqrt(radialStart) * math.Exp(radialStart); x >= far {
		return quasiNeutral(current, x)
	}
	s := math.Log(current/math.Sqrt(radialStart)) + radialStart
	end := math.Log(x)
	eta, slope := startRadial(current, s)
	for s > end {
		at := math.Exp(s)
		// The oscillation has the wave number 1/sqrt(2 eta) in x; later everything is smooth.
		h := radialPhase * math.Sqrt(2*math.Max(eta, 1e-9)) / at
		h = -math.Min(math.Min(h, 0.01), s-end)
		eta, slope = stepRadial(current, s, h, eta, slope)
		s += h
		if s-end < 1e-14 {
			break
		}
	}
	return eta
}

// quasiNeutral solves J eta^-1/2 = x exp(-eta) for the small eta.
func quasiNeutral(current, x float64) float64 {
	eta := current * current / (x * x)
	for range 60 {
		eta = current * current / (x * x) * math.Exp(2*eta)
	}
	return eta
}

// startRadial is the quasi-neutral potential with the first correction of its own curvature, and
// its slope in s.
func startRadial(current, s float64) (eta, slope float64) {
	corrected := func(s float64) float64 {
		const h = 1e-3
		x := math.Exp(s)
		q := func(s float64) float64 { return quasiNeutral(current, math.Exp(s)) }
		curvature := (q(s+h) - 2*q(s) + q(s-h)) / (h * h)
		eta := q(s)
		for range 30 {
			density := x*math.Exp(-eta) + curvature/x
			eta = current * current / (density * density)
		}
		return eta
	}
	const h = 1e-3
	return corrected(s), (corrected(s+h) - corrected(s-h)) / (2 * h)
}

// stepRadial is a Runge-Kutta step of order 4 in s.
func stepRadial(current, s, h, eta, slope float64) (float64, float64) {
	rate := func(s, eta float64) float64 {
		x := math.Exp(s)
		return x * (current/math.Sqrt(eta) - x*math.Exp(-eta))
	}
	a1 := rate(s, eta)
	v2 := slope + h/2*a1
	a2 := rate(s+h/2, eta+h/2*slope)
	v3 := slope + h/2*a2
	a3 := rate(s+h/2, eta+h/2*v2)
	v4 := slope + h*a3
	a4 := rate(s+h, eta+h*v3)
	return eta + h/6*(slope+2*v2+2*v3+v4), slope + h/6*(a1+2*a2+2*a3+a4)
}

// RadialCurrent is J at which the radial potential at x is eta.
func RadialCurrent(x, eta float64) float64 {
	lo, hi := 1e-3, 1.0
	for RadialPotential(hi, x) < eta && hi < 1e6 {
		lo, hi = hi, 2*hi
	}
	for range 40 {
		mid := math.Sqrt(lo * hi)
		if RadialPotential(mid, x) < eta {
			lo = mid
		} else {
			hi = mid
		}
		if hi/lo < 1+1e-6 {
			break
		}
	}
	return math.Sqrt(lo * hi)
}
