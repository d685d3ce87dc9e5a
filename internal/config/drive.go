package config

import (
	"fmt"
	"math"
	"math/big"
	"strconv"

	"go.yaml.in/yaml/v4"
)

// The shapes of Series.
const (
	Asymmetric   = "asymmetric"
	Peaks        = "peaks"
	Valleys      = "valleys"
	SawtoothUp   = "sawtooth_up"
	SawtoothDown = "sawtooth_down"
)

// Series is a named family of tones: the fundamental and its multiples.
type Series struct {
	// Shape is one of the constants above.
	Shape string
	// Frequency of the fundamental [Hz].
	Frequency float64
	// Harmonics is the number of tones, 0 for the default.
	Harmonics int
	// Amplitude is the sum of the tones' amplitudes [V]; 0 if a target finds it.
	Amplitude float64
	// Phase is that of the fundamental in an asymmetric series [rad].
	Phase float64
}

// Pulse is the switching of a pulsed drive.
type Pulse struct {
	// Rate of the pulses [Hz].
	Rate float64
	// Duty is the part of the time in which the tones are on.
	Duty float64
}

// periods is how many periods of a frequency [Hz] make a pulse.
func (p *Pulse) periods(frequency float64) int {
	return max(1, int(math.Round(frequency/p.Rate)))
}

const (
	defaultHarmonics = 4
	defaultRatio     = 1
)

// expand returns the tones. With N of them and k = 1..N, amplitudes as parts of the sum:
//
//	asymmetric     1/2 cos(wt + phase) + 1/2 cos(2wt)
//	peaks          2 (N-k+1)/(N (N+1)) cos(k w t)
//	valleys        the same, turned upside down
//	sawtooth_up    1/k sin(k w t), upside down and scaled: the voltage rises slowly and falls fast
//	sawtooth_down  1/k sin(k w t), scaled: it falls slowly and rises fast
//
// Refs: B. G. Heil, U. Czarnetzki, R. P. Brinkmann and T. Mussenbrock, J. Phys. D 41, 165202
// (2008), asymmetric; J. Schulze, E. Schuengel, Z. Donko and U. Czarnetzki, Plasma Sources Sci.
// Technol. 20, 015017 (2011), peaks and valleys; B. Bruneau, T. Novikova, T. Lafleur, J. P. Booth
// and E. V. Johnson, Plasma Sources Sci. Technol. 23, 065010 (2014), sawtooth (formulas from
// memory).
func (s *Series) expand() []Tone {
	const quarter = 1.5707963267948966 // pi/2
	n := s.Harmonics
	if n == 0 {
		n = defaultHarmonics
	}
	if s.Shape == Asymmetric {
		n = 2
	}
	parts, sum := make([]float64, n), 0.0
	tones := make([]Tone, n)
	for i := range tones {
		k := float64(i + 1)
		tones[i].Frequency = multiple(s.Frequency, i+1)
		parts[i] = 1 / k
		switch s.Shape {
		case Asymmetric:
			parts[i] = 1
		case Peaks, Valleys:
			parts[i] = float64(n - i)
		case SawtoothUp:
			tones[i].Phase = quarter
		case SawtoothDown:
			tones[i].Phase = -quarter
		}
		if s.Shape == Valleys {
			tones[i].Phase = 2 * quarter
		}
		sum += parts[i]
	}
	if s.Shape == Asymmetric {
		tones[0].Phase = s.Phase
	}
	for i := range tones {
		if s.Amplitude > 0 {
			tones[i].Amplitude = s.Amplitude * parts[i] / sum
		} else {
			tones[i].Ratio = parts[i] / parts[0]
		}
	}
	return tones
}

// multiple is n times a frequency, to the last decimal that it is written with.
func multiple(frequency float64, n int) float64 {
	f, _ := new(big.Rat).Mul(asWritten(frequency), big.NewRat(int64(n), 1)).Float64()
	return f
}

// Expand turns a series into its tones.
func (d *Drive) Expand() {
	if d.Series != nil {
		d.Tones, d.Series = d.Series.expand(), nil
	}
}

// Targeted tells whether the voltage is to be found: by power, current or self-bias.
func (d *Drive) Targeted() bool {
	return d.Power.Given() || d.Current.Given() || d.SelfBias != 0
}

// CurrentDriven tells whether the tones are currents.
func (d *Drive) CurrentDriven() bool {
	return len(d.Tones) > 0 && d.Tones[0].Current > 0
}

// Limit returns the largest sum of amplitudes that a target may try [V].
func (d *Drive) Limit() float64 {
	if d.VoltageLimit > 0 {
		return d.VoltageLimit
	}
	return defaultVoltageLimit
}

// Shares returns the amplitudes of the tones as parts of their sum.
func (d *Drive) Shares() []float64 {
	list, sum := make([]float64, len(d.Tones)), 0.0
	for i, t := range d.Tones {
		switch {
		case t.Current > 0:
			list[i] = t.Current
		case d.Targeted() && t.Ratio == 0:
			list[i] = defaultRatio
		case d.Targeted():
			list[i] = t.Ratio
		default:
			list[i] = t.Amplitude
		}
		sum += list[i]
	}
	for i := range list {
		list[i] /= sum
	}
	return list
}

// at is a node that stands for the key of a path, or n if it was not given.
func (d *decoder) at(n *yaml.Node, key string) *yaml.Node {
	if p, ok := d.pos[key]; ok {
		return &yaml.Node{Line: p.line, Column: p.col}
	}
	return n
}

func (d *decoder) has(key string) bool {
	_, ok := d.pos[key]
	return ok
}

// checkWhole wants one waveform, and what finds its voltage.
func (d *Drive) checkWhole(dec *decoder, n *yaml.Node, path string) {
	given := ""
	for _, key := range []string{"tones", "series", "trace"} {
		if !dec.has(under(path, key)) {
			continue
		}
		if given != "" {
			dec.fail(dec.at(n, under(path, key)), under(path, key), "a second waveform beside "+given,
				"one of tones, series and trace", "")
			return
		}
		given = key
	}
	if given == "" {
		dec.fail(n, under(path, "tones"), "nothing", "a list of 1 to "+strconv.Itoa(maxTones)+
			" tones, or instead of it series or trace", "the key is required")
		return
	}
	before := len(dec.errs)
	d.checkTarget(dec, n, path)
	if len(dec.errs) == before {
		d.checkAmplitudes(dec, n, path)
	}
	if len(dec.errs) == before {
		d.checkCircuit(dec, n, path)
	}
	if len(dec.errs) == before && d.Pulse != nil {
		d.checkPulse(dec, n, path)
	}
	if len(dec.errs) == before && len(d.Tones) > 0 {
		tones := under(path, "tones")
		d.check(dec, dec.at(n, tones), tones)
	}
}

// checkPulse wants pulses of some periods, on and off for at least one.
func (d *Drive) checkPulse(dec *decoder, n *yaml.Node, path string) {
	f := d.fundamental()
	periods := f / d.Pulse.Rate
	on := d.Pulse.Duty * periods
	if periods < 3.5 || periods > maxPulse || on < 2 || periods-on < 1 {
		dec.fail(dec.at(n, under(path, "pulse")), under(path, "pulse"), fmt.Sprintf(
			"%.4g periods of %s a pulse, on for %.3g", periods, megahertz(f), on),
			fmt.Sprintf("4 to %d periods, on for 2 at least, off for 1 at least", maxPulse), "")
	}
}

// checkTarget wants one target at most, and no voltage beside it.
func (d *Drive) checkTarget(dec *decoder, n *yaml.Node, path string) {
	target := ""
	for _, key := range []string{"power", "current", "self_bias"} {
		if !dec.has(under(path, key)) {
			continue
		}
		if target != "" {
			dec.fail(dec.at(n, under(path, key)), under(path, key), "a second target beside "+target,
				"one of power, current and self_bias", "")
			return
		}
		target = key
	}
	if target == "" {
		if dec.has(under(path, "voltage_limit")) {
			dec.fail(dec.at(n, under(path, "voltage_limit")), under(path, "voltage_limit"),
				"a limit where nothing is sought", "power, current or self_bias beside it", "")
		}
		return
	}
	key := under(path, target)
	voltage := ""
	if d.Trace != nil {
		voltage = under(path, "trace")
	}
	for _, k := range append(toneKeys(d, path, "amplitude"), toneKeys(d, path, "current")...) {
		if dec.has(k) {
			voltage = k
		}
	}
	if dec.has(under(path, "series.amplitude")) {
		voltage = under(path, "series.amplitude")
	}
	if voltage != "" {
		dec.fail(dec.at(n, key), key, target+" and "+voltage, "one of them",
			target+" finds the voltage; tones may have a ratio")
		return
	}
	if target == "self_bias" && (!dec.has(under(path, "blocking_capacitor")) || d.SelfBias == 0) {
		dec.fail(dec.at(n, key), key, "a self-bias without blocking_capacitor, or of 0 V",
			"a blocking capacitor, across which a bias builds up", "")
	}
}

func toneKeys(d *Drive, path, key string) []string {
	var list []string
	for i := range d.Tones {
		list = append(list, under(under(path, "tones."+strconv.Itoa(i)), key))
	}
	return list
}

// checkAmplitudes wants every tone to have an amplitude, of one kind.
func (d *Drive) checkAmplitudes(dec *decoder, n *yaml.Node, path string) {
	if d.Targeted() {
		return
	}
	if d.Series != nil && d.Series.Amplitude == 0 {
		key := under(path, "series.amplitude")
		dec.fail(dec.at(n, under(path, "series")), key, "nothing", voltage().wanted(),
			"the key is required, unless a power, current or self_bias is given")
	}
	currents := toneKeys(d, path, "current")
	for i, key := range toneKeys(d, path, "amplitude") {
		at := under(path, "tones."+strconv.Itoa(i))
		has, current := dec.has(key), dec.has(currents[i])
		switch {
		case !has && !current:
			dec.fail(dec.at(n, at), key, "nothing", voltage().wanted(), "the key is required")
		case has && current, current != d.CurrentDriven():
			dec.fail(dec.at(n, at), at, "amplitude and current",
				"either the voltages or the currents of all tones", "")
		case d.Tones[i].Ratio > 0:
			dec.fail(dec.at(n, at), under(at, "ratio"), "a ratio beside an amplitude",
				"a ratio with power, current or self_bias alone", "")
		}
	}
}

// checkCircuit wants no part that cannot work.
func (d *Drive) checkCircuit(dec *decoder, n *yaml.Node, path string) {
	for _, key := range []string{"bias", "blocking_capacitor", "resistance", "inductance"} {
		k := under(path, key)
		if dec.has(k) && d.CurrentDriven() && !(key == "bias" && d.Bias == 0) {
			dec.fail(dec.at(n, k), k, key+" beside a given current",
				"tones with an amplitude", "a given current flows whatever is in series")
		}
	}
	k := under(path, "bias")
	if d.Bias != 0 && d.BlockingCapacitor.Given() {
		dec.fail(dec.at(n, k), k, "a bias behind a blocking capacitor", "one of them",
			"the capacitor takes any constant voltage")
	}
}
