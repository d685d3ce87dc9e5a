package probe

import "math"

// Depleted is the electron current density over e n [m/s] at the retarding voltage u > 0 when the
// tip depletes the electrons around it:
//
//	(1/4) sqrt(2e/m) integral from u of (E - u) f / (1 + psi (E - u)/E) dE,
//
// for a sink parameter psi that does not depend on the energy.
//
// Ref: Arslanbekov, Khromov and Kudryavtsev, Plasma Sources Sci. Technol. 3, 528 (1994); from
// memory.
func (d *Distribution) Depleted(u, psi float64) float64 {
	sum := 0.0
	for k := range len(d.energy) - 1 {
		a, b := math.Max(d.energy[k], u), d.energy[k+1]
		if b <= a {
			continue
		}
		at := func(e float64) float64 {
			return (e - u) * d.inCell(k, e) / (1 + psi*(e-u)/e)
		}
		// Gauss-Legendre of three points.
		m, h := (a+b)/2, (b-a)/2
		g := math.Sqrt(0.6)
		sum += h / 9 * (5*at(m-g*h) + 8*at(m) + 5*at(m+g*h))
	}
	return electronScale() / 4 * sum
}

// SinkDensity is the density that Druyvesteyn's formula gives for a Maxwellian plasma of density 1
// around a tip with the sink parameter, and the factor on the mean energy.
func SinkDensity(psi float64) (density, energy float64) {
	d, err := Exponent(1, 1)
	if err != nil {
		return math.NaN(), math.NaN()
	}
	const steps, end, h = 400, 20.0, 1e-3
	var n, e float64
	for k := range steps {
		// With u = s^2 the root at 0 is smooth.
		s := math.Sqrt(end) * (float64(k) + 0.5) / steps
		u := s * s
		step := math.Min(h, u/4)
		second := (d.Depleted(u+step, psi) - 2*d.Depleted(u, psi) + d.Depleted(u-step, psi)) /
			(step * step)
		w := 2 * s * math.Sqrt(end) / steps
		n += w * s * second
		e += w * s * u * second
	}
	n *= 4 / electronScale()
	e *= 4 / electronScale()
	return n, e / n / 1.5
}
