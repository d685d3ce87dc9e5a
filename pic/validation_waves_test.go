package pic

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"ionfall/internal/validation"
)

const waveSource = "C. K. Birdsall and A. B. Langdon, Plasma Physics via Computer Simulation (1985)"

// Goal: the plasma frequency of cold electrons is that of theory within 0.5 %. Method: the
// standing wave of the exact test, at omega_p dt = 0.05 and 64 cells a wavelength. What the
// scheme is to give there, -0.12 % by the momentum-conserving grid and +0.01 % by the step, is
// tested exactly elsewhere.
func TestValidationPlasmaFrequency(t *testing.T) {
	for _, scheme := range schemes() {
		record(t, validation.Row{
			Section: "plasma waves", Quantity: fmt.Sprintf("cold plasma frequency, %v", scheme),
			Unit: "omega_p", Reference: 1, Source: waveSource, Status: "exact",
			Ours: oscillation(t, scheme, 64, 0.05), Limit: 0.005, LimitKind: validation.Relative,
			Note: "64 cells a wavelength, omega_p dt = 0.05",
		})
	}
}

// dispersion returns Z(zeta) = pi^-1/2 integral of exp(-t^2)/(t - zeta) dt, by the trapezoidal rule
// on a line below the pole and the real axis: the errors fall exponentially with the step.
func dispersion(zeta complex128) complex128 {
	const step = 0.02
	below := complex(0, math.Min(0, imag(zeta))-0.7)
	sum := complex(0, 0)
	for k := -500; k <= 500; k++ {
		at := complex(float64(k)*step, 0) + below
		sum += cmplx.Exp(-at*at) / (at - zeta)
	}
	return sum * complex(step/math.Sqrt(math.Pi), 0)
}

// langmuirRoot solves 1 + (1 + zeta Z(zeta))/(k lambda_D)^2 = 0, zeta = omega/(sqrt(2) k v_t), for
// omega/omega_p near the Bohm-Gross frequency, by the secant method.
//
// Ref: L. Landau, J. Phys. (USSR) 10, 25 (1946); B. D. Fried and S. D. Conte, The Plasma
// Dispersion Function (1961).
func langmuirRoot(kLambda float64) complex128 {
	f := func(omega complex128) complex128 {
		zeta := omega / complex(math.Sqrt2*kLambda, 0)
		return 1 + (1+zeta*dispersion(zeta))/complex(kLambda*kLambda, 0)
	}
	a := complex(math.Sqrt(1+3*kLambda*kLambda), -0.01)
	b := a + 0.01
	for range 50 {
		fa, fb := f(a), f(b)
		if cmplx.Abs(fb) < 1e-13 || fa == fb {
			break
		}
		a, b = b, b-fb*(b-a)/(fb-fa)
	}
	return b
}

// warmWave returns omega/omega_p, with damping as negative imaginary part, of a standing wave
// in a warm plasma among resting charges, fitted between two times [1/omega_p]. Mirrors at the
// walls make the gap one half of a periodic system. Two runs with opposite waves: half of their
// difference is free of the noise of the start, which both share, and of effects of second order.
func warmWave(t *testing.T, scheme Scheme, kLambda, from, until float64) complex128 {
	t.Helper()
	const density, perCell, cells, phase, amplitude = 1e14, 1024, 128, 0.05, 0.002
	heavy := ions(1)
	heavy.Mass = 1
	c := empty(cells, 100, electrons(), heavy)
	c.Scheme, c.Period = scheme, 100*phase/plasmaFrequency(density)
	c.Weight = density * c.Gap / (cells * perCell)
	c.Electrodes = [2]Electrode{{ElectronReflection: 1}, {ElectronReflection: 1}}
	spread := kLambda * cells / (2 * math.Pi) * phase
	var modes [2][]float64
	for run, a := range []float64{amplitude, -amplitude} {
		s := mustNew(t, c)
		for k := range cells * perCell {
			s.species[1].chunks[k%3].add((float64(k)+0.5)/perCell, 0, 0, 0)
		}
		quietWave(s, cells*perCell, a, func(k int) float64 { return spread * maxwellian(k) })
		mode := fieldMode(s)
		mustAdvance(t, s, int(until/phase))
		modes[run] = *mode
	}
	wave := modes[0][int(from/phase):]
	for n, e := range modes[1][int(from/phase):] {
		wave[n] -= e
	}
	return dampedFrequency(wave) / complex(phase, 0)
}

// dampedFrequency fits a[n+1] = p a[n] - q a[n-1], which every a = Re C exp(-i omega n) obeys, and
// returns omega: q = exp(2 Im omega), p = 2 exp(Im omega) cos(Re omega). Every lag-th sample is
// used, a sixth of a period apart, which keeps noise from biasing the fit.
func dampedFrequency(a []float64) complex128 {
	const lag = 20
	var s00, s01, s11, b0, b1 float64
	for n := lag; n+lag < len(a); n++ {
		x, y, z := a[n], -a[n-lag], a[n+lag]
		s00, s01, s11 = s00+x*x, s01+x*y, s11+y*y
		b0, b1 = b0+x*z, b1+y*z
	}
	det := s00*s11 - s01*s01
	p, q := (b0*s11-b1*s01)/det, (b1*s00-b0*s01)/det
	return complex(math.Acos(p/(2*math.Sqrt(q))), 0.5*math.Log(q)) / lag
}

// Goal: waves in a warm plasma have the frequency and the damping of kinetic theory. Method: a
// quiet start; electrons mirrored by both walls. The fits start when all other roots of the
// dispersion relation, damped by more than omega_p, are below 1 %, and end before the fastest
// electrons are trapped, after 2 pi/(omega_p sqrt(a)) = 140/omega_p. At k lambda_D = 0.25 the fluid
// formula of D. Bohm and E. P. Gross (Phys. Rev. 75, 1851 (1949)) is 1.4 % lower, so that 0.5 %
// tell both apart. For the damping 2 % are allowed: the grid and the step give
// (k dx)^2/12 + (omega dt)^2/24 < 0.1 % of the frequency, and the damping changes ten times as
// fast as the frequency with k.
func TestValidationWarmWaves(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some ten seconds")
	}
	for _, scheme := range schemes() {
		want, got := langmuirRoot(0.25), warmWave(t, scheme, 0.25, 5, 75)
		row := validation.Row{
			Section: "plasma waves", Unit: "omega_p", Status: "exact",
			Source:    "L. Landau, J. Phys. (USSR) 10, 25 (1946), root of the kinetic dispersion relation",
			Quantity:  fmt.Sprintf("Langmuir wave frequency, k lambda_D = 0.25, %v", scheme),
			Reference: real(want), Ours: real(got), Limit: 0.005, LimitKind: validation.Relative,
		}
		strong, damped := langmuirRoot(0.5), warmWave(t, scheme, 0.5, 5, 20)
		second, third := row, row
		second.Quantity = fmt.Sprintf("Langmuir wave frequency, k lambda_D = 0.5, %v", scheme)
		second.Reference, second.Ours = real(strong), real(damped)
		third.Quantity = fmt.Sprintf("Landau damping, k lambda_D = 0.5, %v", scheme)
		third.Reference, third.Ours, third.Limit = -imag(strong), -imag(damped), 0.02
		record(t, row, second, third)
	}
}

// Goal: two cold beams grow at the rate of theory. Method: equal beams of opposite velocity,
// turned into each other by mirrors at both walls, so that one wavelength between the walls is half
// of a periodic system of two. The dispersion relation 1 = sum of (omega_b/(omega -+ k v))^2 has
// its fastest growth, omega_b/2 = omega_p/(2 sqrt 2), at k v = sqrt(3)/2 omega_b. The fit starts
// after a hundredfold growth, when the other three roots are below 1 %, and ends at 3 % of the
// largest field.
//
// Ref: O. Buneman, Phys. Rev. 115, 503 (1959); Birdsall and Langdon (1985), ch. 5.
func TestValidationTwoStreams(t *testing.T) {
	const density, perCell, cells, phase = 1e14, 256, 128, 0.05
	for _, scheme := range schemes() {
		heavy := ions(1)
		heavy.Mass = 1
		c := empty(cells, 100, electrons(), heavy)
		c.Scheme, c.Period = scheme, 100*phase/plasmaFrequency(density)
		c.Weight = density * c.Gap / (cells * perCell)
		c.Electrodes = [2]Electrode{{ElectronReflection: 1}, {ElectronReflection: 1}}
		s := mustNew(t, c)
		for k := range cells * perCell {
			s.species[1].chunks[k%3].add((float64(k)+0.5)/perCell, 0, 0, 0)
		}
		speed := math.Sqrt(3) / 2 / math.Sqrt2 * phase * cells / (2 * math.Pi)
		for _, v := range []float64{speed, -speed} {
			quietWave(s, cells*perCell/2, 1e-5, func(int) float64 { return v })
		}
		mode := fieldMode(s)
		mustAdvance(t, s, int(50/phase))
		var x, y []float64
		top, start := 0.0, math.Abs((*mode)[0])
		for _, e := range *mode {
			top = math.Max(top, math.Abs(e))
		}
		for n, e := range *mode {
			if e = math.Abs(e); e > 0.03*top {
				break
			} else if e > 100*start {
				x, y = append(x, float64(n)*phase), append(y, math.Log(e))
			}
		}
		t.Logf("%v: start %g, top %g, %d points", scheme, start, top, len(x))
		record(t, validation.Row{
			Section: "plasma waves", Quantity: fmt.Sprintf("two-stream growth rate, %v", scheme),
			Unit: "omega_p", Reference: 1 / (2 * math.Sqrt2), Status: "exact",
			Source: "O. Buneman, Phys. Rev. 115, 503 (1959); " + waveSource,
			Ours:   slope(x, y), Limit: 0.01, LimitKind: validation.Relative,
		})
	}
}
