package mcc

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/stats"
)

// quickSwarm is a swarm of argon that takes a tenth of a second.
func quickSwarm(seed uint64) SwarmSettings {
	return SwarmSettings{
		Projectile: "e", Field: 300, Particles: 512, RelativeError: 0.05, Seed: seed,
	}
}

// argonSwarm is cold argon at the density of the swarms here.
func argonSwarm(t testing.TB) Background {
	b := gasAtRest(bundled(t, "Ar"))
	b.Density = swarmDensity
	return b
}

// Goal: the result does not depend on the number of workers. Method: every number of the result
// with 1, 2 and 7, in a case with thinning.
func TestSwarmDoesNotDependOnWorkers(t *testing.T) {
	var first SwarmResult
	for i, workers := range []int{1, 2, 7} {
		set := quickSwarm(3)
		set.Workers = workers
		r := mustSwarm(t, set, argonSwarm(t))
		if r.Run.Thinnings == 0 {
			t.Fatal("no thinning: the case is too easy")
		}
		if i == 0 {
			first = r
			continue
		}
		if diff := cmp.Diff(first, r, cmpopts.EquateNaNs()); diff != "" {
			t.Errorf("%d workers: %s", workers, diff)
		}
	}
}

// Goal: reduced coefficients do not depend on the density, and mixing a gas with itself
// changes nothing. Method: joint errors of 4.
func TestSwarmScalesWithDensity(t *testing.T) {
	a := mustSwarm(t, quickSwarm(4), argonSwarm(t))
	thin, part := argonSwarm(t), argonSwarm(t)
	thin.Density, part.Density = 0.3e19, 0.7e19
	b := mustSwarm(t, quickSwarm(5), thin, part)
	for _, q := range swarmQuantities() {
		x, y := q.of(&a), q.of(&b) // zero without error where argon has no such process
		if !(math.Abs(x.Mean-y.Mean) <= 4*math.Hypot(x.StdErr, y.StdErr)) {
			t.Errorf("%s: %g +- %g and %g +- %g", q.name, x.Mean, x.StdErr, y.Mean, y.StdErr)
		}
	}
	if len(b.Rates) != 6 || b.Rates[3].Process != "elastic" || b.Rates[3].Gas != "Ar" {
		t.Fatalf("rates of the mixture: %+v", b.Rates)
	}
	for i, r := range b.Rates {
		x, y := a.Rates[i%3].Rate, r.Rate
		if !(math.Abs(x.Mean-y.Mean) < 4*math.Hypot(x.StdErr, y.StdErr)) {
			t.Errorf("%s: %g +- %g and %g +- %g", r.Process, x.Mean, x.StdErr, y.Mean, y.StdErr)
		}
	}
}

// Goal: quoted errors are true. Method: the squared deviations of 24 seeds from their weighted
// mean, in quoted errors, are chi-square with 23 degrees of freedom if they are; errors
// from ten windows scatter themselves by a quarter, which allows twice the quantile of 1e-6.
func TestSwarmErrorsAreTrue(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some seconds")
	}
	const seeds = 24
	results := make([]SwarmResult, seeds)
	for i := range results {
		results[i] = mustSwarm(t, quickSwarm(uint64(100+i)), argonSwarm(t))
	}
	for _, q := range swarmQuantities() {
		var sum, square, quoted float64
		for i := range results {
			e := q.of(&results[i])
			sum += e.Mean
			square += e.Mean * e.Mean
			quoted += e.StdErr * e.StdErr
		}
		if square == 0 && quoted == 0 {
			continue // argon has no such process
		}
		variance := (square - sum*sum/seeds) / (seeds - 1)
		ratio := variance / (quoted / seeds)
		t.Logf("%s: spread over quoted error %.2f", q.name, math.Sqrt(ratio))
		// Quantiles 1e-6 and 1-1e-6 of chi-square over 23 are 0.17 and 3.1.
		if !(ratio < 2*3.1 && ratio > 0.17/2) {
			t.Errorf("%s: the spread of seeds is %.2f of the quoted error", q.name, math.Sqrt(ratio))
		}
	}
}

// Goal: thinning keeps every subset of the size with the same chance, deals evenly, and loses or
// doubles nothing. Method: numbered particles, counted over many thinnings.
func TestThinning(t *testing.T) {
	const n, keep, rounds = 160, 100, 4000
	counts := make([]int, n)
	for round := range rounds {
		w := &swarm{set: SwarmSettings{Seed: uint64(round)}}
		for i := range n {
			x := float64(i)
			w.chunks[i%5].add(x, 2*x, 3*x, 4*x, 5*x, 6*x) // unevenly: 5 of the chunks
		}
		w.thin(keep, func(int) bool { return true })
		total := 0
		for i := range w.chunks {
			c := &w.chunks[i]
			if d := len(c.vx) - keep/swarmChunks; d != 0 && d != 1 {
				t.Fatalf("chunk %d got %d particles", i, len(c.vx))
			}
			for k, x := range c.vx {
				if c.vy[k] != 2*x || c.vz[k] != 3*x || c.x[k] != 4*x || c.y[k] != 5*x ||
					c.z[k] != 6*x {
					t.Fatal("a particle was mixed with another")
				}
				counts[int(x)]++
				total++
			}
		}
		if total != keep {
			t.Fatalf("%d left, want %d", total, keep)
		}
	}
	// Each is kept in a Binomial(rounds, keep/n); chi-square of n-1 degrees with the variance
	// of a choice without replacement.
	const p = float64(keep) / n
	sum := 0.0
	for _, c := range counts {
		d := float64(c) - rounds*p
		sum += d * d / (rounds * p * (1 - p)) * (n - 1) / n
	}
	if bound := float64(n-1) + 6*math.Sqrt(2*(n-1)); sum > bound {
		t.Errorf("chi-square %.0f, want below %.0f", sum, bound)
	}
}

// Goal: everything wrong is said at once. Method: the whole text.
func TestSwarmSettingsAreChecked(t *testing.T) {
	b := argonSwarm(t)
	b.Density, b.Temperature = 0, -1
	_, err := Swarm(context.Background(), []Background{b}, SwarmSettings{
		Projectile: "Xx+", Field: -1, RelativeError: -1, RateError: -1, MaxSteps: -1,
		Particles: 10, Step: 1,
	})
	want := `swarm: mass of "Xx+": got 0 kg, want more than 0 or an ion the gas declares
swarm: field: got -1 Td, want 0 to 1e6 Td
swarm: relative error: got -1, want more than 0
swarm: rate error: got -1, want 0 or more
swarm: steps: got -1, want more than 0
swarm: particles: got 10, want 256 to 10000000
swarm: step: got 1, want more than 0 and at most 0.7
swarm: density of Ar: got 0 /m3, want more than 0
swarm: temperature of Ar: got -1 K, want 0 to 1e5 K`
	if err == nil || err.Error() != want {
		t.Errorf("got %v", err)
	}
	if _, err := Swarm(context.Background(), nil, SwarmSettings{Projectile: "e"}); err == nil ||
		err.Error() != "swarm: no gas" {
		t.Errorf("no gas: %v", err)
	}
}

// Goal: a swarm ends early with a reason. Method: a budget too small to relax, one too small for
// the error asked for, and a context that was cancelled.
func TestSwarmEndsEarly(t *testing.T) {
	b := []Background{argonSwarm(t)}
	set := quickSwarm(6)
	set.MaxSteps = 600
	if _, err := Swarm(context.Background(), b, set); err == nil ||
		!strings.Contains(err.Error(), "swarm: e at 300 Td is not relaxed after") {
		t.Errorf("small budget: %v", err)
	}
	set.MaxSteps, set.RelativeError = 20_000, 1e-9
	if r := mustSwarm(t, set, b...); r.Run.Reached || r.Run.Steps > set.MaxSteps {
		t.Errorf("an error of 1e-9 is called reached, or %d steps were taken", r.Run.Steps)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Swarm(ctx, b, set); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
}

// Goal: energies past the data are reported. Method: cross sections that end at 20 eV, in a
// field that drives a part of the electrons beyond; the elastic table ends last.
func TestSwarmReportsExtrapolation(t *testing.T) {
	b := argonSwarm(t)
	for i := range b.Gas.Electron {
		table := &b.Gas.Electron[i].Table
		table.ValidTo = 20
	}
	r := mustSwarm(t, quickSwarm(7), b)
	share := 0.0
	for i, f := range r.Energies.EEPF {
		if r.Energies.CenterEV(i) > 20 {
			share += f * binVolume(&r, i)
		}
	}
	if r.Extrapolated < 0.5*share || r.Extrapolated > 2*share || share == 0 {
		t.Errorf("%g of the collisions extrapolated, with %g of the electrons above 20 eV",
			r.Extrapolated, share)
	}
	if whole := mustSwarm(t, quickSwarm(7), argonSwarm(t)); whole.Extrapolated != 0 {
		t.Errorf("%g extrapolated where the tables reach", whole.Extrapolated)
	}
}

// Goal: the distribution is normalized and has the mean energy of the swarm. Method: its
// integrals; bins are narrow, so that their centres serve within a percent.
func TestSwarmDistribution(t *testing.T) {
	r := mustSwarm(t, quickSwarm(8), argonSwarm(t))
	var norm, energy float64
	for i, f := range r.Energies.EEPF {
		norm += f * binVolume(&r, i)
		energy += f * binVolume(&r, i) * r.Energies.CenterEV(i)
	}
	if math.Abs(norm+r.Beyond-1) > 1e-9 {
		t.Errorf("norm %.12g, want 1", norm)
	}
	if math.Abs(energy/r.MeanEnergy.Mean-1) > 0.01 {
		t.Errorf("mean energy %g of the distribution, %g of the swarm", energy, r.MeanEnergy.Mean)
	}
}

// Goal: the root of the quadratic, and its error. Method: a case with round numbers,
// D a^2 - W a + nu = 0 at a = 2 for D = 1, W = 5, nu = 6, and derivatives by differences.
func TestTownsend(t *testing.T) {
	of := func(w, d, nu float64) stats.Estimate {
		return townsendOf(stats.Estimate{Mean: w, StdErr: 0.01},
			stats.Estimate{Mean: d, StdErr: 0.02}, stats.Estimate{Mean: nu, StdErr: 0.03})
	}
	e := of(5, 1, 6)
	const h = 1e-6
	slope := func(w, d, nu float64) float64 {
		return (of(5+w, 1+d, 6+nu).Mean - of(5-w, 1-d, 6-nu).Mean) / (2 * h)
	}
	want := math.Sqrt(sum2(0.01*slope(h, 0, 0), 0.02*slope(0, h, 0), 0.03*slope(0, 0, h)))
	if math.Abs(e.Mean-2) > 1e-12 || math.Abs(e.StdErr-want) > 1e-6 {
		t.Errorf("got %g +- %g, want 2 +- %g", e.Mean, e.StdErr, want)
	}
	if e := of(4, 1, 6); !math.IsNaN(e.Mean) {
		t.Errorf("no stationary beam, yet %g", e.Mean)
	}
	if e := of(4, 1, 0); e.Mean != 0 || e.StdErr != 0 {
		t.Errorf("no ionization, yet %g +- %g", e.Mean, e.StdErr)
	}
}

// Goal: the balance of one particle gives the scale. Method: a constant frequency nu and mass
// ratio, where W = qE/(mu nu) and the energy is Wannier's; the estimate is that of
// a particle without its own thermal motion, so within a factor of 2.
func TestBalanceEnergy(t *testing.T) {
	const nu, drift = modelFrequency, 500.0
	mass := 40 * phys.AtomicMass
	b := maxwellModel(crosssections.Isotropic, "X+", mass, mass, 0)
	b.Gas.IonNeutral[0].Frame = crosssections.Lab
	m, err := NewModel(Settings{
		Projectile: "X+", Mass: mass, Unit: 1, TimeStep: 1e-12, TopEnergy: 1,
	}, []Background{b})
	if err != nil {
		t.Fatal(err)
	}
	got, want := m.balanceEnergy(drift*nu*mass/2, 0), wannierEnergy(mass, mass, 0, drift)
	if got < want/2 || got > 2*want {
		t.Errorf("got %g eV, want about %g eV", got, want)
	}
}

// Goal: following a swarm allocates nothing but room for its growth. Method: blocks of ions,
// whose number does not change.
func TestSwarmBlockAllocatesNothing(t *testing.T) {
	b := bundled(t, "Ar")
	w, err := newSwarm([]Background{b}, SwarmSettings{
		Projectile: "Ar+", Field: 100, Charge: 1, Particles: 512, Step: 0.1, Workers: 1,
		Mass: b.Gas.Ions[0].Mass,
	})
	if err != nil {
		t.Fatal(err)
	}
	if n := testing.AllocsPerRun(5, func() {
		if err := w.advance(context.Background(), 20, 5); err != nil {
			t.Fatal(err)
		}
	}); n > 2*swarmChunks { // streams and closures
		t.Errorf("%g allocations in a block of 20 steps of 16 chunks", n)
	}
}

func BenchmarkSwarmBlock(b *testing.B) {
	w, err := newSwarm([]Background{argonSwarm(b)}, SwarmSettings{
		Projectile: "e", Mass: phys.ElectronMass, Field: 10, Charge: 1, Particles: 2048, Step: 0.1,
		Workers: 1,
	})
	if err != nil {
		b.Fatal(err)
	}
	const steps = 100
	for b.Loop() {
		if err := w.advance(context.Background(), steps, 5); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*steps*2048), "ns/particle-step")
}
