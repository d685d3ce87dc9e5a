package mcc

import (
	"fmt"
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/rng"

	"gonum.org/v1/gonum/integrate/quad"
)

// gasAtRest is used where the rate is an integral over a sharp energy.
func gasAtRest(b Background) Background {
	b.Temperature = 0
	return b
}

// tally counts the collisions of fresh particles over calls of Collide and returns the counts
// with the particle time [s] they were made in. Particles that collide twice in a call, the
// second time with a changed velocity, are no more than rate/2 of all.
func tally(m *Model, seed uint64, calls int, fill func(vx, vy, vz []float64)) ([]int64, float64) {
	const n = 10_000
	s := stream(seed)
	vx, vy, vz := make([]float64, n), make([]float64, n), make([]float64, n)
	out := m.NewOutcome()
	for range calls {
		fill(vx, vy, vz)
		out.Births = out.Births[:0]
		m.Collide(s, vx, vy, vz, out)
	}
	return out.Counts, float64(calls) * n * m.settings.TimeStep
}

// checkRates compares counts with expected frequencies [1/s]. A count is Poisson up to a factor
// 1 + tallyRate in its variance; tallyRate/2 of it bounds the effect of second collisions.
func checkRates(t *testing.T, name string, m *Model, counts []int64, time float64,
	frequency func(p *crosssections.Process) float64,
) {
	t.Helper()
	for c, p := range m.Processes() {
		want := frequency(p) * time
		bound := normalBound()*math.Sqrt((1+m.rate)*want) + m.rate/2*want
		switch {
		case want == 0 && counts[c] != 0:
			t.Errorf("%s, %s: %d collisions, want none", name, p.Name, counts[c])
		case math.Abs(float64(counts[c])-want) > bound:
			t.Errorf("%s, %s: %d collisions, want %.1f +- %.1f", name, p.Name, counts[c], want,
				bound)
		}
	}
}

// calls is how often tally collides 10 000 particles, to see 4e5 (short: 1e5) candidates.
func calls(m *Model) int {
	candidates := 4e5
	if testing.Short() {
		candidates = 1e5
	}
	return int(candidates / (1e4 * m.rate))
}

// Goal: a beam collides by each process as often as n sigma(v) v says. Method: counts against
// the cross-section tables themselves, electrons of several energies in argon and helium.
//
// Ref: H. R. Skullerud, J. Phys. D 1, 1567 (1968).
func TestBeamFrequency(t *testing.T) {
	for _, gas := range []string{"Ar", "He"} {
		b := gasAtRest(bundled(t, gas))
		m := mustModel(t, "e", phys.ElectronMass, 300, 0.004, b)
		for i, energyEV := range []float64{0.3, 4, 14, 30, 200} {
			v := speedOf(energyEV, phys.ElectronMass)
			counts, time := tally(m, uint64(100+i), calls(m), func(vx, vy, vz []float64) {
				for k := range vx {
					vx[k], vy[k], vz[k] = 0.6*v, -0.8*v, 0
				}
			})
			name := fmt.Sprintf("%g eV in %s", energyEV, gas)
			checkRates(t, name, m, counts, time, func(p *crosssections.Process) float64 {
				return b.Density * p.Table.At(energyEV) * v * testUnit
			})
		}
	}
}

// maxwellRate integrates n sigma(g) g over a Maxwellian of relative speeds whose components have
// the spread s [m/s].
func maxwellRate(p *crosssections.Process, density, perG2, s float64) float64 {
	density *= math.Sqrt(2/math.Pi) / (s * s * s)
	return integrate(8*s, func(g float64) float64 {
		return density * p.Table.At(perG2*g*g) * g * g * g * math.Exp(-0.5*g*g/(s*s))
	})
}

// integrate sums f over 0..top in 400 panels of 8-point Gauss quadrature.
func integrate(top float64, f func(float64) float64) float64 {
	const panels = 400
	sum := 0.0
	for k := range panels {
		a, b := top*float64(k)/panels, top*float64(k+1)/panels
		sum += quad.Fixed(f, a, b, 8, quad.Legendre{}, 1)
	}
	return sum
}

// Goal: Maxwellian electrons of 4 eV collide as often as the integral of sigma v over the
// distribution says, by each process. Method: as for the beam, with fresh velocities every call.
func TestMaxwellianElectronFrequency(t *testing.T) {
	const temperature = 4 * phys.ElementaryCharge / phys.Boltzmann
	b := gasAtRest(bundled(t, "Ar"))
	m := mustModel(t, "e", phys.ElectronMass, 300, 0.01, b)
	draw := stream(110)
	spread := math.Sqrt(phys.Boltzmann * temperature / phys.ElectronMass)
	counts, time := tally(m, 111, calls(m), func(vx, vy, vz []float64) {
		refill(draw, spread/testUnit, vx, vy, vz)
	})
	checkRates(t, "4 eV Maxwellian", m, counts, time, func(p *crosssections.Process) float64 {
		return maxwellRate(p, b.Density, 0.5*phys.ElectronMass/phys.ElementaryCharge, spread)
	})
}

func refill(s *rng.Stream, spread float64, lists ...[]float64) {
	for _, v := range lists {
		for k := range v {
			v[k] = spread * s.Normal()
		}
	}
}

// ionPerG2 is the energy of a process's table over g^2, by its frame.
func ionPerG2(p *crosssections.Process, mass float64) float64 {
	if p.Frame == crosssections.CenterOfMass {
		mass /= 2 // of two equal ones
	}
	return 0.5 * mass / phys.ElementaryCharge
}

// Goal: ions in their warm gas collide as often as the integral of sigma(g) g over the
// distribution of relative speeds says. Method: hot Maxwellian ions, whose relative velocities
// are Maxwellian too with the variances added; and a beam, whose relative speed has the density
// g/(v s sqrt(2 pi)) (exp(-(g-v)^2/2s^2) - exp(-(g+v)^2/2s^2)), s the spread of the gas.
//
// Ref: S. Chapman and T. G. Cowling, The Mathematical Theory of Non-Uniform Gases, 3rd ed.
// (1970), ch. 5 (collision frequencies of Maxwellians).
func TestIonFrequency(t *testing.T) {
	for i, c := range []struct{ gas, ion string }{{"Ar", "Ar+"}, {"He", "He+"}} {
		b := bundled(t, c.gas)
		mass := b.Gas.Mass
		m := mustModel(t, c.ion, mass, 10, 0.01, b)
		draw := stream(uint64(120 + i))
		gas := b.thermalSpeed()
		ions := math.Sqrt(phys.Boltzmann * 2000 / mass)
		counts, time := tally(m, uint64(130+i), calls(m), func(vx, vy, vz []float64) {
			refill(draw, ions/testUnit, vx, vy, vz)
		})
		checkRates(t, c.ion+" at 2000 K", m, counts, time, func(p *crosssections.Process) float64 {
			return maxwellRate(p, b.Density, ionPerG2(p, mass), math.Hypot(gas, ions))
		})
		v := speedOf(0.1, mass)
		counts, time = tally(m, uint64(140+i), calls(m), func(vx, vy, vz []float64) {
			for k := range vx {
				vx[k], vy[k], vz[k] = 0, 0.6*v, -0.8*v
			}
		})
		checkRates(t, c.ion+" of 0.1 eV", m, counts, time, func(p *crosssections.Process) float64 {
			return beamRate(p, b.Density, ionPerG2(p, mass), v*testUnit, gas)
		})
	}
}

func beamRate(p *crosssections.Process, density, perG2, v, s float64) float64 {
	return integrate(v+9*s, func(g float64) float64 {
		gauss := func(x float64) float64 { return math.Exp(-0.5 * x * x / (s * s)) }
		f := g / (v * s * math.Sqrt(2*math.Pi)) * (gauss(g-v) - gauss(g+v))
		return density * p.Table.At(perG2*g*g) * g * f
	})
}

// Goal: Frequency tells the rates that Collide uses. Method: against the tables, between rows.
func TestFrequencyIsNSigmaG(t *testing.T) {
	b := bundled(t, "Ar")
	m := mustModel(t, "e", phys.ElectronMass, 300, 0.1, b)
	for _, energyEV := range []float64{0.5, 5, 14, 77, 299} {
		g := speedOf(energyEV, phys.ElectronMass) * testUnit
		got := m.Frequency(g)
		for c, p := range m.Processes() {
			want := b.Density * p.Table.At(energyEV) * g
			// A row of 8192 is 1e-4 of the top speed: linear interpolation is good to 1e-4.
			if math.Abs(got[c]-want) > 1e-4*want {
				t.Errorf("%s at %g eV: %g /s, want %g", p.Name, energyEV, got[c], want)
			}
		}
	}
}

// Goal: a table in laboratory energy is read at the projectile's energy, one in centre-of-mass
// energy at that of the relative motion. Method: cross sections that are steps at 7 eV; ions of
// 10 eV on equal masses at rest have 5 eV of relative motion; electrons on light targets likewise.
func TestFrameOfTheEnergy(t *testing.T) {
	step := crosssections.Table{
		Onset: 7, Energy: []float64{7, 100}, CrossSection: []float64{1e-19, 1e-19},
	}
	for _, c := range []struct {
		projectile string
		kind       crosssections.Kind
		frame      crosssections.Frame
		energyEV   float64
		collides   bool
	}{
		{"X+", crosssections.Isotropic, crosssections.Lab, 10, true},
		{"X+", crosssections.Isotropic, crosssections.Lab, 6.8, false},
		{"X+", crosssections.Isotropic, crosssections.CenterOfMass, 10, false},
		{"X+", crosssections.Backscatter, crosssections.CenterOfMass, 13.8, false},
		{"X+", crosssections.Backscatter, crosssections.CenterOfMass, 14.2, true},
		{"e", crosssections.Elastic, crosssections.Lab, 10, true},
		{"e", crosssections.Elastic, crosssections.CenterOfMass, 10, false},
		{"e", crosssections.Elastic, crosssections.CenterOfMass, 14.2, true},
	} {
		p := process("step", c.projectile, c.kind, 0, step)
		p.Frame = c.frame
		m := mustModel(t, c.projectile, heavy, 80, 1, background(heavy, 0, p))
		n := 10_000
		vx, vy, vz := make([]float64, n), make([]float64, n), make([]float64, n)
		for k := range vx {
			vy[k] = speedOf(c.energyEV, heavy)
		}
		out := m.NewOutcome()
		m.Collide(stream(150), vx, vy, vz, out)
		// Some 10 000 sqrt(E/80) collisions are due; none at all has no noticeable probability.
		if (out.Counts[0] > 0) != c.collides {
			t.Errorf("%s, %v, %v energy: %d collisions at %g eV", c.projectile, c.kind, c.frame,
				out.Counts[0], c.energyEV)
		}
	}
}

// Goal: in a mixture targets are hit in proportion to n sigma g, and the kinematics are those of
// the target that was hit. Method: two gases at rest, 1:3 in density and 2:1 in cross section, of
// different masses; counts against the frequencies; ions that backscatter keep (m-M)/(m+M) of
// their velocity.
func TestMixture(t *testing.T) {
	const other = 4 * phys.AtomicMass
	const energyEV = 20.0
	for i, c := range []struct {
		projectile string
		kind       crosssections.Kind
	}{{"X+", crosssections.Backscatter}, {"e", crosssections.Elastic}} {
		a := background(heavy, 0, process("on heavy", c.projectile, c.kind, 0,
			tabulate(0, 100, constant(4e-19))))
		b := background(other, 0, process("on light", c.projectile, c.kind, 0,
			tabulate(0, 100, constant(2e-19))))
		b.Density *= 3
		m := mustModel(t, c.projectile, heavy, 100, 0.004, a, b)
		v := tilted().scale(speedOf(energyEV, heavy))
		counts, time := tally(m, uint64(160+i), calls(m), func(vx, vy, vz []float64) {
			for k := range vx {
				vx[k], vy[k], vz[k] = v[0], v[1], v[2]
			}
		})
		speed := v.norm() * testUnit
		checkRates(t, c.projectile, m, counts, time, func(p *crosssections.Process) float64 {
			if p.Name == "on heavy" {
				return a.Density * 4e-19 * speed
			}
			return b.Density * 2e-19 * speed
		})
		if c.kind != crosssections.Backscatter {
			continue
		}
		s := stream(uint64(170 + i))
		m = mustModel(t, c.projectile, heavy, 100, 0.5, a, b)
		for range 1000 {
			got := single(m, s, v)
			mass := [2]float64{heavy, other}[got.channel]
			want := v.scale((heavy - mass) / (heavy + mass))
			if got.after.add(-1, want).norm() > 1e-12*v.norm() {
				t.Fatalf("on mass %g: %v after, want %v", mass, got.after, want)
			}
		}
	}
}
