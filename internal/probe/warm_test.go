package probe

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"ionfall/internal/phys"
)

// Goal: warm ions do not spoil the ion density unseen. Method: a sweep to a thick tip with ions of a
// tenth of the electrons' temperature, reduced with that temperature (within 4.5 errors) and without
// it: too high by what the note says, to 0.5 % of the density and 4.5 errors of noise.
func TestReduceWarmIons(t *testing.T) {
	s := plasmas()["Maxwellian"]
	s.density, s.noise = 1e17, 2e-4
	setup := argonSetup()
	setup.Radius = 250e-6 // six Debye lengths
	setup.IonTemperature = 0.1 * s.temperature * phys.ElementaryCharge / phys.Boltzmann
	sweeps := s.make(setup, 4)
	const note = "were taken to be as warm as the gas"
	reduced := func() (Quantity, string) {
		r, err := Reduce(sweeps, setup, Choices{Seed: 4, Resamplings: 20})
		if err != nil {
			t.Fatal(err)
		}
		return r.Get(KeyIonDensity), strings.Join(r.Notes, "\n")
	}
	known, text := reduced()
	if z := (known.Value - s.density) / known.SE; !(math.Abs(z) < 4.5) ||
		!(known.SE < 0.02*s.density) {
		t.Errorf("got %.4g +- %.2g, want %.4g", known.Value, known.SE, s.density)
	}
	if strings.Contains(text, note) {
		t.Error("the ion temperature is known, and yet there is the note")
	}
	setup.IonTemperature = 0
	cold, text := reduced()
	_, text, found := strings.Cut(text, note)
	var tau, tenth, lower float64
	if _, err := fmt.Sscanf(text, ", %g of the electrons' temperature; at %g of it the ion density "+
		"would be %g", &tau, &tenth, &lower); err != nil || !found {
		t.Fatalf("no note: %q, %v", text, err)
	}
	if bias := cold.Value/known.Value - 1; !(lower > 1) ||
		!(math.Abs(bias-lower/100) < 0.005+4.5*cold.SE/cold.Value) {
		t.Errorf("too high by %.2f %%, said to be %.2g %%", 100*bias, lower)
	}
	t.Logf("known %.4g +- %.2g, cold %.4g +- %.2g, said %.2g %%", known.Value, known.SE, cold.Value,
		cold.SE, lower)
}
