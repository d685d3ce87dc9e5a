package probe

import (
	"math"
	"testing"
)

// Goal: the tables of orbital motion hold no slip of the pen. Method: what is known of them without
// the tables: thin tips collect the orbital-motion limit (within 0.1 % up to rho 2 for Ti/Te 0.1;
// for equally warm ions 1.6, 2.4 and 8.5 % less at the places stated); thicker tips collect less,
// higher voltages and warmer ions more; and on logarithms the current bends smoothly.
func TestOrbitalTables(t *testing.T) {
	tenth, equal := warmTables()
	tables := map[float64][][]float64{coldIons: orbitalTable(), someIons: tenth, warmIons: equal}
	_, chis := orbitalNodes()
	for tau, table := range tables {
		for i, row := range table {
			limit := math.Sqrt(tau) * OMLCylinder(chis[i]/tau)
			near(t, "limit at rho 1", row[0], limit, 1e-3)
			if tau < warmIons {
				near(t, "limit at rho 2", row[1], limit, 1e-3)
			}
			for j := range row[1:] {
				if row[j+1] > row[j] || i > 0 && (row[j] <= table[i-1][j] || row[j]*chis[i-1] >=
					table[i-1][j]*chis[i]) {
					t.Errorf("Ti/Te %g, chi %g: row %v is out of order", tau, chis[i], row)
				}
			}
		}
	}
	for j := range equal[0] {
		for i := range equal {
			// For thin tips the limits of warm and cold ions cross.
			if !(equal[i][j] >= tenth[i][j] && tenth[i][j] >= tables[coldIons][i][j]) && j > 2 {
				t.Errorf("chi %g, column %d: warmer ions give less", chis[i], j)
			}
			bendsSmoothly(t, tables, i, j)
		}
	}
	near(t, "rho 2, chi 25", OMLCylinder(25)/equal[5][1], 1.024, 1e-3)
	near(t, "rho 3, chi 25", OMLCylinder(25)/equal[5][2], 1.085, 1e-3)
	for chi, want := range map[float64]float64{5: 2.23, 10: 2.62, 25: 3.3} {
		near(t, "remembered from Laframboise's report, rho 10", WarmCurrent(1, 10, chi), want, 0.05)
	}
}

// bendsSmoothly forbids a slope of the logarithm that jumps up with chi by more than what 1e-3 in
// the table makes of it, beyond the first cells, where the sheath of a thick tip begins.
func bendsSmoothly(t *testing.T, tables map[float64][][]float64, i, j int) {
	t.Helper()
	_, chis := orbitalNodes()
	if i < 2 || i+1 >= len(chis) {
		return
	}
	for tau, table := range tables {
		slope := func(i int) float64 {
			return math.Log(table[i+1][j]/table[i][j]) / math.Log(chis[i+1]/chis[i])
		}
		if jump := math.Abs(slope(i) - slope(i-1)); jump > 0.11 {
			t.Errorf("Ti/Te %g, chi %g, column %d: the slope jumps by %.3f", tau, chis[i], j, jump)
		}
	}
}

// Goal: the parametrised form of orbital motion with its published constants. Method: values
// computed elsewhere.
//
// Ref: G. Narasimhan and Ch. Steinbruchel, J. Vac. Sci. Technol. A 19, 376 (2001).
func TestParametrised(t *testing.T) {
	for rho, want := range map[float64][3]float64{
		3: {1.970, 3.465, 5.326}, 5: {1.747, 2.702, 3.766}, 10: {1.538, 2.091, 2.641},
		20: {1.389, 1.733, 2.051}, 50: {1.178, 1.375, 1.548},
	} {
		for k, chi := range []float64{3, 10, 25} {
			near(t, "current", ParametrisedCurrent(rho, chi), want[k], 6e-4/want[k])
		}
	}
	near(t, "thin tip", ParametrisedCurrent(1, 7), 2/math.SqrtPi*math.Sqrt(7), 1e-12)
}

// Goal: the ion current of a thin tip and its bend, which limits the EEPF at high energies. Method:
// the closed forms I = A n e sqrt(2eV/M)/pi and I” = -I/(4 V^2).
func TestIonCurrentOfThinTip(t *testing.T) {
	setup := argonSetup()
	p := make([]float64, parCount)
	const density, temperature = 1e14, 2.0 // a tip of 0.2 Debye lengths
	p[parDensity], p[parIon] = math.Log(density), math.Log(density)
	p[parTemp], p[parPotential] = math.Log(temperature), 60
	c := newModel(setup, Maxwell).characteristic(p)
	const e, v = 1.602176634e-19, 15.0
	want := setup.Area() * density * e * math.Sqrt(2*e*v/setup.IonMass) / math.Pi
	// The ions of the table are not quite cold.
	near(t, "current", c.ions(60-v), want, 3e-3)
	near(t, "bend", ionCurvature(c, 60-v, 8), -want/(4*v*v), 0.02)
}

// Goal: grids that follow each other let through the product of their open parts. Method: the flux
// of a collector current by hand.
func TestGrids(t *testing.T) {
	flux := func(grids int) float64 {
		a := &Analyser{Grids: grids, Open: 0.7, Radius: 4e-3, Acceptance: 0.2}
		r, err := ReduceAnalyser(collectorSweep(1e-3, 3), a, Choices{Seed: 3, Resamplings: 10})
		if err != nil {
			t.Fatal(err)
		}
		for _, q := range r.Quantities {
			if q.Key == KeyIonFlux {
				return q.Value
			}
		}
		return math.NaN()
	}
	near(t, "two more grids", flux(4)/flux(2), 1/(0.7*0.7), 1e-9)
}
