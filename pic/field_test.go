package pic

import (
	"fmt"
	"math"
	"testing"

	"ionfall/internal/phys"
)

// sineCharge puts the charge eps0 k^2 sin(k x + 0.7) into the node numbers of the only species and
// solves. The potential is sin(k x + 0.7) plus the straight line that meets the walls.
func sineCharge(t *testing.T, cells int, scheme Scheme) (
	s *Simulation, phi, e func(x float64) float64,
) {
	t.Helper()
	c := empty(cells, 10, ions(1))
	c.Scheme, c.Weight, c.Drive.Bias = scheme, 1e9, 3
	s = mustNew(t, c)
	k := 9.0 / c.Gap
	offset := c.Drive.Bias - math.Sin(0.7)
	slope := (-math.Sin(9.7) - offset) / c.Gap
	phi = func(x float64) float64 { return math.Sin(k*x+0.7) + offset + slope*x }
	e = func(x float64) float64 { return -k*math.Cos(k*x+0.7) - slope }
	w := s.workers[0]
	dx := c.CellSize()
	for j := range w.number[0] {
		rho := phys.Epsilon0 * k * k * math.Sin(k*float64(j)*dx+0.7)
		w.number[0][j] = rho * dx / (phys.ElementaryCharge * c.Weight)
	}
	w.number[0][0] /= 2
	w.number[0][cells] /= 2
	s.solvePotential(w, 0)
	s.differentiate(w)
	return s, phi, e
}

// fieldErrors returns the largest errors of the potential, the node field, the wall field and the
// field that acts on particles: midway in the cells, where the energy-conserving field is centred.
func fieldErrors(t *testing.T, cells int, scheme Scheme) [4]float64 {
	s, phi, e := sineCharge(t, cells, scheme)
	w := s.workers[0]
	dx := s.config.CellSize()
	var worst [4]float64
	for j := range w.phi {
		x := float64(j) * dx
		worst[0] = max(worst[0], math.Abs(w.phi[j]-phi(x)))
		k := 1
		if j == 0 || j == cells {
			k = 2
		}
		worst[k] = max(worst[k], math.Abs(w.e[j]-e(x)))
	}
	for j := range w.fieldA {
		acting := w.fieldA[j] + 0.5*w.fieldD[j]
		worst[3] = max(worst[3], math.Abs(acting-e((float64(j)+0.5)*dx)))
	}
	return worst
}

// Goal: potential and fields are second order in dx. Method: a sine of charge, cells halved from
// 64 to 128 to 256; log2 of the ratio of errors. The next term of the expansion is of relative
// size (k dx)^2/12 < 0.002 and moves the order by less than 0.01; maxima over the nodes, which
// shift with the grid, by up to (k dx)^2/8 = 0.0025.
//
// Ref: C. K. Birdsall and A. B. Langdon, Plasma Physics via Computer Simulation (1985), app. D.
func TestFieldsAreSecondOrder(t *testing.T) {
	for _, scheme := range schemes() {
		coarse, mid, fine := fieldErrors(t, 64, scheme), fieldErrors(t, 128, scheme),
			fieldErrors(t, 256, scheme)
		for i, name := range []string{"potential", "node field", "wall field", "acting field"} {
			for k, ratio := range []float64{coarse[i] / mid[i], mid[i] / fine[i]} {
				checkNear(t, fmt.Sprintf("%v: order of the %s, halving %d", scheme, name, k+1),
					math.Log2(ratio), 2, 0.02)
			}
		}
	}
}

// Goal: Gauss's law holds between the walls and the drive's potential at them. Method: the sine
// of charge; the sum of node charges against the difference of the wall fields, to rounding.
func TestGaussLaw(t *testing.T) {
	for _, scheme := range schemes() {
		s, _, _ := sineCharge(t, 128, scheme)
		w := s.workers[0]
		charge, size := 0.0, 0.0
		for _, n := range w.number[0] {
			q := phys.ElementaryCharge * s.config.Weight * n / phys.Epsilon0
			charge += q
			size += math.Abs(q)
		}
		checkNear(t, "wall field difference", w.e[128]-w.e[0], charge, 1e-12*size)
		if w.phi[0] != s.config.Drive.Bias || w.phi[128] != 0 {
			t.Errorf("wall potentials %g and %g", w.phi[0], w.phi[128])
		}
	}
}

// Goal: without charge the discharge is a capacitor. Method: two tones with phases and a bias;
// J = eps0/L dV/dt at every step, to rounding; no energy is taken up over a period, and the
// ledger's field energy is C V^2/2.
func TestVacuumCapacitor(t *testing.T) {
	for _, scheme := range schemes() {
		c := empty(50, 128, electrons())
		c.Scheme = scheme
		c.Drive = Drive{Bias: -30, Tones: []Tone{
			{Harmonic: 1, Amplitude: 200, Phase: 0.3}, {Harmonic: 2, Amplitude: 90, Phase: 1.1},
		}}
		s := mustNew(t, c)
		capacity := phys.Epsilon0 / c.Gap
		peak := capacity * c.Drive.Largest() * 4 * math.Pi / c.Period
		swing := 0.0
		watch(s, &spy{step: func(i Circuit) {
			now := float64(i.Step) / 128
			want := 0.0
			if i.Step > 0 {
				want = capacity * (c.Drive.At(now) - c.Drive.At(now-1.0/128)) / c.TimeStep()
			}
			checkNear(t, "current", i.Current, want, 1e-12*peak)
			checkNear(t, "voltage", i.Voltage, c.Drive.At(now), 1e-12*c.Drive.Largest())
			checkNear(t, "mid-gap", i.MidGap, i.Voltage/2, 1e-12*c.Drive.Largest())
			swing = max(swing, math.Abs(i.Current))
		}})
		mustAdvance(t, s, 1) // the first current is known at step 1
		s.TakeLedger()
		for range 3 {
			mustAdvance(t, s, 128)
			l := s.TakeLedger()
			v := c.Drive.At(float64(s.Step()) / 128)
			stored := 0.5 * capacity * v * v
			checkNear(t, "field energy", l.Field, stored, 1e-12*stored)
			checkNear(t, "energy of a period", l.Electric, 0, 1e-12*peak*200*c.Period)
		}
		if swing < 0.1*peak {
			t.Errorf("largest current %g A/m2, peak estimate %g", swing, peak)
		}
	}
}
