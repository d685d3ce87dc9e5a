package pic

import (
	"fmt"
	"math"
	"testing"

	"ionfall/internal/phys"
)

// Goal: without forces particles fly straight. Method: velocities that are whole multiples of
// 2^-10 cells a step, so that positions are exact; the image field of a particle moves it by
// less than e W/eps0 q/m t^2/2, 1e-14 cells here.
func TestFreeFlight(t *testing.T) {
	for _, scheme := range schemes() {
		c := empty(64, 100, electrons(), ions(5))
		c.Scheme, c.Weight = scheme, 1e-12
		s := mustNew(t, c)
		const v = 0x1p-10
		mustAdd(t, s, 0, 0, 20, v*c.VelocityUnit(1), 3, -4)
		mustAdd(t, s, 1, 1, 30, -7*v*c.VelocityUnit(5), 5, 6)
		mustAdvance(t, s, 1000)
		e, i := &s.species[0].chunks[0], &s.species[1].chunks[1]
		checkNear(t, "electron", e.x[0], 20+1000*v, 1e-12)
		checkNear(t, "ion", i.x[0], 30-200*7*v, 1e-12)
		checkNear(t, "vy", e.vy[0]*c.VelocityUnit(1), 3, 1e-12)
		checkNear(t, "vz", i.vz[0]*c.VelocityUnit(5), 6, 1e-12)
	}
}

// drivenPosition returns an electron's position [m] after n steps in the vacuum field V0/L
// cos(w t), started at rest from the middle.
func drivenPosition(t *testing.T, steps, n int, scheme Scheme) float64 {
	c := empty(64, steps, electrons())
	c.Scheme, c.Drive = scheme, Drive{Tones: []Tone{{Harmonic: 1, Amplitude: 3, Phase: 0.4}}}
	s := mustNew(t, c)
	mustAdd(t, s, 0, 0, 32, 0, 0, 0)
	mustAdvance(t, s, n)
	return s.species[0].chunks[0].x[0] * c.CellSize()
}

// Goal: the leapfrog is second order in dt. Method: an electron in the field of a vacuum
// capacitor against x(t) = x0 + a/w^2 (cos p - cos(wt + p) - wt sin p); the error at 0.7 periods
// must fall by four when dt halves. The next term is of relative size (w dt)^2/20 < 0.002.
//
// Ref: C. K. Birdsall and A. B. Langdon, Plasma Physics via Computer Simulation (1985), ch. 4.
func TestLeapfrogIsSecondOrder(t *testing.T) {
	for _, scheme := range schemes() {
		c := empty(64, 40, electrons())
		w := 2 * math.Pi / c.Period
		a := -phys.ElementaryCharge / phys.ElectronMass * 3 / c.Gap
		exact := c.Gap/2 + a/(w*w)*(math.Cos(0.4)-math.Cos(1.4*math.Pi+0.4)-
			1.4*math.Pi*math.Sin(0.4))
		var errs []float64
		for _, steps := range []int{40, 80, 160} {
			errs = append(errs, drivenPosition(t, steps, 7*steps/10, scheme)-exact)
		}
		for k := 1; k < len(errs); k++ {
			checkNear(t, fmt.Sprintf("%v: order", scheme), math.Log2(errs[k-1]/errs[k]), 2, 0.01)
		}
	}
}

// oscillation returns the frequency, in units of the plasma frequency, of cold electrons among
// resting ions, displaced by a sine that vanishes at both walls; omega_p dt is phase.
func oscillation(t *testing.T, scheme Scheme, cells int, phase float64) float64 {
	const n, perCell, periods = 1e14, 32, 8
	plasma := math.Sqrt(n * phys.ElementaryCharge * phys.ElementaryCharge /
		(phys.Epsilon0 * phys.ElectronMass))
	heavy := ions(1)
	heavy.Mass = 1
	c := empty(cells, 100, electrons(), heavy)
	c.Scheme, c.Period = scheme, 100*phase/plasma
	c.Weight = n * c.Gap / float64(cells*perCell)
	s := mustNew(t, c)
	for k := range cells * perCell {
		x := (float64(k) + 0.5) / perCell
		x0 := x + 0.001*float64(cells)/(2*math.Pi)*math.Sin(2*math.Pi*x/float64(cells))
		s.species[0].chunks[k%3].add(x0, 0, 0, 0)
		s.species[1].chunks[k%3].add(x, 0, 0, 0)
	}
	s.SetWorkers(1)
	var mode []float64
	watch(s, &spy{due: always, reduce: func(f *Frame, _, _ int) {
		sum := 0.0
		for j, phi := range f.Phi {
			sum += phi * math.Cos(2*math.Pi*float64(j)/float64(cells))
		}
		mode = append(mode, sum)
	}})
	mustAdvance(t, s, int(periods*2*math.Pi/phase))
	// A sampled cosine obeys a[n+1] + a[n-1] = 2 cos(omega dt) a[n]: least squares for the cosine.
	above, below := 0.0, 0.0
	for k := 1; k < len(mode)-1; k++ {
		above += mode[k] * (mode[k+1] + mode[k-1])
		below += 2 * mode[k] * mode[k]
	}
	return math.Acos(above/below) / phase
}

// Goal: cold electrons oscillate at the plasma frequency. Method: the discrete theory is exact.
// The leapfrog gives sin(omega dt/2) = omega_0 dt/2; linear weighting of uniform matter with all
// its aliases gives omega_0 = omega_p for the energy-conserving scheme and omega_p cos(k dx/2)
// for the momentum-conserving one. The amplitude is so small (0.01 cells) that no particle crosses
// a node, where the energy-conserving field jumps: crossings lower the frequency in proportion
// to the amplitude. What is left is the fixed-point rounding of positions, below 1e-5.
//
// Ref: A. B. Langdon, J. Comput. Phys. 6, 247 (1970); C. K. Birdsall and A. B. Langdon, Plasma
// Physics via Computer Simulation (1985), ch. 4 and 8.
func TestColdPlasmaOscillation(t *testing.T) {
	for _, scheme := range schemes() {
		for _, cells := range []int{32, 64} {
			for _, phase := range []float64{0.05, 0.2, 0.4} {
				grid := 1.0
				if scheme == MomentumConserving {
					grid = math.Cos(math.Pi / float64(cells))
				}
				want := 2 / phase * math.Asin(grid*phase/2)
				got := oscillation(t, scheme, cells, phase)
				name := fmt.Sprintf("%v, %d cells, omega_p dt %g", scheme, cells, phase)
				checkNear(t, name, got, want, 1e-5)
			}
		}
	}
}
