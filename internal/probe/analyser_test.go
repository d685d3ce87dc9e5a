package probe

import (
	"math"
	"testing"

	"ionfall/internal/rng"
)

// twoPeaks is a known distribution: part and energy and width of two Gaussians.
func twoPeaks() [2][3]float64 { return [2][3]float64{{0.4, 30, 3}, {0.6, 60, 4}} }

func peaksAbove(v float64) float64 {
	sum := 0.0
	for _, p := range twoPeaks() {
		sum += p[0] * aboveGauss(v, p[1], p[2])
	}
	return sum
}

// collectorSweep is the current of an analyser without noise times 1e-8 A, with noise.
func collectorSweep(noise float64, seed uint64) []Sweep {
	stream := rng.Key{Seed: seed, Purpose: rng.Resampling, Chunk: 5}.Stream()
	s := Sweep{Up: true}
	for v := -10.0; v <= 100; v += 0.5 {
		s.Voltage = append(s.Voltage, v)
		s.Current = append(s.Current, 1e-8*(peaksAbove(v)+noise*stream.Normal()))
	}
	return []Sweep{s}
}

// Goal: a known distribution is recovered from the retarding curve. Method: mean, percentiles and
// values at peaks and valley, against the closed form, within 4.5 errors.
func TestAnalyserInversion(t *testing.T) {
	a := &Analyser{Grids: 3, Open: 0.8, Radius: 5e-3, Acceptance: 0.1}
	r, err := ReduceAnalyser(collectorSweep(2e-3, 1), a, Choices{Seed: 1})
	if err != nil {
		t.Fatal(err)
	}
	want := map[string]float64{
		KeyIonEnergy: 0.4*30 + 0.6*60,
		KeyIonFlux:   1e-8 / (1.602176634e-19 * math.Pi * 25e-6 * 0.512),
	}
	for _, key := range []struct {
		key  string
		part float64
	}{{KeyIonP05, 0.05}, {KeyIonP50, 0.5}, {KeyIonP95, 0.95}} {
		lo, hi := 0.0, 100.0
		for range 50 {
			if mid := (lo + hi) / 2; peaksAbove(mid) > 1-key.part {
				lo = mid
			} else {
				hi = mid
			}
		}
		want[key.key] = lo
	}
	for _, q := range r.Quantities {
		if !(math.Abs(q.Value-want[q.Key]) < 4.5*q.SE) || !(q.SE < 0.05*q.Value) {
			t.Errorf("%s: got %.5g +- %.2g, want %.5g", q.Key, q.Value, q.SE, want[q.Key])
		}
	}
	for k, e := range r.Energy {
		exact := 0.0
		for _, p := range twoPeaks() {
			exact += p[0] / p[2] / math.Sqrt(2*math.Pi) * math.Exp(-math.Pow((e-p[1])/p[2], 2)/2)
		}
		if e < 0 || e > 90 {
			continue
		}
		if !(math.Abs(r.Distribution[k]-exact) < 4.5*r.SE[k]+0.03*exact) {
			t.Errorf("at %g eV: got %.3g +- %.2g, want %.3g", e, r.Distribution[k], r.SE[k], exact)
		}
	}
}

// Goal: the response of the analyser. Method: single energies and angles with closed answers.
func TestFold(t *testing.T) {
	a := &Analyser{Grids: 1, Open: 1, Acceptance: 20 * math.Pi / 180, Resolution: 2}
	near(t, "spread at 20 degrees", a.AngularSpread(), 0.12, 0.03)
	near(t, "spread at 10 degrees", (&Analyser{Acceptance: math.Pi / 18}).AngularSpread(), 0.03, 0.01)
	near(t, "channel", Channel(1, 1), math.Pi/4, 1e-12)
	ions := &IonArrival{
		Energy: []float64{50, 50, 50}, Width: []float64{0, 0, 0},
		Angle: []float64{0, math.Pi / 18, math.Pi / 6}, Flux: []float64{2, 1, 7},
	}
	above, flux := a.Fold(ions, []float64{0, 49.24, 50, 60})
	if flux != 3 {
		t.Errorf("flux %g, want 3: 30 degrees are outside", flux)
	}
	cos2 := math.Pow(math.Cos(math.Pi/18), 2)
	sigma := 2 / fwhmPerSigma
	for k, v := range []float64{0, 49.24, 50, 60} {
		want := (2*0.5*math.Erfc((v-50)/sigma/math.Sqrt2) +
			0.5*math.Erfc((v-50*cos2)/sigma/math.Sqrt2)) / 3
		if math.Abs(above[k]-want) > 1e-6 {
			t.Errorf("above %g eV: got %g, want %g", v, above[k], want)
		}
	}
}
