package report

import (
	"math"
	"testing"
)

// Goal: marks come to an end on every axis. Method: no range, none with a logarithm, one of a single
// number's spacing, infinite and undefined ends.
func TestTicksEnd(t *testing.T) {
	for _, r := range [][2]float64{
		{0, 1},
		{0, 0},
		{-1, 1},
		{1e17, math.Nextafter(1e17, 2e17)},
		{1e-320, 1e-310},
		{0, math.Inf(1)},
		{math.NaN(), math.NaN()},
		{5, 1},
		{1e-300, 1e300},
	} {
		if list, _ := linearTicks(r[0], r[1], 5); len(list) > mostTicks {
			t.Errorf("%v: %d marks", r, len(list))
		}
		if list := logTicks(r[0], r[1], 5); len(list) > mostTicks {
			t.Errorf("%v, logarithmic: %d marks", r, len(list))
		}
	}
	if list := logTicks(1e15, 1e17, 5); len(list) != 3 {
		t.Errorf("two decades have %d marks, want 3", len(list))
	}
	if list, _ := linearTicks(0, 10, 5); len(list) != 6 {
		t.Errorf("0 to 10 has %d marks, want 6", len(list))
	}
	m := Map{Value: Axis{Log: true}, Z: Numbers{0, 0, math.NaN()}}
	if low, high := m.limits(); !(low > 0 && high > low) {
		t.Errorf("colours of an empty logarithmic map end at %g and %g", low, high)
	}
}
