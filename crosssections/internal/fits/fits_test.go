package fits

import (
	"math"
	"testing"
)

// Goal: the bars of the argon formula enclose the first two terms only. Method: at 10 eV the
// printed value is 14.8e-20 m2; with all four terms inside it would be 80 times smaller.
func TestArgonBars(t *testing.T) {
	if got := ArgonElastic(10); math.Abs(got-14.8e-20) > 0.05e-20 {
		t.Errorf("got %g m2, want 14.8e-20", got)
	}
	inside := math.Abs(ArgonAmplitude(10) + 0.05/4 + 0.01*1e3/(1+math.Pow(10./12, 6)))
	if inside > 0.2 {
		t.Errorf("all terms inside: got %ge-20, want 0.18e-20: the formula has changed", inside)
	}
}

// Goal: nothing at and below the thresholds. Method: their edges.
func TestThresholds(t *testing.T) {
	for name, c := range map[string]struct {
		f         func(float64) float64
		threshold float64
	}{
		"argon excitation":  {ArgonExcitation, 11.5},
		"argon ionization":  {ArgonIonization, 15.8},
		"helium ionization": {HeliumIonizationBEB, 24.587},
	} {
		if below, above := c.f(c.threshold), c.f(c.threshold+1e-6); below != 0 || above <= 0 {
			t.Errorf("%s: %g at the threshold, %g above", name, below, above)
		}
	}
}
