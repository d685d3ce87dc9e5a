package config

import (
	"fmt"
	"math/big"
	"strconv"

	"go.yaml.in/yaml/v4"
)

// Fundamental is the highest frequency [Hz] of which every tone is a whole multiple: 13.56 MHz for
// 13.56 and 27.12 MHz, 40 kHz for 2 and 13.56 MHz. It is computed from the decimals that the
// frequencies are written with, so 0.1 and 0.3 Hz have 0.1 Hz; the multiple of a tone is
// math.Round(tone/fundamental). It is 0 if there are no tones, or one is not above 0.
//
// In a pulsed drive it is the rate of the pulses, rounded to a whole number of periods of that
// frequency.
func (d Drive) Fundamental() float64 {
	f := d.fundamental()
	if d.Pulse != nil && f > 0 {
		return f / float64(d.Pulse.periods(f))
	}
	return f
}

// fundamental is that of the tones.
func (d Drive) fundamental() float64 {
	switch {
	case d.Series != nil:
		return d.Series.Frequency
	case d.Trace != nil:
		return d.Trace.Frequency
	}
	var all *big.Rat
	for _, t := range d.Tones {
		f := asWritten(t.Frequency)
		if f == nil || f.Sign() <= 0 {
			return 0
		}
		all = common(all, f)
	}
	if all == nil {
		return 0
	}
	f, _ := all.Float64()
	return f
}

// common is the greatest common divisor of two fractions above 0; nil has every multiple.
//
// gcd(a/b, c/d) = gcd(a d, c b) / (b d)
func common(x, y *big.Rat) *big.Rat {
	if x == nil {
		return y
	}
	a := new(big.Int).Mul(x.Num(), y.Denom())
	c := new(big.Int).Mul(y.Num(), x.Denom())
	return new(big.Rat).SetFrac(
		new(big.Int).GCD(nil, nil, a, c),
		new(big.Int).Mul(x.Denom(), y.Denom()),
	)
}

// check wants a tone above 0 V and a fundamental.
func (d *Drive) check(dec *decoder, n *yaml.Node, path string) {
	loudest := 0.0
	for _, t := range d.Tones {
		loudest = max(loudest, t.Amplitude, t.Current)
	}
	if loudest == 0 && !d.Targeted() {
		dec.fail(n, path, "no amplitude above 0 V", "at least one tone with more than 0 V", "")
	}
	i, j := d.unrelated()
	if i == j {
		return
	}
	written := func(i int) string { return megahertz(d.Tones[i].Frequency) }
	key := fmt.Sprintf("%s.%d.frequency", path, j)
	at := dec.pos[key]
	dec.fail(&yaml.Node{Line: at.line, Column: at.col}, key,
		fmt.Sprintf("%s, beside %s of tone %d", written(j), written(i), i),
		fmt.Sprintf("whole multiples of a common fundamental of at least 1/%d of the highest "+
			"frequency", maxHarmonic),
		fmt.Sprintf("that of the tones 0 to %d is %s", j,
			megahertz(Drive{Tones: d.Tones[:j+1]}.fundamental())))
}

// megahertz writes a frequency for people.
func megahertz(f float64) string {
	return strconv.FormatFloat(f/1e6, 'g', 10, 64) + " MHz"
}

// unrelated are two tones, i < j, that keep the drive from having a fundamental, or 0 and 0 if it
// has one: the first tone that makes it too low, and the earlier tone that has the lowest one
// with it.
func (d *Drive) unrelated() (i, j int) {
	lowest := new(big.Rat)
	for _, t := range d.Tones {
		if f := asWritten(t.Frequency); f.Cmp(lowest) > 0 {
			lowest = f
		}
	}
	lowest = new(big.Rat).Quo(lowest, big.NewRat(maxHarmonic, 1))
	var all *big.Rat
	for j, t := range d.Tones {
		all = common(all, asWritten(t.Frequency))
		if all.Cmp(lowest) < 0 {
			return d.worstBefore(j), j
		}
	}
	return 0, 0
}

// worstBefore is the tone before j whose fundamental with it is the lowest.
func (d *Drive) worstBefore(j int) int {
	worst := 0
	var least *big.Rat
	for i := range j {
		f := common(asWritten(d.Tones[i].Frequency), asWritten(d.Tones[j].Frequency))
		if least == nil || f.Cmp(least) < 0 {
			worst, least = i, f
		}
	}
	return worst
}
