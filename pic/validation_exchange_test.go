package pic

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/validation"
	"ionfall/mcc"

	"gonum.org/v1/gonum/stat/distuv"
)

// exchangeOnly makes collisions of an ion of the mass by charge exchange alone, with a constant
// mean free path [m] in a cold gas: the ion is at rest afterwards.
func exchangeOnly(t *testing.T, c *Config, mass float64, every int, path, topEV float64,
) *mcc.Model {
	t.Helper()
	const density, temperature = 1e21, 1e-3
	constant := crosssections.Table{
		Energy: []float64{0, 1e4}, CrossSection: slices.Repeat([]float64{1 / (path * density)}, 2),
	}
	gas := &crosssections.Gas{Name: "X", Mass: mass, IonNeutral: []crosssections.Process{{
		Name: "exchange", Kind: crosssections.Backscatter, Projectile: "X+", Table: constant,
		Frame: crosssections.Lab,
	}}}
	model, err := mcc.NewModel(mcc.Settings{
		Projectile: "X+", Mass: mass, Unit: c.VelocityUnit(every),
		TimeStep: c.TimeStep() * float64(every), TopEnergy: topEV,
	}, []mcc.Background{{Gas: gas, Density: density, Temperature: temperature}})
	if err != nil {
		t.Fatal(err)
	}
	return model
}

// Goal: ions that exchange their charge at a constant mean free path arrive with the energies
// f(E) ~ exp(-E/(e E lambda)). Method: a vacuum gap of 20 free paths at constant voltage; ions from
// the first quarter, at rest at the start. The last exchange lies a distance before the wall
// that is exponential with the mean lambda, up to the chance exp(-15) of none; ions are counted
// till all have arrived, so that their energies are independent: the error of the mean is
// e E lambda/sqrt(N). A flight of one free path takes 90 steps or more, so that the steps change
// energies by 1/(12 90^2) at most.
//
// Ref: G. H. Wannier, Bell Syst. Tech. J. 32, 170 (1953), for the high-field case; the form is that
// of a renewal process and exact.
func TestValidationExchangeInUniformField(t *testing.T) {
	const n, voltage, cells, paths = 100_000, 200.0, 256, 20
	const mean = voltage / paths
	for _, scheme := range schemes() {
		ion := ions(1)
		c := empty(cells, 100, ion)
		c.Scheme, c.Drive.Bias, c.Weight = scheme, voltage, 1e-3
		c.Period = 100 * 0.3 * c.CellSize() / math.Sqrt(2*mean*phys.ElementaryCharge/ion.Mass)
		c.Species[0].Collisions = exchangeOnly(t, &c, ion.Mass, 1, c.Gap/paths, 1.2*voltage)
		s := mustNew(t, c)
		profile := make([]float64, cells+1)
		for j := range cells / 4 {
			profile[j] = 1
		}
		if err := s.Load(0, n, profile, 0); err != nil {
			t.Fatal(err)
		}
		var energies []float64
		watch(s, &spy{hits: func(_, _ int, hits []Hit) {
			for _, h := range hits {
				energies = append(energies, s.species[0].energyPer/phys.ElementaryCharge*h.VX*h.VX)
			}
		}})
		for s.species[0].Count() > 0 && s.step < 30_000 {
			mustAdvance(t, s, 100)
		}
		record(t, exchangeRows(scheme, energies, mean)...)
		checkExponential(t, energies, mean)
	}
}

func exchangeRows(scheme Scheme, energies []float64, mean float64) []validation.Row {
	sum, fast, n := 0.0, 0.0, float64(len(energies))
	for _, e := range energies {
		sum += e
		if e > 3*mean {
			fast++
		}
	}
	row := validation.Row{
		Section:  "charge exchange at a constant mean free path",
		Quantity: fmt.Sprintf("mean energy at the wall, uniform field, %v", scheme), Unit: "eV",
		Reference: mean, Ours: sum / n, OursError: mean / math.Sqrt(n), Status: "exact",
		Source: "exponential distribution of the distance from the last exchange", Limit: fourSigma,
		LimitKind: validation.Sigma, Seed: 1,
	}
	part := math.Exp(-3)
	second := row
	second.Quantity = fmt.Sprintf("part above three mean energies, uniform field, %v", scheme)
	second.Unit, second.Reference, second.Ours = "", part, fast/n
	second.OursError = math.Sqrt(part * (1 - part) / n)
	return []validation.Row{row, second}
}

// checkExponential is a chi-square test with cells of equal probability.
func checkExponential(t *testing.T, energies []float64, mean float64) {
	t.Helper()
	const cells = 20
	var counts [cells]float64
	for _, e := range energies {
		counts[min(cells-1, int(cells*-math.Expm1(-e/mean)))]++
	}
	want, chi2 := float64(len(energies))/cells, 0.0
	for _, n := range counts {
		chi2 += (n - want) * (n - want) / want
	}
	bound := distuv.ChiSquared{K: cells - 1}.Quantile(1 - falseAlarm)
	t.Logf("%d ions: chi-square %.1f, %d degrees of freedom, bound %.1f", len(energies), chi2,
		cells-1, bound)
	if len(energies) != 100_000 || !(chi2 < bound) {
		t.Errorf("%d ions, chi-square %.1f, bound %.1f", len(energies), chi2, bound)
	}
}

// fallen returns the mean energy of ions that were last at rest a distance before the wall which
// is exponential with the mean path: the integral of e (phi(x) - phi(0)) exp(-x/path) dx/path,
// by Simpson's rule in each cell; what comes from beyond the last node counts as from there.
func fallen(potential []float64, dx, path float64) float64 {
	sum, last := 0.0, len(potential)-1
	for j := range last {
		low, high := potential[j]-potential[0], potential[j+1]-potential[0]
		part := math.Exp(-float64(j) * dx / path)
		half := math.Exp(-dx / (2 * path))
		sum += dx / (6 * path) * part * (low + 2*(low+high)*half + high*half*half)
	}
	return sum + (potential[last]-potential[0])*math.Exp(-float64(last)*dx/path)
}

// Goal: in the sheath of a plasma, too, charge exchange lowers the energy of the ions as theory
// says, in proportion to the mean free path over the sheath's width when it is short. Method:
// the plasma of the high-frequency sheath, but with a wall at constant voltage, so that the
// potential is one of the place alone and the mean energy is exact, whatever its form: the last
// exchange before the wall lies at x with the chance exp(-x/lambda) dx/lambda, or did not happen.
//
// With a wave on the voltage the mean potential is no exact measure: see the test after this.
func TestValidationExchangeInSheath(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some ten seconds")
	}
	paths := []float64{4e-3, 2e-3, 1e-3}
	if !*validate {
		paths = paths[1:2]
	}
	for _, path := range paths {
		row, _ := exchangeInSheath(t, Drive{Bias: -150}, path, 100)
		row.Quantity = fmt.Sprintf("mean energy at the wall, sheath, lambda %g mm", 1e3*path)
		row.Status, row.Limit, row.LimitKind = "exact", fourSigma, validation.Sigma
		record(t, row)
	}
}

// Goal: the same where the sheath's voltage is a high-frequency wave, within 3 %. Method: the mean
// potential, as if exchanges knew nothing of the phase.
//
// They do: exchanges are more frequent when ions are fast, in phases of a strong field, in which
// the new ions gain more, too. In a uniform field with a wave as large as its mean the excess was
// found to be 6 % when the fall through one free path takes one period, 2 % at two periods, below
// 0.5 % from four, and 20 % or more at a third and less. Here it takes about 2.7, 1.8 and 1.2
// periods for the three paths. Rows beside the two shorter ones test this cause: ions that follow
// the law of exchange in the measured field by phase find the energy of the discharge, and that
// of the mean potential if the wave is taken out of the field. The excess of the shortest path is
// near the limit (2.7 % of 500 periods, 4.0 +- 1.2 % of the 100 that were once averaged).
func TestValidationExchangeInWaveSheath(t *testing.T) {
	onlyWhenValidating(t)
	wave := Drive{Tones: []Tone{{Harmonic: 1, Amplitude: 300}}}
	for _, path := range []float64{3e-3, 1.5e-3, 0.75e-3} {
		row, r := exchangeInSheath(t, wave, path, 500)
		row.Quantity = fmt.Sprintf("mean energy at the wall, 27 MHz sheath, lambda %g mm", 1e3*path)
		row.Status, row.Limit, row.LimitKind = "approximate", 0.03, validation.Relative
		cells := r.config.Cells / 4 // the plasma is kept up beyond, and little moves the ions there
		if float64(cells)*r.config.CellSize() >= 5*path {
			row.Note += lawRows(t, row, r, path, cells)
		}
		record(t, row)
	}
}

// exchangeInSheath compares the mean energy of ions at the powered wall with that in the mean
// potential, over a number of periods.
func exchangeInSheath(t *testing.T, drive Drive, path float64, periods int,
) (validation.Row, *radioSheath) {
	t.Helper()
	r := newRadioSheath(6.6465e-27, 200, periods)
	r.config.Drive = drive
	ion := &r.config.Species[1]
	ion.Collisions = exchangeOnly(t, &r.config, ion.Mass, ion.Every, path, 500)
	r.run(t)
	n, mean := 0.0, 0.0
	for k := range r.energy {
		n, mean = n+r.arrivals[k], mean+r.energy[k]
	}
	mean /= n
	middle := r.potential[:r.config.Cells/2+1]
	return validation.Row{
		Section: "charge exchange at a constant mean free path", Unit: "eV",
		Reference: fallen(middle, r.config.CellSize(), path), Ours: mean,
		OursError: math.Sqrt((r.squares/n - mean*mean) / n),
		Source:    "exponential distribution of the distance from the last exchange",
		Seed:      r.config.Seed,
		Note: fmt.Sprintf("helium ions, mean sheath voltage %.0f V, %.1f V per free path at the wall",
			middle[len(middle)-1]-middle[0], (middle[1]-middle[0])/r.config.CellSize()*path),
	}, r
}
