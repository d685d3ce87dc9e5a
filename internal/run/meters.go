package run

import (
	"fmt"
	"math"
	"strings"

	"ionfall/diagnostics"
	"ionfall/internal/stats"
	"ionfall/internal/store"
	"ionfall/pic"
)

// mostReadings is how many tones the meters show: the largest ones.
const mostReadings = 8

// newMeter returns a meter of the present simulation for the tones of the drive.
func (m *machine) newMeter() *diagnostics.Meter {
	var list []int
	tones := m.sim.Config().Drive.Tones
	for len(list) < min(mostReadings, len(tones)) {
		best, largest := 0, -1.0
		for _, t := range tones {
			seen := false
			for _, k := range list {
				seen = seen || k == t.Harmonic
			}
			if !seen && t.Amplitude > largest {
				best, largest = t.Harmonic, t.Amplitude
			}
		}
		if largest < 0 {
			break // tones of the same frequency
		}
		list = append(list, best)
	}
	return diagnostics.NewMeter(m.sim, list)
}

// frequencyKey is a frequency as a key: 13p56MHz.
func frequencyKey(hertz float64) string {
	return strings.ReplaceAll(fmt.Sprintf("%.6gMHz", hertz/1e6), ".", "p")
}

// meterResults adds what instruments at the electrode show.
func (m *machine) meterResults(r map[string]any) {
	n := m.control.Averaged.Periods
	bias := m.biases(r, n)
	rms := m.meter.RMS(n)
	low, high := m.meter.MidGap(n)
	r["self_bias_V"] = bias
	r["voltage_peak_to_peak_V"] = value(m.meter.PeakToPeak(n), "V")
	r["current_rms_Apm2"] = value(rms, "A/m2")
	r["plasma_potential_least_V"], r["plasma_potential_largest_V"] = value(low, "V"), value(high, "V")
	voltage, current, phase := map[string]any{}, map[string]any{}, map[string]any{}
	resistance, reactance := map[string]any{}, map[string]any{}
	for _, x := range m.meter.Readings(n) {
		key := frequencyKey(float64(x.Harmonic) / m.plan.period())
		voltage[key], current[key] = value(x.Voltage, "V"), value(x.Current, "A/m2")
		phase[key] = value(x.PhaseDeg, "deg")
		resistance[key] = value(x.Resistance, "Ohm m2")
		reactance[key] = value(x.Reactance, "Ohm m2")
	}
	r["voltage_amplitude_V"], r["current_amplitude_Apm2"] = voltage, current
	r["current_phase_deg"] = phase
	r["resistance_Ohmm2"], r["reactance_Ohmm2"] = resistance, reactance
	r["electron_power_Wpm2"] = m.electronPowers()
	r["sheath_voltage_ratio"] = value(m.rec.SheathVoltageRatio(), "")
	m.totals(r, n)
	if m.plan.Case.Drive.Targeted() {
		_, is, exponent, _ := m.target(n)
		a := m.amplitude()
		r["drive_amplitude_V"] = store.Value{
			Value: a, SE: a * math.Abs(is.StdErr/is.Mean) / exponent, Unit: "V",
		}
	}
}

// biases returns the mean voltage of the metal of the powered electrode, and adds the mean
// potentials of surfaces against the metal below them, where something is between. All capacitors
// in series have passed the same charge Q from the start: Q = C (V - phi[0]) on average, with V the
// drive's constant part, C of all of them and phi[0] the voltage across the gap.
func (m *machine) biases(r map[string]any, n int) store.Value {
	c, d := m.sim.Config(), &m.plan.Case.Drive
	gap := m.meter.SelfBias(n)
	gap.StdErr = math.Hypot(gap.StdErr, m.biasError())
	layers := m.plan.layers()
	block := d.BlockingCapacitor.PerArea(m.plan.area())
	switch {
	case !c.CurrentDrive && c.Network.Capacitance == 0 && c.Network.Resistance == 0:
		return store.Value{Value: d.Bias, Unit: "V"}
	case c.CurrentDrive || layers == [2]float64{}:
		return value(gap, "V")
	}
	across := func(capacitance, sign float64) store.Value {
		if capacitance == 0 {
			return store.Value{Unit: "V"}
		}
		part := c.Network.Capacitance / capacitance
		return store.Value{
			Value: sign * part * (d.Bias - gap.Mean), SE: part * gap.StdErr, Unit: "V",
		}
	}
	potentials := map[string]any{}
	for wall, sign := range []float64{-1, 1} {
		if layers[wall] > 0 {
			potentials[pic.Wall(wall).String()] = across(layers[wall], sign)
		}
	}
	r["surface_potential_V"] = potentials
	metal := across(block, -1)
	metal.Value += d.Bias
	return metal
}

// totals adds current and power of the whole electrode where its area is given.
func (m *machine) totals(r map[string]any, n int) {
	area := m.plan.Case.Electrodes.Powered.Area
	if area == 0 {
		return
	}
	rms := m.meter.RMS(n)
	r["current_rms_A"] = store.Value{Value: area * rms.Mean, SE: area * rms.StdErr, Unit: "A"}
	power := m.series(func(r *Row) float64 { return r.TotalPower }, n)
	e := m.atLeast(stats.Mean(power))
	r["power_W"] = store.Value{Value: area * e.Mean, SE: area * e.StdErr, Unit: "W"}
}

// electronPowers parts the power that electrons take from the field by place: in the sheaths, as
// far as their edges ever go, and in the bulk between, where it is ohmic heating and what the
// field at the edges does. An error is at most the sum of those of the nodes.
func (m *machine) electronPowers() map[string]any {
	powered, bulk, grounded := m.rec.ElectronPowers()
	return map[string]any{
		"sheath_powered": value(m.atLeast(powered), "W/m2"), "bulk": value(m.atLeast(bulk), "W/m2"),
		"sheath_grounded": value(m.atLeast(grounded), "W/m2"),
	}
}

// reactorChecks judge bias and target.
func (m *machine) reactorChecks() []store.Check {
	var list []store.Check
	n := m.control.Averaged.Periods
	if m.plan.biasFree() {
		difference, se := stats.Drift(m.meter.Bias(n))
		scale := m.plan.largestVoltage()
		// What chance alone makes of the difference is no drift.
		part := math.Max(0, math.Abs(difference)-driftErrors*se) / scale
		if math.IsNaN(se) {
			part = math.NaN()
		}
		list = append(list, above("self_bias_drift", part, bounds{0.005, 0.03},
			fmt.Sprintf("change of the self-bias over the average beyond chance, over the amplitude; "+
				"%+.2g +- %.2g V", difference, se)))
	}
	if m.plan.Case.Drive.Targeted() {
		want, is, _, name := m.target(n)
		off := math.Abs(is.Mean/want - 1)
		chance := driftErrors * m.atLeast(is).StdErr / math.Abs(is.Mean)
		list = append(list, above("target", off, bounds{0.02 + chance, 0.1 + chance},
			fmt.Sprintf("relative deviation of the %s from the one asked for; chance alone makes up to "+
				"%.2g %%", name, 100*chance)))
	}
	return list
}
