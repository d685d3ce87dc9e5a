package mcc

import (
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"

	"gonum.org/v1/gonum/stat/distuv"
)

// checkMaxwellian compares velocities with a Maxwellian of the temperature: the mean energy
// (3 N normal squares), each component's variance, and one component's distribution over bins of
// equal probability.
func checkMaxwellian(t *testing.T, name string, temperature, mass float64, v ...[]float64) {
	t.Helper()
	n := float64(len(v[0]))
	variance := phys.Boltzmann * temperature / mass / (testUnit * testUnit)
	checkMean(t, name+": mean energy over 3/2 kT", sumSquares(v...)/(3*n*variance), 1,
		math.Sqrt(2/(3*n)))
	for k := range v {
		checkMean(t, name+": variance of a component", sumSquares(v[k])/(n*variance), 1,
			math.Sqrt(2/n))
	}
	const bins = 50
	counts := make([]int, bins)
	for _, x := range v[0] {
		u := distuv.UnitNormal.CDF(x / math.Sqrt(variance))
		counts[min(bins-1, int(bins*u))]++
	}
	checkChiSquare(t, name+": distribution of vx", counts, equalBins(len(v[0]), bins))
}

func population() int {
	if testing.Short() {
		return 10_000
	}
	return 40_000
}

// Goal: ions come to the temperature of the gas. Method: from 3000 K, until each has made some
// 25 collisions; every backscatter in the parent gas alone gives it a gas atom's velocity, so
// that the memory of the start is below e^-10 of the excess, a tenth of the bound.
//
// Ref: L. Boltzmann's H theorem (S. Chapman and T. G. Cowling, The Mathematical Theory of
// Non-Uniform Gases, 3rd ed. (1970), ch. 4).
func TestIonsReachGasTemperature(t *testing.T) {
	for i, c := range []struct{ gas, ion string }{{"Ar", "Ar+"}, {"He", "He+"}} {
		b := bundled(t, c.gas)
		m := mustModel(t, c.ion, b.Gas.Mass, 3, 1.9, b)
		s := stream(uint64(200 + i))
		n := population()
		vx, vy, vz := maxwellian(s, n, 3000, b.Gas.Mass)
		out := m.NewOutcome()
		var swaps, steps float64
		for swaps < 25*float64(n) && steps < 1000 {
			m.Collide(s, vx, vy, vz, out)
			swaps = float64(out.Counts[1])
			steps++
		}
		t.Logf("%s: %.0f steps, %.1f and %.1f collisions an ion", c.ion, steps,
			float64(out.Counts[0])/float64(n), swaps/float64(n))
		checkMaxwellian(t, c.ion, 300, b.Gas.Mass, vx, vy, vz)
	}
}

// Goal: light projectiles come to the temperature of the gas by elastic collisions. Method:
// electrons in a gas of seven electron masses, which takes 2 m M/(m+M)^2 = 22 % of the difference
// in each of some 60 collisions (e^-13 is left of it). With a constant frequency, and with a
// constant cross section: judged by the electron's own speed instead of the relative one, the
// latter would end at three quarters of the temperature.
func TestElectronsReachGasTemperature(t *testing.T) {
	for _, c := range []struct {
		name  string
		sigma func(e float64) float64
		steps int
	}{
		{"constant frequency", inverseSpeed(1e9, testDensity, phys.ElectronMass), 200},
		{"constant cross section", func(float64) float64 { return 1e-19 }, 800},
	} {
		b := background(light, 300, process("p", "e", crosssections.Elastic, 0,
			tabulate(0, 0.6, c.sigma)))
		m := mustModel(t, "e", phys.ElectronMass, 0.6, 0.3, b)
		s := stream(210)
		vx, vy, vz := maxwellian(s, population(), 2000, phys.ElectronMass)
		out := m.NewOutcome()
		for range c.steps {
			m.Collide(s, vx, vy, vz, out)
		}
		t.Logf("%s: %.0f collisions each", c.name, float64(out.Counts[0])/float64(len(vx)))
		checkMaxwellian(t, "electrons, "+c.name, 300, phys.ElectronMass, vx, vy, vz)
	}
}
