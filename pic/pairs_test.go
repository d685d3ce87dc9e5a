package pic

import (
	"fmt"
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/rng"
	"ionfall/internal/validation"
	"ionfall/mcc"
)

// pairGas is a uniform plasma of two species that stays where it is: no charge, all motion across.
func pairGas(t *testing.T, n int, rate *mcc.PairRate, spread float64) *Simulation {
	t.Helper()
	mass := 10 * phys.AtomicMass
	c := Config{
		Gap: 0.01, Cells: 16, Period: 1e-6, StepsPerPeriod: 10, Scheme: EnergyConserving,
		Species: []Species{
			{Name: "X+", Charge: 1, Mass: mass, Every: 1},
			{Name: "X-", Charge: -1, Mass: mass, Every: 1},
		},
		Weight: 1e16 * 0.01 / float64(n), Chunks: 4, Seed: 7,
		Pairs: []PairReaction{{A: 0, B: 1, Rate: rate}}, PairEvery: 10,
	}
	s, err := New(c)
	if err != nil {
		t.Fatal(err)
	}
	stream := rng.Key{Seed: 3}.Stream()
	for i := range s.species {
		unit := c.VelocityUnit(1)
		for k := range n {
			x := float64(c.Cells) * (float64(k) + 0.5) / float64(n)
			s.species[i].chunks[k%c.Chunks].add(x, 0, spread/unit*stream.Normal(),
				spread/unit*stream.Normal())
		}
	}
	s.redeposit()
	return s
}

// Goal: two species of density n0 that end each other at a constant rate coefficient k decay as
// n0/(1 + k n0 t). Method: k = 1e-13 m3/s, n0 = 1e16 /m3 until half is left, 1e-3 s; 40 000
// particles each, so that chance makes 0.25 % where half is left; bound 1 %.
func TestPairsDecay(t *testing.T) {
	const k, n0, n = 1e-13, 1e16, 40_000
	mass := 10 * phys.AtomicMass
	table := crosssections.Table{}
	for e := 1e-4; e < 20; e *= 1.01 {
		g := math.Sqrt(2 * e * phys.ElementaryCharge / (0.5 * mass))
		table.Energy = append(table.Energy, e)
		table.CrossSection = append(table.CrossSection, k/g)
	}
	s := pairGas(t, n, mcc.NewPairRate(&table, [2]float64{mass, mass}, 10), 500)
	for _, periods := range []int64{250, 250, 500} {
		w := s.workers[0]
		for range periods { // nothing moves, so that no field disturbs
			for c := range s.config.Chunks {
				s.react(w, c)
			}
			w.step += 10
		}
		time := float64(w.step) * s.config.TimeStep()
		left := float64(s.Species()[0].Count())
		if s.Species()[1].Count() != int(left) {
			t.Fatalf("%g and %d particles left, want as many", left, s.Species()[1].Count())
		}
		if want := n / (1 + k*n0*time); math.Abs(left/want-1) > 0.01 {
			t.Errorf("after %.3g s: %g particles left, want %.0f", time, left, want)
		}
		validation.Record(t, "../testdata/validation/gases.json", *update, validation.Row{
			Section:  "ions of opposite charge end each other, k = 1e-13 m3/s, n0 = 1e16 /m3",
			Quantity: fmt.Sprintf("part left after %.3g s", time), Unit: "",
			Reference: 1 / (1 + k*n0*time), Source: "n = n0/(1 + k n0 t)", Status: "exact",
			Ours: left / n, OursError: math.Sqrt(left*(1-left/n)) / n, Limit: 0.01,
			LimitKind: validation.Relative, Seed: 7,
		})
	}
	l := s.TakeLedger()
	if l.Species[0].Gone != n-l.Species[0].Count {
		t.Errorf("the ledger says %d of %d gone", l.Species[0].Gone, n-l.Species[0].Count)
	}
}

// Goal: a cross section of the form C/E gives the rate coefficient k(T) it was made for. Method: the
// mean of sigma g over a Maxwellian of relative speeds, by sums, against k0 (300/T)^0.5.
func TestPairRateOfTemperature(t *testing.T) {
	gas := testingPair(t)
	masses := gas.Masses
	r := mcc.NewPairRate(&gas.Table, masses, 10)
	mu := masses[0] * masses[1] / (masses[0] + masses[1])
	for _, kelvin := range []float64{300, 1000, 3000} {
		spread := math.Sqrt(phys.Boltzmann * kelvin / mu)
		sum, norm := 0.0, 0.0
		for i := range 4000 {
			u := 8 * (float64(i) + 0.5) / 4000
			w := u * u * math.Exp(-0.5*u*u)
			sum += w * r.At(u*spread)
			norm += w
		}
		want := 1e-13 * math.Sqrt(300/kelvin)
		if got := sum / norm; math.Abs(got/want-1) > 0.01 {
			t.Errorf("%g K: %.4g m3/s, want %.4g", kelvin, got, want)
		}
	}
}

// testingPair is a pair of 1e-13 m3/s at 300 K.
func testingPair(t *testing.T) crosssections.Pair {
	t.Helper()
	a := crosssections.Ion{Name: "X+", Mass: 30 * phys.AtomicMass, Charge: 1}
	b := crosssections.Ion{
		Name: "X-", Mass: 30 * phys.AtomicMass, Charge: -1,
		Affinity: crosssections.Datum{Value: math.Pow(5.34/math.Sqrt(15), 2.5)},
	}
	p, ok := crosssections.DefaultNeutralization(a, b)
	if !ok {
		t.Fatal("no formula")
	}
	return p
}

// Goal: more or fewer negative ions leave the charge where it is. Method: the net charge of all
// cells before and after.
func TestScaleNegative(t *testing.T) {
	table := crosssections.Table{Energy: []float64{1e-4, 10}, CrossSection: []float64{0, 0}}
	mass := 10 * phys.AtomicMass
	rate := mcc.NewPairRate(&table, [2]float64{mass, mass}, 10)
	for _, factor := range []float64{0.3, 0.9, 1.4, 2.6} {
		s := pairGas(t, 4000, rate, 500)
		s.ScaleNegative(1, factor)
		a, b := s.Species()[0].Count(), s.Species()[1].Count()
		if a != b || math.Abs(float64(b)/4000/factor-1) > 0.1 {
			t.Errorf("times %g: %d and %d particles of 4000", factor, a, b)
		}
		cells := make([]int, 16)
		for i, sp := range s.Species() {
			for c := range sp.chunks {
				for _, x := range sp.chunks[c].x {
					cells[int(x)] += s.species[i].Charge
				}
			}
		}
		for j, q := range cells {
			if q != 0 {
				t.Errorf("times %g: charge %d in cell %d", factor, q, j)
			}
		}
	}
}
