package run

import (
	"fmt"
	"math"
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

// biasRuns carries out runs of these geometries and drives.
func biasRuns(t *testing.T, of ...[2]string) []*store.Summary {
	t.Helper()
	inputs := make([]string, len(of))
	for i, p := range of {
		inputs[i] = fmt.Sprintf(biasInput, p[0], p[1])
	}
	list := runAll(t, inputs)
	for _, s := range list {
		for _, c := range s.Checks {
			if c.Verdict != store.OK {
				t.Errorf("check %s is %s: %g, bound %g", c.Name, c.Verdict, c.Value, c.Bound)
			}
		}
	}
	return list
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

// Goal: equal electrodes with one tone have no self-bias; two tones of equal amplitude give one that
// changes its sign with the phase, is opposite at 0 and 90 degrees, and whose magnitude is that of
// the analytic model for the voltage ratio of the sheaths. Method: runs to 2 %. The model neglects
// bulk and floating voltage: about the 5 Te of a floating potential in argon. At 45 degrees the
// extremes are alike, but not the slopes of the voltage, so that symmetry does not ask for 0: it
// asks for the opposite at 135 degrees, where the waveform is that of 45 with its sign changed.
func TestValidationBiasOfTwoTones(t *testing.T) {
	onlyWhenValidating(t, "some minutes")
	const symmetry = "symmetry of equal electrodes (common practice)"
	const heil = "B. G. Heil, U. Czarnetzki, R. P. Brinkmann and T. Mussenbrock, J. Phys. D 41, " +
		"165202 (2008)"
	two := func(phase int) [2]string {
		return [2]string{"{}", fmt.Sprintf(
			"series: {shape: asymmetric, frequency: 13.56 MHz, amplitude: 300 V, phase: %d deg}", phase)}
	}
	list := biasRuns(t, [2]string{"{}", "tones: [{frequency: 13.56 MHz, amplitude: 200 V}]"},
		two(0), two(45), two(90), two(135))
	one := lookup(t, list[0], "self_bias_V")
	rows := []validation.Row{
		biasRow("one tone, 200 V", 0, 0, one.Value, one.SE, 4, validation.Sigma, symmetry, "exact", ""),
	}
	const v45 = 0.8801 // largest and least value of cos(x + 45 deg) + cos(2x), halved
	for k, extremes := range [][2]float64{{1, -0.5625}, {v45, -v45}, {0.5625, -1}} {
		s := list[1+k]
		bias, te := lookup(t, s, "self_bias_V"), lookup(t, s, "electron_temperature_center_eV")
		eps := lookup(t, s, "sheath_voltage_ratio").Value
		rows = append(rows, biasRow(fmt.Sprintf("two tones, 300 V in all, %d deg", 45*k),
			-300*(extremes[0]+eps*extremes[1])/(1+eps), 0, bias.Value, bias.SE, 5*te.Value,
			validation.Absolute, heil, "memory", fmt.Sprintf("formula with the ratio %.3f of the "+
				"sheaths' largest voltages, from their ion densities; with ratio 1 %.1f V", eps,
				-150*(extremes[0]+extremes[1]))))
	}
	for k, name := range []string{"90 against 0 deg", "135 against 45 deg"} {
		a, b := lookup(t, list[1+k], "self_bias_V"), lookup(t, list[3+k], "self_bias_V")
		rows = append(rows, biasRow("two tones, "+name, -a.Value, a.SE, b.Value, b.SE, 4,
			validation.Sigma, symmetry, "exact", ""))
	}
	record(t, "bias.json", rows...)
}

// Goal: the smaller electrode has a negative self-bias, whose dependence on the area ratio is a
// power law Vp/Vg = (Ag/Ap)^q of the kind that simulations of spherical shells have. Method: the
// mean sheath voltages from eta/V0 = -(Vp - Vg)/(Vp + Vg) for three ratios; exponent by the slope
// through ratio 1.
func TestValidationBiasOfAreas(t *testing.T) {
	onlyWhenValidating(t, "some minutes")
	ratios := []float64{1.5, 2.5, 4}
	var of [][2]string
	for _, ratio := range ratios {
		of = append(of, [2]string{
			fmt.Sprintf("{shape: spherical, area_ratio: %g}", ratio),
			"tones: [{frequency: 13.56 MHz, amplitude: 200 V}]",
		})
	}
	var rows []validation.Row
	var sxx, sxy, sum float64
	for k, s := range biasRuns(t, of...) {
		v := lookup(t, s, "self_bias_V")
		x, y := math.Log(ratios[k]), math.Log((200-v.Value)/(200+v.Value))
		se := 400 * v.SE / (200*200 - v.Value*v.Value)
		sxx, sxy, sum = sxx+x*x, sxy+x*y, sum+x*x*se*se
		r := biasRow(fmt.Sprintf("exponent q, area ratio %g", ratios[k]), 1, 0, y/x, se/x, 0.5,
			validation.Absolute, "M. V. Alves, M. A. Lieberman, V. Vahedi and C. K. Birdsall, "+
				"J. Appl. Phys. 69, 3823 (1991): near one in measurements and simulations of shells",
			"read", fmt.Sprintf("self-bias %.2f V of 200 V; Child sheaths of equal density would have 4",
				v.Value))
		r.Unit = ""
		rows = append(rows, r)
	}
	r := rows[0]
	r.Quantity, r.Ours, r.OursError, r.Note = "exponent q, all ratios", sxy/sxx, math.Sqrt(sum)/sxx, ""
	record(t, "bias.json", append(rows, r)...)
}
