package mcc

import (
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/rng"

	"gonum.org/v1/gonum/stat/distuv"
)

// falseAlarm is the chance of one statistical check to fail although the code is right. The
// package makes fewer than 100 of them, so a false alarm of the whole has a chance below 1e-6.
// Seeds are fixed: a check that passes once passes always.
const falseAlarm = 1e-8

// normalBound returns the two-sided bound of a normal deviate, in standard deviations.
func normalBound() float64 { return distuv.UnitNormal.Quantile(1 - falseAlarm/2) }

// checkMean fails if got is farther from want than chance allows.
func checkMean(t *testing.T, name string, got, want, stdErr float64) {
	t.Helper()
	if !(math.Abs(got-want) <= normalBound()*stdErr) {
		t.Errorf("%s: %.8g, want %.8g +- %.2g (%.1f standard errors away, bound %.2f)",
			name, got, want, stdErr, math.Abs(got-want)/stdErr, normalBound())
	}
}

// checkChiSquare compares counts with expectations that add up to the same total.
func checkChiSquare(t *testing.T, name string, counts []int, want []float64) {
	t.Helper()
	sum := 0.0
	for i, w := range want {
		d := float64(counts[i]) - w
		sum += d * d / w
	}
	bound := distuv.ChiSquared{K: float64(len(want) - 1)}.Quantile(1 - falseAlarm)
	if !(sum <= bound) {
		t.Errorf("%s: chi-square %.1f with %d bins, bound %.1f", name, sum, len(want), bound)
	}
}

// equalBins is the expectation of n counts over bins of equal probability.
func equalBins(n, bins int) []float64 {
	want := make([]float64, bins)
	for i := range want {
		want[i] = float64(n) / float64(bins)
	}
	return want
}

// stream returns the random numbers of a test.
func stream(seed uint64) *rng.Stream {
	s := rng.Key{Seed: seed, Purpose: rng.Collisions}.Stream()
	return &s
}

// tabulate makes a table of sigma [m2] against energy [eV] with rows 0.5 % apart.
func tabulate(threshold, topEV float64, sigma func(energyEV float64) float64) crosssections.Table {
	t := crosssections.Table{Onset: threshold}
	for e := max(threshold, 1e-7); e < 1.005*topEV; e *= 1.005 {
		t.Energy = append(t.Energy, e)
		t.CrossSection = append(t.CrossSection, sigma(e))
	}
	return t
}

// constant is a cross section that does not depend on energy.
func constant(sigma float64) func(float64) float64 {
	return func(float64) float64 { return sigma }
}

// inverseSpeed is the cross section that gives n sigma g = nu for a pair of the given reduced
// mass (or projectile's mass, by the frame) at density n.
func inverseSpeed(nu, density, mass float64) func(float64) float64 {
	return func(energyEV float64) float64 {
		g := math.Sqrt(2 * energyEV * phys.ElementaryCharge / mass)
		return nu / (density * g)
	}
}

// process is a hand-made process.
func process(name, projectile string, kind crosssections.Kind, thresholdEV float64,
	table crosssections.Table,
) crosssections.Process {
	return crosssections.Process{
		Name: name, Projectile: projectile, Kind: kind, Threshold: thresholdEV, Table: table,
	}
}

// background is a hand-made gas of density 1e20 /m3.
func background(mass, temperature float64, list ...crosssections.Process) Background {
	gas := &crosssections.Gas{Name: "X", Mass: mass}
	for _, p := range list {
		if p.Projectile == "e" {
			gas.Electron = append(gas.Electron, p)
		} else {
			gas.IonNeutral = append(gas.IonNeutral, p)
		}
	}
	return Background{Gas: gas, Density: testDensity, Temperature: temperature}
}

const (
	testDensity = 1e20   // [1/m3]
	testUnit    = 1234.5 // velocity unit [m/s]; no special value, so that a forgotten unit shows
)

// mustModel makes a model of the projectile "e" or "X+" with the given candidates a step.
func mustModel(t testing.TB, projectile string, mass, topEV, rate float64,
	gas ...Background,
) *Model {
	t.Helper()
	set := Settings{
		Projectile: projectile, Mass: mass, Unit: testUnit, TimeStep: 1e-15, TopEnergy: topEV,
	}
	m, err := NewModel(set, gas)
	if err != nil {
		t.Fatal(err)
	}
	set.TimeStep *= rate / m.CandidateRate()
	if m, err = NewModel(set, gas); err != nil {
		t.Fatal(err)
	}
	return m
}

// bundled returns a gas of the bundled library at 5 Pa and 300 K.
func bundled(t testing.TB, name string) Background {
	t.Helper()
	lib, err := crosssections.Bundled()
	if err != nil {
		t.Fatal(err)
	}
	gas, err := lib.Gas(name)
	if err != nil {
		t.Fatal(err)
	}
	return Background{Gas: gas, Density: 5 / (phys.Boltzmann * 300), Temperature: 300}
}

type vector [3]float64

func (a vector) add(s float64, b vector) vector {
	return vector{a[0] + s*b[0], a[1] + s*b[1], a[2] + s*b[2]}
}

func (a vector) dot(b vector) float64 { return a[0]*b[0] + a[1]*b[1] + a[2]*b[2] }

func (a vector) norm() float64 { return math.Sqrt(a.dot(a)) }

func (a vector) scale(s float64) vector { return vector{}.add(s, a) }

func (a vector) cross(b vector) vector {
	return vector{
		a[1]*b[2] - a[2]*b[1], a[2]*b[0] - a[0]*b[2], a[0]*b[1] - a[1]*b[0],
	}
}

// collision is one collision of one particle, with the target's velocity before it.
type collision struct {
	before, after, target vector
	channel               int
	births                []Birth
	made                  []Made
}

// single collides a particle of velocity v (in units) until exactly one collision takes place in
// a step.
func single(m *Model, s *rng.Stream, v vector) collision {
	for {
		again := *s
		out := m.NewOutcome()
		x, y, z := []float64{v[0]}, []float64{v[1]}, []float64{v[2]}
		m.Collide(s, x, y, z, out)
		total, channel := int64(0), 0
		for c, n := range out.Counts {
			if n > 0 {
				total, channel = total+n, c
			}
		}
		if total != 1 {
			continue
		}
		return collision{
			before: v, after: vector{x[0], y[0], z[0]}, target: replay(m, &again, v),
			channel: channel, births: out.Births, made: out.Made,
		}
	}
}

// replay draws the target's velocity of the first collision again, in the order of Collide:
// candidate, channel's number, then the target unless the number is above every ceiling.
func replay(m *Model, s *rng.Stream, v vector) vector {
	gr := &m.groups[0]
	gap := 1 / m.rate
	for at := s.Exponential() * gap; at < 1; { // the candidates of the one particle come first
		at += s.Exponential() * gap
	}
	for {
		u := s.Float64()
		if !gr.table.mayCollide(v.norm(), u) {
			continue
		}
		target := vector{gr.thermal * s.Normal(), gr.thermal * s.Normal(), gr.thermal * s.Normal()}
		if gr.table.pick(v.add(-1, target).norm(), u) >= 0 {
			return target
		}
	}
}

// maxwellian fills three components with the velocity spread sqrt(kT/m), in units.
func maxwellian(s *rng.Stream, n int, temperature, mass float64) (vx, vy, vz []float64) {
	th := math.Sqrt(phys.Boltzmann*temperature/mass) / testUnit
	vx, vy, vz = make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		vx[i], vy[i], vz[i] = th*s.Normal(), th*s.Normal(), th*s.Normal()
	}
	return vx, vy, vz
}

// speedOf returns the speed of the energy, in units.
func speedOf(energyEV, mass float64) float64 {
	return math.Sqrt(2*energyEV*phys.ElementaryCharge/mass) / testUnit
}
