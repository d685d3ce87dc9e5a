package run

import (
	"context"
	"fmt"
	"math"
	"path/filepath"
	"slices"
	"testing"

	"ionfall/internal/store"
	"ionfall/internal/validation"
)

// biasInput is an argon discharge behind a blocking capacitor, with what differs filled in.
const biasInput = `
gap: 30 mm
geometry: %s
gas: {pressure: 5 Pa, mixture: {Ar: 1}}
drive: {%s, blocking_capacitor: 1 uF/m2}
electrodes: {powered: {substrate: true}}
accuracy: {ion_energy: 2 %%, ion_flux: 2 %%}
`

func biasRun(t *testing.T, geometry, drive string) (*store.Summary, string) {
	t.Helper()
	s, dir, err := Run(context.Background(), plan(t, fmt.Sprintf(biasInput, geometry, drive)),
		Options{Out: filepath.Join(t.TempDir(), "out")})
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range s.Checks {
		if c.Verdict != store.OK {
			t.Errorf("check %s is %s: %g, bound %g", c.Name, c.Verdict, c.Value, c.Bound)
		}
	}
	return s, dir
}

// leastBiasError covers what the steering leaves, which the capacitor takes away over some hundred
// periods: Te over the root of the ions that the fine steps saw [V].
const leastBiasError = 0.25

func biasOf(t *testing.T, s *store.Summary) (volts, stdErr float64) {
	t.Helper()
	v, ok := s.Lookup("self_bias_V")
	if !ok {
		t.Fatal("no self-bias")
	}
	return v.Value, math.Hypot(v.SE, leastBiasError)
}

func biasRow(quantity string, want, wantErr, got, gotErr, limit float64, kind validation.LimitKind,
	source, status, note string,
) validation.Row {
	return validation.Row{
		Section: "self-bias in argon, 5 Pa, 3 cm", Quantity: quantity, Unit: "V", Reference: want,
		ReferenceError: wantErr, Ours: got, OursError: gotErr, Limit: limit, LimitKind: kind,
		Source: source, Status: status, Seed: 1, Note: note,
	}
}

// Goal: equal electrodes with one tone have no self-bias; two tones of equal amplitude give one
// that changes its sign with the phase, is opposite at 0 and 90 degrees and none at 45, and whose
// magnitude is that of the analytic model for the voltage ratio of the sheaths. Method: runs to 2
// %. The model neglects bulk and floating voltage: about the 5 Te of a floating potential in argon.
func TestValidationBiasOfTwoTones(t *testing.T) {
	onlyWhenValidating(t, "some minutes")
	const symmetry = "symmetry of equal electrodes (common practice)"
	const heil = "B. G. Heil, U. Czarnetzki, R. P. Brinkmann and T. Mussenbrock, J. Phys. D 41, " +
		"165202 (2008)"
	one, _ := biasRun(t, "{}", "tones: [{frequency: 13.56 MHz, amplitude: 200 V}]")
	v, se := biasOf(t, one)
	rows := []validation.Row{
		biasRow("one tone, 200 V", 0, 0, v, se, 4, validation.Sigma, symmetry, "exact", ""),
	}
	var eta, err [3]float64
	for k, phase := range []int{0, 45, 90} {
		s, dir := biasRun(t, "{}", fmt.Sprintf(
			"series: {shape: asymmetric, frequency: 13.56 MHz, amplitude: 300 V, phase: %d deg}", phase))
		eta[k], err[k] = biasOf(t, s)
		if phase == 45 {
			continue
		}
		eps := sheathRatio(t, dir)
		// Extremes of cos(x + phase) + cos(2x), halved.
		high, low := 1.0, -0.5625
		if phase == 90 {
			high, low = 0.5625, -1
		}
		te, _ := s.Lookup("electron_temperature_center_eV")
		rows = append(rows, biasRow(fmt.Sprintf("two tones, 300 V in all, %d deg", phase),
			-300*(high+eps*low)/(1+eps), 0, eta[k], err[k], 5*te.Value, validation.Absolute, heil,
			"memory", fmt.Sprintf("formula with the ratio %.3f of the sheaths' largest voltages, "+
				"from their ion densities; with ratio 1 %.1f V", eps, -150*(high+low))))
	}
	rows = append(rows,
		biasRow("two tones, 45 deg", 0, 0, eta[1], err[1], 4, validation.Sigma, symmetry, "exact", ""),
		biasRow("two tones, 90 against 0 deg", -eta[0], err[0], eta[2], err[2], 4, validation.Sigma,
			symmetry, "exact", ""))
	record(t, "bias.json", rows...)
}

// sheathRatio returns the largest voltage of the grounded sheath over that of the powered one, from
// the ions alone: V = e/eps0 times the integral of n x over the widest sheath, x from the wall.
//
// Ref: U. Czarnetzki, J. Schulze, E. Schuengel and Z. Donko, Plasma Sources Sci. Technol. 20,
// 024010 (2011), whose eps this is, with the shape of the sheaths in the integral.
func sheathRatio(t *testing.T, dir string) float64 {
	t.Helper()
	column := func(file, name string) []float64 {
		table, err := store.ReadTable(filepath.Join(dir, file))
		if err != nil {
			t.Fatal(err)
		}
		list, err := table.Floats(name)
		if err != nil {
			t.Fatal(err)
		}
		return list
	}
	x, n := column("profiles.parquet", "x_m"), column("profiles.parquet", "Ar_plus_density_m3")
	gap := x[len(x)-1]
	moment := func(edge float64, from func(x float64) float64) float64 {
		sum := 0.0
		for j := range x {
			if at := from(x[j]); at < edge {
				sum += n[j] * at
			}
		}
		return sum
	}
	powered := slices.Max(column("waveforms.parquet", "sheath_powered_m"))
	grounded := slices.Max(column("waveforms.parquet", "sheath_grounded_m"))
	return moment(grounded, func(x float64) float64 { return gap - x }) /
		moment(powered, func(x float64) float64 { return x })
}

// Goal: the smaller electrode has a negative self-bias, whose dependence on the area ratio is a
// power law Vp/Vg = (Ag/Ap)^q of the kind that simulations of spherical shells have. Method: the
// mean sheath voltages from eta/V0 = -(Vp - Vg)/(Vp + Vg) for three ratios; exponent by the slope
// through ratio 1.
func TestValidationBiasOfAreas(t *testing.T) {
	onlyWhenValidating(t, "some minutes")
	var rows []validation.Row
	var sxx, sxy float64
	for _, ratio := range []float64{1.5, 2.5, 4} {
		s, _ := biasRun(t, fmt.Sprintf("{shape: spherical, area_ratio: %g}", ratio),
			"tones: [{frequency: 13.56 MHz, amplitude: 200 V}]")
		v, se := biasOf(t, s)
		x, y := math.Log(ratio), math.Log((200-v)/(200+v))
		sxx, sxy = sxx+x*x, sxy+x*y
		exponent := y / x
		r := biasRow(fmt.Sprintf("exponent q, area ratio %g", ratio), 1, 0, exponent,
			2*200*se/(200*200-v*v)/x, 0.5, validation.Absolute,
			"M. V. Alves, M. A. Lieberman, V. Vahedi and C. K. Birdsall, J. Appl. Phys. 69, 3823 (1991): "+
				"near one in measurements and simulations of shells", "read",
			fmt.Sprintf("self-bias %.2f V of 200 V; Child sheaths of equal density would have 4", v))
		r.Unit = ""
		rows = append(rows, r)
	}
	r := biasRow("exponent q, all ratios", 1, 0, sxy/sxx, 0, 0.5, validation.Absolute, rows[0].Source,
		"read", "")
	r.Unit = ""
	record(t, "bias.json", append(rows, r)...)
}
