package probe

import (
	"strings"
	"testing"
)

// Goal: no number where the knee cannot be told. Method: two temperatures and a straight rise above
// the plasma potential that is hardly flatter than the exponential part below.
func TestNoForm(t *testing.T) {
	s := plasmas()["two temperatures"]
	s.slope = 0.6
	setup := argonSetup()
	r, err := Reduce(s.make(setup, 2), setup, Choices{Seed: 2, Resamplings: 10})
	if err != nil {
		t.Fatal(err)
	}
	for _, key := range []string{KeyElectronDensity, KeyIonDensity, KeyTemperature, KeyPlasma} {
		if q := r.Get(key); q.Known() || !strings.Contains(q.Reason, "no form fits") {
			t.Errorf("%s: got %.3g +- %.2g, %q, want none", key, q.Value, q.SE, q.Reason)
		}
	}
	if !r.Get(KeyFloating).Known() {
		t.Error("the floating potential needs no form")
	}
}
