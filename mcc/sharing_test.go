package mcc

import (
	"math"
	"slices"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// Goal: the mean energy of the second electron is that of the law of Opal, Peterson and Beaty, J.
// Chem. Phys. 55, 4100 (1971), with its exponent 2.1, and so is the distribution. Method: means of the
// law by quadrature, as tabulated to three digits for argon, helium, hydrogen, nitrogen and methane
// apart from this program, within half of the last digit and 4 standard errors; quantiles by sums over
// the law, chi-square of 20 bins.
func TestOpalSharing(t *testing.T) {
	for _, c := range []struct{ width, ionization, energy, want float64 }{
		{10.0, 15.8, 50, 6.52},
		{10.0, 15.8, 100, 10.6},
		{10.0, 15.8, 300, 16.3},
		{15.8, 24.6, 100, 12.6},
		{8.3, 15.4, 50, 6.12},
		{8.3, 15.4, 300, 14.3},
		{13.0, 15.6, 300, 19.6},
		{7.3, 12.6, 100, 8.95},
	} {
		excess := c.energy - c.ionization
		s := stream(50)
		sum, square := 0.0, 0.0
		const n = 200_000
		edges, counts := opalBins(0.5*excess/c.width), make([]int, 20)
		for range n {
			e := excess * OpalSharing.share(s, c.width/excess)
			if e < 0 || e > 0.5*excess*(1+1e-12) {
				t.Fatalf("second electron of %g eV of %g", e, excess)
			}
			sum, square = sum+e, square+e*e
			bin, _ := slices.BinarySearch(edges, e/c.width)
			counts[min(bin, 19)]++
		}
		mean := sum / n
		se := math.Sqrt((square/n - mean*mean) / n)
		checkChiSquare(t, "second electrons", counts, equalBins(n, 20))
		digit := 0.005
		if c.want > 10 {
			digit = 0.05
		}
		if math.Abs(mean-c.want) > 4*se+digit {
			t.Errorf("w %g, %g eV: mean %.4g +- %.2g eV, want %.4g", c.width, c.energy, mean, se, c.want)
		}
	}
}

// opalBins are the upper ends of 20 bins of equal probability under 1/(1 + x^2.1) up to most.
func opalBins(most float64) []float64 {
	const n = 200_000
	sum := make([]float64, n+1)
	for i := range n {
		x := most * (float64(i) + 0.5) / n
		sum[i+1] = sum[i] + 1/(1+math.Pow(x, 2.1))
	}
	var edges []float64
	for i, s := range sum {
		if s >= sum[n]*float64(len(edges)+1)/20*(1-1e-12) {
			edges = append(edges, most*float64(i)/n)
		}
	}
	return edges
}

// Goal: both electrons of an ionization have the energy that is left, by every law. Method: a cold,
// heavy target.
func TestSharingConserves(t *testing.T) {
	sigma := inverseSpeed(1e9, testDensity, phys.ElectronMass)
	b := background(1e6*heavy, 0,
		process("ion", "e", crosssections.Ionization, 10, tabulate(10, 1000, sigma)))
	for _, law := range []Sharing{EqualSharing, UniformSharing, OpalSharing} {
		m, err := NewModel(Settings{
			Projectile: "e", Mass: phys.ElectronMass, Unit: testUnit, TimeStep: 2e-10, TopEnergy: 500,
			Sharing: law,
		}, []Background{b})
		if err != nil {
			t.Fatal(err)
		}
		s := stream(51)
		for range 100 {
			got := single(m, s, tilted().scale(speedOf(100, phys.ElectronMass)))
			second := vector(got.births[0].Electron)
			sum := got.after.dot(got.after) + second.dot(second)
			if want := got.before.dot(got.before) * 0.9; math.Abs(sum/want-1) > 1e-6 {
				t.Fatalf("law %d: %g, want %g", law, sum, want)
			}
		}
	}
}

// Goal: forward-peaked scattering turns as its law says: the mean of 1 - cos chi is the ratio of
// momentum transfer to total cross section. Method: values of that ratio as published for the law
// (A. Okhrimovskyy et al., Phys. Rev. E 65, 037402 (2002)), sampled angles within 4 standard errors.
func TestScreenedCoulombAngles(t *testing.T) {
	for _, c := range []struct{ xi, beta float64 }{
		{0.1, 0.93320}, {0.3, 0.79625}, {0.5, 0.64792}, {0.8, 0.36797}, {0.95, 0.14526},
	} {
		if got := momentumPart(c.xi); math.Abs(got-c.beta) > 1e-5 {
			t.Errorf("xi %g: ratio %.6f, want %.5f", c.xi, got, c.beta)
		}
		s := stream(52)
		g := velocity{0.3, -1.2, 0.5}
		sum, square := 0.0, 0.0
		const n = 100_000
		for range n {
			v := turned(s, g, 2, c.xi)
			if math.Abs(v.square()-4) > 1e-12 {
				t.Fatalf("length %g, want 2", math.Sqrt(v.square()))
			}
			cos := (v.x*g.x + v.y*g.y + v.z*g.z) / (2 * math.Sqrt(g.square()))
			sum, square = sum+1-cos, square+(1-cos)*(1-cos)
		}
		mean := sum / n
		if se := math.Sqrt((square/n - mean*mean) / n); math.Abs(mean-c.beta) > 4*se {
			t.Errorf("xi %g: mean %.5f +- %.5f, want %.5f", c.xi, mean, se, c.beta)
		}
	}
	if xi := forwardness(10); math.Abs(xi-0.595) > 5e-4 {
		t.Errorf("xi at 10 eV is %.4f, want 0.595", xi)
	}
}

// Goal: a swarm does not mind whether electrons scatter isotropically or forward, as the momentum
// transfer is the same. Method: hydrogen at 100 Td, mean energy and drift within 1 % and 4 standard
// errors.
func TestForwardScatteringInASwarm(t *testing.T) {
	if testing.Short() {
		t.Skip("some seconds")
	}
	b := Background{Gas: bundled(t, "H2").Gas, Density: swarmDensity}
	var list []SwarmResult
	for _, law := range []Scattering{IsotropicScattering, ScreenedCoulomb} {
		list = append(list, mustSwarm(t, asked(SwarmSettings{
			Projectile: "e", Field: 100, Scattering: law,
		}), b))
	}
	a, c := list[0], list[1]
	within(t, "mean energy", c.MeanEnergy, a.MeanEnergy.Mean,
		0.0025+a.MeanEnergy.StdErr/a.MeanEnergy.Mean)
	within(t, "drift", c.FluxDrift, a.FluxDrift.Mean, 0.0025+a.FluxDrift.StdErr/a.FluxDrift.Mean)
}
