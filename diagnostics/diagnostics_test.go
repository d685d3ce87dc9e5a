package diagnostics

import (
	"math"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/table"
	"ionfall/pic"
)

// quiet builds a plasma at rest between two electrodes at 0 V: electrons at 3 eV and heavy ions
// that hardly move.
func quiet(t *testing.T, particles, steps int) *pic.Simulation {
	t.Helper()
	c := pic.Config{
		Gap: 0.02, Cells: 40, Period: 1 / 13.56e6, StepsPerPeriod: steps, Chunks: 4, Seed: 1,
		Drive:  pic.Drive{Tones: []pic.Tone{{Harmonic: 1, Amplitude: 1e-6}}},
		Weight: 1e14 * 0.02 / float64(particles),
		Species: []pic.Species{
			{Name: "e", Charge: -1, Mass: phys.ElectronMass, Every: 1},
			{Name: "X+", Charge: 1, Mass: 40 * phys.AtomicMass, Every: 1},
		},
	}
	s, err := pic.New(c)
	if err != nil {
		t.Fatal(err)
	}
	uniform := make([]float64, c.Cells+1)
	for j := range uniform {
		uniform[j] = 1
	}
	for i, kelvin := range []float64{3 * phys.ElementaryCharge / phys.Boltzmann, 300} {
		if err := s.Load(i, particles, uniform, kelvin); err != nil {
			t.Fatal(err)
		}
	}
	return s
}

func floats(t *testing.T, tab *table.Table, name string) []float64 {
	t.Helper()
	v, err := tab.Floats(name)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// Goal: density, temperature and EEPF of a known plasma. Method: a uniform Maxwellian at 3 eV is
// sampled at step 0 alone, before anything moves: 400 000 independent electrons, of which a
// quarter is looked at and a tenth is in the centre. Bounds are five standard errors (one false
// alarm in 1.7e6 each): the relative error of an energy is sqrt(2/3) over the root of their number,
// that of the EEPF binomial.
func TestKnownPlasma(t *testing.T) {
	const particles, seen, steps = 400_000, 400_000 / sampleParts, 400
	s := quiet(t, particles, steps)
	r := New(s, nil, 0)
	s.SetObservers(&onlyFirst{r})
	r.Start(1)
	if err := s.Advance(1); err != nil {
		t.Fatal(err)
	}
	// One step is all there is: every phase bin is given the same.
	for p := range r.samples {
		copyPhase(r, p)
	}
	r.batch = 1
	r.EndPeriod(s.Config().Weight)

	density := floats(t, r.Profiles(), "electron_density_m3")
	for j, n := range density {
		if math.Abs(n/1e14-1) > 0.005 { // the quiet start: half a particle of 10 000 a cell, doubled at walls
			t.Errorf("density at node %d is %.4g, want 1e14", j, n)
		}
	}
	te := r.averages.centerEnergy[0] / r.averages.centerDensity[0] * 2 / 3
	if want := 5 * math.Sqrt(2.0/3/(centerPart*seen)); math.Abs(te/3-1) > want {
		t.Errorf("temperature in the centre %.4f eV, want 3 within %.2g", te, want)
	}
	energy := floats(t, r.ElectronEnergy(), "energy_eV")
	f := floats(t, r.ElectronEnergy(), "eepf_eVm32")
	n := r.eBins.count()
	gap := 3 * n // the last region is the whole gap
	norm := 0.0
	for k := range n {
		part := rootIntegral(r.eBins.edges[k], r.eBins.edges[k+1])
		norm += f[gap+k] * part
		want := 2 / math.Sqrt(math.Pi) * math.Pow(3, -1.5) * math.Exp(-energy[gap+k]/3)
		expected := want * part * seen
		if expected > 50 && math.Abs(f[gap+k]-want) > 5*want/math.Sqrt(expected)+0.002*want {
			t.Errorf("EEPF at %.2f eV is %.4g, want %.4g", energy[gap+k], f[gap+k], want)
		}
	}
	if math.Abs(norm-1) > 1e-12 {
		t.Errorf("the integral of sqrt(E) EEPF is %.15g", norm)
	}
}

// onlyFirst lets the recorder see step 0 alone.
type onlyFirst struct{ *Recorder }

func (o *onlyFirst) Due(n int64) bool { return n == 0 }

// copyPhase gives phase bin p the sums of bin 0.
func copyPhase(r *Recorder, p int) {
	nodes := r.config.Cells + 1
	r.samples[p], r.steps[p] = r.samples[0], 1
	for _, sums := range r.grid {
		copy(sums[p*nodes:(p+1)*nodes], sums[:nodes])
	}
}

// Goal: phases and chunks are not biased. Method: over Stride x sampleParts periods each step of the
// period must be due exactly once for every part of the chunks, for periods with many and few
// divisors; and after periodsToSee every bin is seen.
func TestSamplingCoversThePeriod(t *testing.T) {
	for _, steps := range []int{20, 25, 64, 100, 256, 400, 960, 1200, 1376, 4096} {
		s := quiet(t, 100, steps)
		r := New(s, nil, 0)
		r.Start(1)
		seen := make([][sampleParts]int, steps)
		for n := range int64(steps) * r.stride * sampleParts {
			if r.Due(n) {
				seen[n%int64(steps)][r.part(n)]++
			}
		}
		for step, n := range seen {
			if n != [sampleParts]int{1, 1, 1, 1} {
				t.Fatalf("%d steps, stride %d: step %d is sampled %d times", steps, r.stride, step, n)
			}
		}
		if short := New(s, nil, 20); short.periodsToSee() != 1 {
			t.Errorf("%d steps: a short average sees every phase in %d periods only", steps,
				short.periodsToSee())
		}
		total := 0
		for p := range r.phases {
			total += r.stepsIn(p)
		}
		if total != steps {
			t.Errorf("%d steps: the phase bins hold %d", steps, total)
		}
	}
}

// Goal: what arrives is sorted right and nothing is lost. Method: hits of known energies and angles
// are handed over, on bin edges and far beyond the table.
func TestHitsAreSorted(t *testing.T) {
	s := quiet(t, 100, 100)
	r := New(s, []float64{20, 50}, 0)
	r.Start(1)
	rec := r.species[1]
	hit := func(energyEV, angleDeg float64, wall pic.Wall) pic.Hit {
		v := math.Sqrt(energyEV / rec.eVPerV2)
		a := angleDeg * math.Pi / 180
		return pic.Hit{Wall: wall, VX: v * math.Cos(a), VY: v * math.Sin(a) * 0.6, VZ: -v * math.Sin(a) * 0.8}
	}
	r.Hits(1, 0, []pic.Hit{hit(10.05, 3.5, pic.Grounded), hit(30, 45.5, pic.Grounded)})
	r.Hits(1, 3, []pic.Hit{hit(60, 0, pic.Grounded), hit(1e6, 89.9, pic.Grounded), hit(5, 10, pic.Powered)})
	rec.flush(&pic.Config{}, 2)
	im := rec.impacts[pic.Grounded]
	if im.counts[0] != 8 || math.Abs(im.energy[0]-2*(10.05+30+60+1e6)) > 1e-3 {
		t.Errorf("%g ions, %g eV", im.counts[0], im.energy[0])
	}
	if im.above[0][0] != 6 || im.above[1][0] != 4 {
		t.Errorf("above the thresholds: %g and %g", im.above[0][0], im.above[1][0])
	}
	sum := 0.0
	for k, f := range im.spectrum {
		sum += f
		inside := im.energies.edges[k] <= 10.05 && 10.05 < im.energies.edges[k+1]
		if inside && f != 2 {
			t.Errorf("the bin of 10.05 eV holds %g", f)
		}
	}
	angles := make([]float64, angleBins)
	for k, f := range im.angles {
		angles[k%angleBins] += f
	}
	if sum != 8 || angles[3] != 2 || angles[45] != 2 || angles[0] != 2 || angles[89] != 2 {
		t.Errorf("spectrum sums to %g, angles %v", sum, angles)
	}
	if rec.impacts[pic.Powered].counts[0] != 2 {
		t.Error("the powered electrode's ion is missing")
	}
}

func TestBins(t *testing.T) {
	for _, b := range []*bins{uniformBins(355, 400), uniformBins(0.7, 40), electronBins(60), electronBins(400)} {
		for k := range b.count() {
			if b.width(k) <= 0 {
				t.Fatalf("bin %d of %v is empty", k, b.edges)
			}
			for _, part := range []float64{0.01, 0.5, 0.99} {
				e := b.edges[k] + part*b.width(k)
				if got := b.find(e); got != k {
					t.Errorf("%g eV goes to bin %d (from %g), want %d (from %g)", e, got, b.edges[got],
						k, b.edges[k])
				}
			}
		}
		if b.find(1e9) != b.count()-1 || b.find(0) != 0 {
			t.Error("the ends are not held")
		}
	}
}

// Goal: the electron edge is exact for steps and second order else (R. P. Brinkmann, J. Appl.
// Phys. 102, 093303 (2007)).
func TestElectronEdge(t *testing.T) {
	const n = 1001
	for _, at := range []float64{0, 0.2004, 0.5} {
		electrons, positive := make([]float64, n), make([]float64, n)
		for j := range electrons {
			x := float64(j) / (n - 1)
			positive[j] = 1
			if x > at {
				electrons[j] = 1
			}
		}
		s := ElectronEdge(electrons, positive) / (n - 1)
		if math.Abs(s-at) > 1.0/(n-1) {
			t.Errorf("edge at %g, want %g within a node", s, at)
		}
	}
	// Ions 1 + x, electrons zero below 0.3 and equal to the ions above, falling by a ramp of width w
	// around it: the ramp's centre of charge is the edge.
	electrons, positive := make([]float64, n), make([]float64, n)
	const a, w = 0.3, 0.1
	for j := range electrons {
		x := float64(j) / (n - 1)
		positive[j] = 1
		electrons[j] = math.Max(0, math.Min(1, (x-a+w/2)/w))
	}
	if s := ElectronEdge(electrons, positive) / (n - 1); math.Abs(s-a) > 1e-6 {
		t.Errorf("edge of a ramp at %.7f, want %g", s, a)
	}
}
