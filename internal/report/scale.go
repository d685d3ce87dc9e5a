package report

import (
	"math"
	"strconv"
	"strings"
)

// scale maps values to positions.
type scale struct {
	low, high float64 // values at the ends
	from, to  float64 // positions at the ends
	log       bool
}

// at is the position of a value; what a logarithmic axis cannot show sits at its end.
func (s scale) at(v float64) float64 {
	low, high := s.low, s.high
	if s.log {
		v, low, high = math.Log(math.Max(v, low)), math.Log(low), math.Log(high)
	}
	return s.from + (v-low)/(high-low)*(s.to-s.from)
}

// tick is a mark on an axis.
type tick struct {
	at    float64
	label string
}

// linearTicks are about n round values, and the power of ten that their labels leave out.
func linearTicks(low, high float64, n int) (list []tick, power int) {
	step := roundStep((high - low) / float64(n))
	largest := math.Max(math.Abs(low), math.Abs(high))
	if p := int(math.Floor(math.Log10(largest))); p >= 4 || p <= -3 {
		power = p
	}
	unit := math.Pow(10, float64(power))
	places := max(0, int(math.Ceil(-math.Log10(step/unit)-1e-9)))
	first := math.Ceil(low/step - 1e-9)
	for i := range mostTicks {
		k := first + float64(i) // of large k, k+1 may be no other number
		v := k * step
		if !(v <= high+1e-9*step) {
			break
		}
		text := strconv.FormatFloat(v/unit, 'f', places, 64)
		if k == 0 {
			text = "0"
		}
		list = append(list, tick{v, strings.Replace(text, "-", "\u2212", 1)})
	}
	return list, power
}

// roundStep is the next of 1, 2, 5 x 10^k.
func roundStep(x float64) float64 {
	if !(x > 0) || math.IsInf(x, 0) {
		return 1
	}
	unit := math.Pow(10, math.Floor(math.Log10(x)))
	for _, m := range []float64{1, 2, 5} {
		if m*unit >= 0.999999*x {
			return m * unit
		}
	}
	return 10 * unit
}

// mostTicks is more than any axis can show.
const mostTicks = 100

// logTicks are powers of ten, every one or every few; none where the axis has no logarithm.
func logTicks(low, high float64, n int) []tick {
	if !(low > 0 && high >= low) || math.IsInf(high, 0) {
		return nil
	}
	first := int(math.Ceil(math.Log10(low) - 1e-9))
	last := int(math.Floor(math.Log10(high) + 1e-9))
	every := max(1, (last-first+n)/n)
	var list []tick
	for p := first; p <= last; p += every {
		list = append(list, tick{math.Pow(10, float64(p)), "10" + superscript(p)})
	}
	return list
}

func superscript(n int) string {
	return strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴",
		"5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹").Replace(strconv.Itoa(n))
}

// prettyUnit is a unit as the page shows it.
func prettyUnit(unit string) string {
	return strings.NewReplacer("^-3/2", "^(−3/2)", "m2", "m²", "m3", "m³").Replace(unit)
}

// axisTitle is the label of an axis whose numbers leave out a power of ten.
func axisTitle(a Axis, power int) string {
	unit := prettyUnit(a.Unit)
	if power != 0 {
		unit = strings.TrimSpace("10" + superscript(power) + " " + unit)
	}
	if unit == "" {
		return a.Label
	}
	return a.Label + " [" + unit + "]"
}

// rangeOf is the range of an axis: its own, or that of the values, with some room.
func rangeOf(a Axis, values func(func(v float64)), room bool) (low, high float64) {
	if a.From != a.To {
		return a.From, a.To
	}
	low, high = math.Inf(1), math.Inf(-1)
	values(func(v float64) {
		if math.IsNaN(v) || math.IsInf(v, 0) || a.Log && v <= 0 {
			return
		}
		low, high = math.Min(low, v), math.Max(high, v)
	})
	switch {
	case low > high && a.Log:
		return 0.1, 1
	case low > high:
		return 0, 1
	case a.Log:
		return math.Max(low, high/axisDecades) / 1.2, high * 1.5
	}
	if room {
		if low >= 0 && low < 0.6*high {
			low = 0
		}
		if high <= 0 && high > 0.6*low {
			high = 0
		}
		margin := 0.05 * (high - low)
		if low != 0 {
			low -= margin
		}
		if high != 0 {
			high += margin
		}
	}
	if low == high {
		low, high = low-0.5*math.Max(1, math.Abs(low)), high+0.5*math.Max(1, math.Abs(high))
	}
	return low, high
}

// axisDecades is how far down a logarithmic axis reaches.
const axisDecades = 1e7
