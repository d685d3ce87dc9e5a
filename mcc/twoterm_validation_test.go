package mcc

import (
	"fmt"
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/validation"
)

// Goal: the deterministic solutions are right where the answer is known. Method: the distribution
// of Druyvesteyn, which two terms have exactly (see TestValidationDruyvesteyn); the published
// multi-term values of the ramp model, of which two terms miss the drift by 3 %; and two
// terms found in both ways.
//
// Ref: K. F. Ness and R. E. Robson, Phys. Rev. A 34, 2185 (1986) (from memory).
func TestTwoTermSolutions(t *testing.T) {
	near := func(name string, got, want, part float64) {
		t.Helper()
		if !(math.Abs(got/want-1) <= part) {
			t.Errorf("%s: %.6g, want %.6g within %g", name, got, want, part)
		}
	}
	const sigma, field, ratio = 6e-20, 0.5, 4000.0
	gas := background(ratio*phys.ElectronMass, 0,
		process("elastic", "e", crosssections.Elastic, 0, tabulate(0, 100, constant(sigma)))).Gas
	free := field * townsend / sigma
	scale := free * math.Sqrt(ratio/3)
	r := solveTwoTerm(t, gas, field, 6*scale, 2000)
	near("Druyvesteyn, mean energy", r.meanEV, scale*math.Gamma(1.25)/math.Gamma(0.75), 1e-3)
	near("Druyvesteyn, drift", r.drift, math.Pow(ratio, -0.25)*druyvesteynDrift()*
		math.Sqrt(free*phys.ElementaryCharge/phys.ElectronMass), 1e-3)
	for _, c := range []struct{ field, meanEV, drift float64 }{
		{12, 0.2689, 6.839e4}, {24, 0.4078, 8.886e4},
	} {
		name := fmt.Sprintf("ramp model, %g Td, ", c.field)
		two := solveTwoTerm(t, reidGas(), c.field, 4, 1000)
		same := solveMultiTerm(t, reidGas(), c.field, 4, 1000, 2)
		near(name+"mean energy of two terms", same.meanEV, two.meanEV, 1e-5)
		near(name+"drift of two terms", same.drift, two.drift, 1e-5)
		six := solveMultiTerm(t, reidGas(), c.field, 4, 1000, 6)
		near(name+"mean energy", six.meanEV, c.meanEV, 1e-3)
		near(name+"drift", six.drift, c.drift, 1e-3)
		if two.drift < 1.02*six.drift {
			t.Errorf("%sdrift: %g by two terms, %g by six: want 2 %% more", name, two.drift, six.drift)
		}
	}
}

// multiTermRows compares a swarm with the deterministic solution of the Boltzmann equation for the
// same tables, of six Legendre terms. Halving the cells or leaving out two terms changes it by less
// than a thousandth, which counts as its error.
func multiTermRows(t *testing.T, s swarmSection, field float64, r *SwarmResult) []validation.Row {
	t.Helper()
	const cells, terms, exact = 1600, 6, 1e-3
	gas := swarmGas(t, s.Gas)
	top := math.Max(40, 10*r.MeanEnergy.Mean)
	six := solveMultiTerm(t, gas, field, top, cells, terms)
	two := solveTwoTerm(t, gas, field, top, cells)
	var rows []validation.Row
	for _, q := range swarmQuantities() {
		var want, approximate float64
		switch q.key {
		case "mean_energy_eV":
			want, approximate = six.meanEV, two.meanEV
		case "flux_drift_mps":
			want, approximate = six.drift, two.drift
		case "ionization_m3ps":
			want, approximate = six.ionization, two.ionization
		default:
			continue
		}
		e := q.of(r)
		row := validation.Row{
			Section:  s.Section + ", Boltzmann equation",
			Quantity: fmt.Sprintf("%g Td, %s", field, q.name), Unit: q.unit,
			Reference: want, ReferenceError: exact * want, Status: "computed",
			Source: "solution of the Boltzmann equation in six Legendre terms with the same tables; " +
				"R. E. Robson and K. F. Ness, Phys. Rev. A 33, 2068 (1986)",
			Ours: e.Mean, OursError: e.StdErr, Limit: 4, LimitKind: validation.Sigma, Seed: swarmSeed,
			Note: fmt.Sprintf("two terms (T. Holstein, Phys. Rev. 70, 367 (1946)): %.5g",
				approximate),
		}
		rows = append(rows, row)
	}
	return rows
}
