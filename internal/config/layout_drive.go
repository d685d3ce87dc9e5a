package config

import (
	"go.yaml.in/yaml/v4"
)

func geometryLayout(g *Geometry) value {
	return mapping{
		fields: []field{
			{
				key:   "shape",
				value: choice{dst: &g.Shape, options: []string{Planar, Cylindrical, Spherical}},
				doc: "Plates, or shells around the powered electrode, which is the smaller one. " +
					"Default: planar.",
			},
			{
				key: "area_ratio", value: number{dst: &g.AreaRatio, low: 1, high: maxAreaRatio},
				doc: "Area of the grounded electrode over that of the powered one, at least 1. " +
					"Default: 1.",
			},
		},
		check: func(d *decoder, n *yaml.Node, path string) {
			if g.Shape == Planar && g.AreaRatio != 1 {
				d.fail(d.at(n, under(path, "area_ratio")), under(path, "area_ratio"),
					formatFloat(g.AreaRatio)+" with planar electrodes", "cylindrical or spherical ones",
					"plates have equal areas")
			}
		},
	}
}

func driveLayout(d *Drive) value {
	tone := func(t *Tone) value { return toneLayout(t, d) }
	return mapping{check: d.checkWhole, fields: append([]field{
		{
			key: "tones", value: list[Tone]{dst: &d.Tones, max: maxTones, what: "tones", item: tone},
			doc: "The cosines. Their frequencies are whole multiples of a common fundamental, " +
				"which is at least 1/1000 of the highest.",
		},
		{
			key:   "series",
			value: pointer[Series]{&d.Series, seriesLayout},
			doc:   "A named family of tones, instead of tones.",
		},
		{
			key: "trace", value: pointer[Trace]{&d.Trace, traceLayout},
			doc: "A measured voltage, instead of tones.",
		},
		{
			key: "pulse", value: pointer[Pulse]{&d.Pulse, pulseLayout},
			doc: "The tones are switched on and off; results are resolved over the pulse. " +
				"Default: a steady drive.",
		},
		{
			key: "bias",
			value: quantity{
				dst: &d.Bias, dim: voltage(), low: "-" + maxVoltage, high: maxVoltage,
				absent: func() bool {
					return d.Bias == 0 && (d.BlockingCapacitor.Given() || d.CurrentDriven())
				},
			},
			doc: "Constant voltage. Default: 0 V.",
		},
	}, circuitFields(d)...)}
}

// circuitFields are what is in series, and the targets.
func circuitFields(d *Drive) []field {
	return []field{
		{
			key: "blocking_capacitor",
			value: amount{
				&d.BlockingCapacitor, capacitancePerArea(), capacitance(), "0", "1",
			},
			doc: "Capacitor in series, per area of the powered electrode, or in all with " +
				"electrodes.powered.area. A self-bias builds up across it. Default: none.",
		},
		{
			key: "resistance",
			value: amount{
				&d.Resistance, resistanceTimesArea(), resistance(), "0", "1e6",
			},
			doc: "Resistance in series, times the area of the powered electrode, or in all. " +
				"Default: none.",
		},
		{
			key:   "inductance",
			value: amount{&d.Inductance, inductanceTimesArea(), inductance(), "0", "1"},
			doc: "Inductance in series, times the area of the powered electrode, or in all. " +
				"Default: none.",
		},
		{
			key: "power", value: amount{&d.Power, powerPerArea(), power(), "0", "1e7"},
			doc: "Power that the powered electrode is to take, per area or in all: the voltage is " +
				"found. Default: the voltage is given.",
		},
		{
			key: "current", value: amount{&d.Current, currentPerArea(), current(), "0", "1e6"},
			doc: "Root mean square of the current that is to flow, per area or in all: the voltage " +
				"is found. Default: the voltage is given.",
		},
		{
			key: "self_bias",
			value: quantity{
				dst: &d.SelfBias, dim: voltage(), low: "-" + maxVoltage, high: maxVoltage,
				optional: true,
			},
			doc: "Mean voltage that the powered electrode is to have: the voltage is found. " +
				"Default: the voltage is given.",
		},
		{
			key: "voltage_limit",
			value: quantity{
				dst: &d.VoltageLimit, dim: voltage(), low: "0 V", high: maxVoltage, above: true,
				optional: true,
			},
			doc: "Largest sum of amplitudes to try when power, current or self_bias are given. " +
				"Default: 2000 V.",
		},
	}
}

func toneLayout(t *Tone, d *Drive) value {
	return mapping{fields: []field{
		{
			key: "frequency", required: true,
			value: quantity{
				dst: &t.Frequency, dim: frequency(), low: "0 Hz", high: maxFrequency,
				above: true,
			},
			doc: "Frequency of the cosine.",
		},
		{
			key: "amplitude",
			value: quantity{
				dst: &t.Amplitude, dim: voltage(), low: "0 V", high: maxVoltage,
				absent: func() bool { return d.Targeted() || t.Current > 0 },
			},
			doc: "Amplitude, not peak to peak. At least one tone has more than 0 V.",
		},
		{
			key: "current",
			value: quantity{
				dst: &t.Current, dim: currentPerArea(), low: "0 A/m2", high: maxCurrent, above: true,
				optional: true,
			},
			doc: "Amplitude of a current density that is given instead of the voltage.",
		},
		{
			key:   "ratio",
			value: number{dst: &t.Ratio, high: 1e6, above: true, optional: true},
			doc: "Amplitude in relation to the other tones, where power, current or self_bias find " +
				"the voltage. Default: 1.",
		},
		{
			key:   "phase",
			value: quantity{dst: &t.Phase, dim: angle(), low: minPhase, high: maxPhase},
			doc: "Phase: the voltage is amplitude * cos(2 pi frequency t + phase). " +
				"Default: 0 deg.",
		},
	}}
}

func seriesLayout(s *Series) value {
	return mapping{
		fields: []field{
			{
				key: "shape", required: true,
				value: choice{dst: &s.Shape, options: []string{
					Asymmetric, Peaks, Valleys, SawtoothUp, SawtoothDown,
				}},
				doc: "asymmetric: fundamental with a phase, and its double, of equal amplitudes; " +
					"peaks, valleys: narrow pulses up or down; sawtooth_up, sawtooth_down: slow in " +
					"the direction of the name.",
			},
			{
				key: "frequency", required: true,
				value: quantity{
					dst: &s.Frequency, dim: frequency(), low: "0 Hz", high: maxFrequency, above: true,
				},
				doc: "Frequency of the fundamental.",
			},
			{
				key: "harmonics",
				value: integer{
					dst: &s.Harmonics, low: 1, high: maxHarmonics, optional: true,
				},
				doc: "Number of tones; asymmetric has two. Default: 4.",
			},
			{
				key: "amplitude",
				value: quantity{
					dst: &s.Amplitude, dim: voltage(), low: "0 V", high: maxVoltage, above: true,
					optional: true,
				},
				doc: "Sum of the amplitudes of the tones.",
			},
			{
				key:   "phase",
				value: quantity{dst: &s.Phase, dim: angle(), low: minPhase, high: maxPhase},
				doc:   "Phase of the fundamental of asymmetric. Default: 0 deg.",
			},
		},
		check: func(dec *decoder, n *yaml.Node, path string) {
			if s.Shape != Asymmetric && s.Phase != 0 || s.Shape == Asymmetric && s.Harmonics > 0 &&
				s.Harmonics != 2 {
				dec.fail(n, path, "a phase or another number of harmonics than "+s.Shape+" has",
					"phase with asymmetric alone, which has 2 harmonics", "")
			}
		},
	}
}

func pulseLayout(p *Pulse) value {
	return mapping{fields: []field{
		{
			key: "rate", required: true,
			value: quantity{
				dst: &p.Rate, dim: frequency(), low: "0 Hz", high: maxFrequency, above: true,
			},
			doc: "Rate of the pulses, rounded so that a pulse is a whole number of periods of the " +
				"fundamental.",
		},
		{
			key: "duty", required: true,
			value: quantity{dst: &p.Duty, dim: ratio(), low: "0 %", high: "100 %", above: true},
			doc:   "Part of the time in which the tones are on.",
		},
	}}
}

func traceLayout(t *Trace) value {
	return mapping{fields: []field{
		{
			key: "file", required: true, value: folder{&t.File},
			doc: "CSV file of time and voltage, relative to this file; see the README.",
		},
		{
			key: "frequency", required: true,
			value: quantity{
				dst: &t.Frequency, dim: frequency(), low: "0 Hz", high: maxFrequency, above: true,
			},
			doc: "Frequency of the fundamental: one period of it is taken from the start of the file.",
		},
		{
			key: "harmonics",
			value: integer{
				dst: &t.Harmonics, low: 1, high: maxHarmonics, optional: true,
			},
			doc: "How many harmonics are kept: the band limit. Default: 20.",
		},
	}}
}

// checkAreas wants the area where something is given in all.
func (c *Case) checkAreas(d *decoder, n *yaml.Node, _ string) {
	if c.Electrodes.Powered.Area > 0 {
		return
	}
	for _, a := range []struct {
		key string
		of  Amount
	}{
		{"blocking_capacitor", c.Drive.BlockingCapacitor},
		{"resistance", c.Drive.Resistance},
		{"inductance", c.Drive.Inductance},
		{"power", c.Drive.Power},
		{"current", c.Drive.Current},
	} {
		if a.of.Total {
			key := "drive." + a.key
			d.fail(d.at(n, key), key, "a total", "a value per area, or electrodes.powered.area",
				"")
		}
	}
}
