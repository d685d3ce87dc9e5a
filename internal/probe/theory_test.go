package probe

import (
	"math"
	"testing"
)

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s: got %.6g, want %.6g within %.1g", what, got, want, relative)
	}
}

// Goal: orbital-motion-limited currents. Method: values computed by an independent program, to
// the digits given; electron currents from distributions against the closed form.
func TestOML(t *testing.T) {
	maxwell, err := Exponent(2.5, 1)
	if err != nil {
		t.Fatal(err)
	}
	for chi, want := range map[float64]float64{
		0.1: 1.0804, 0.3: 1.2101, 0.6: 1.3721, 1: 1.5560, 1.5: 1.7551, 2: 1.9320, 3: 2.2418,
		5: 2.7555, 7.5: 3.2846, 10: 3.7388, 15: 4.5114, 20: 5.1695, 25: 5.7526,
	} {
		near(t, "cylinder", OMLCylinder(chi), want, 5e-5/want)
		near(t, "from the distribution",
			maxwell.AttractedOML(2.5*chi)/maxwell.AttractedOML(0), want, 2e-4)
	}
	if OMLSphere(3) != 4 {
		t.Error("sphere")
	}
	near(t, "continuous at the plasma potential", maxwell.AttractedOML(0), maxwell.Retarded(0), 1e-4)
}

// Goal: radial motion of cold ions. Method: the table of an independent solution, to its digits.
func TestRadialPotential(t *testing.T) {
	xs := []float64{1, 2, 3, 5, 10, 20}
	for _, row := range [][7]float64{
		{1, 0.830, 0.282, 0.126, 0.043, 0.010, 0.003},
		{2, 3.909, 1.609, 0.735, 0.217, 0.043, 0.010},
		{3, 10.114, 5.056, 2.638, 0.754, 0.110, 0.024},
		{5, 32.286, 19.928, 13.160, 5.721, 0.551, 0.072},
		{7, 66.603, 45.104, 32.956, 18.595, 3.427, 0.170},
		{10, 138.20, 100.30, 78.544, 51.994, 19.433, 0.806},
		{15, 303.42, 232.67, 191.69, 140.87, 74.985, 18.669},
		{20, 517.30, 408.31, 344.96, 265.97, 161.71, 65.837},
	} {
		for k, x := range xs {
			digit := 6e-4 // the last digit, and as much again as the table may be off
			if row[0] >= 10 && row[k+1] > 60 {
				digit = 6e-3
			}
			if got := RadialPotential(row[0], x); math.Abs(got-row[k+1]) > digit {
				t.Errorf("J %g, x %g: got %.4f, want %.4f", row[0], x, got, row[k+1])
			}
		}
	}
	near(t, "inverse", RadialCurrent(5, 18.595), 7, 1e-4)
}

// Goal: ion currents between the nodes of the table are sensible, and the parametrised form is
// within what is stated. Method: every node; the fit's own published range.
func TestOrbitalCurrent(t *testing.T) {
	rhos, chis := orbitalNodes()
	for i, chi := range chis {
		for j, rho := range rhos {
			near(t, "node", OrbitalCurrent(rho, chi), orbitalTable()[i][j], 1e-12)
			if rho >= 3 && chi >= 3 {
				near(t, "parametrised", ParametrisedCurrent(rho, chi), orbitalTable()[i][j], 0.05)
			}
		}
	}
	// Cold ions in the orbital-motion limit: i = (2/sqrt pi) sqrt(chi).
	near(t, "limit", OrbitalCurrent(0.1, 7), 2/math.SqrtPi*math.Sqrt(7), 3e-3)
	for x, want := range map[float64]float64{0: 1, 1: 0.755, 10: 0.143} {
		near(t, "scattering out", CollisionTrend(x, 1), want, 4e-3)
	}
	near(t, "orbits destroyed", CollisionTrend(1, 1.4), 1.4*0.7547, 1e-3)
}

// Goal: warm ions. Method: the nodes of the tables of an independent solver; limits that are known
// (the orbital-motion limit of warm ions, 25 % more current of equally warm than of cold ions at rho
// and chi of 10, and 1.6 and 26 % less than the limit at rho 2 and 5); no jump between the tables;
// and power laws fitted elsewhere, within their stated 1.4 %.
func TestWarmCurrent(t *testing.T) {
	rhos, chis := orbitalNodes()
	tenth, equal := warmTables()
	for i, chi := range chis {
		for j, rho := range rhos {
			near(t, "0.1", WarmCurrent(0.1, rho, chi), tenth[i][j], 1e-9)
			near(t, "1", WarmCurrent(1, rho, chi), equal[i][j], 1e-9)
			near(t, "cold", WarmCurrent(0.02+1e-9, rho, chi), OrbitalCurrent(rho, chi), 1e-6)
			near(t, "between", WarmCurrent(0.1+1e-9, rho, chi), WarmCurrent(0.1, rho, chi), 1e-6)
		}
	}
	near(t, "limit", WarmCurrent(1, 0.5, 7.5), 3.2846, 1e-3)
	near(t, "at the plasma potential", WarmCurrent(1, 50, 1e-9), 1, 1e-3)
	near(t, "warm over cold", WarmCurrent(1, 10, 10)/OrbitalCurrent(10, 10), 1.25, 0.01)
	near(t, "rho 2", OMLCylinder(15)/WarmCurrent(1, 2, 15), 1.016, 1e-3)
	near(t, "rho 5", OMLCylinder(25)/WarmCurrent(1, 5, 25), 1.26, 1e-3)
	near(t, "remembered from Laframboise's report", WarmCurrent(1, 10, 5), 2.23, 0.01)
	cold := [][3]float64{
		{1, 1.134, .499},
		{3, 1.192, .464},
		{5, 1.224, .357},
		{10, 1.155, .260},
		{20, 1.107, .180},
		{50, 1.074, .100},
	}
	warm := [][3]float64{
		{1, 1.358, .445},
		{3, 1.407, .409},
		{5, 1.445, .354},
		{10, 1.486, .252},
		{20, 1.487, .167},
		{50, 1.477, .089},
	}
	for _, chi := range chis[1:] {
		for _, f := range cold {
			near(t, "power law, cold", f[1]*math.Pow(chi, f[2]), WarmCurrent(0.02, f[0], chi), 0.0145)
		}
		for _, f := range warm {
			near(t, "power law, warm", f[1]*math.Pow(chi, f[2]), WarmCurrent(1, f[0], chi), 0.0145)
		}
	}
}

// Goal: the exact inversion of Druyvesteyn. Method: second differences of the retarded current of
// three distributions against the distribution itself.
func TestDruyvesteynInversion(t *testing.T) {
	for _, kappa := range []float64{1, 1.5, 2} {
		d, err := Exponent(3, kappa)
		if err != nil {
			t.Fatal(err)
		}
		near(t, "temperature", d.Temperature(), 3, 1e-4) // what the grid allows
		for _, u := range []float64{0.5, 2, 5, 9} {
			const h = 1e-2
			second := (d.Retarded(u+h) - 2*d.Retarded(u) + d.Retarded(u-h)) / (h * h)
			near(t, "EEPF", second/(electronScale()/4), d.At(u), 2e-3)
		}
	}
	d, err := TwoTemperatures(0.5, 3, 0.2)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "mixture", d.Temperature(), 0.8*0.5+0.2*3, 1e-4)
}
