package mcc

import (
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"

	"gonum.org/v1/gonum/stat/distuv"
)

// Goal: a particle may collide several times in a step, as often as a Poisson process does.
// Method: a constant frequency at one and at 1.9 collisions a step; number of collisions by
// particle (from Events): mean, variance and chi-square against the Poisson distribution.
//
// Ref: H. R. Skullerud, J. Phys. D 1, 1567 (1968).
func TestCollisionNumbersArePoisson(t *testing.T) {
	for i, rate := range []float64{1, 1.9} {
		b := background(heavy, 300, process("p", "X+", crosssections.Isotropic, 0,
			tabulate(0, 10, inverseSpeed(1e9, testDensity, heavy))))
		m := mustModel(t, "X+", heavy, 10, rate, b)
		n := 2 * trials()
		s := stream(uint64(300 + i))
		vx, vy, vz := maxwellian(s, n, 3000, heavy)
		out := m.NewOutcome()
		out.KeepEvents = true
		m.Collide(s, vx, vy, vz, out)
		made := make([]int, n)
		for _, e := range out.Events {
			made[e.Particle]++
		}
		if len(out.Events) != int(out.Counts[0]) {
			t.Fatalf("%d events, %d counted", len(out.Events), out.Counts[0])
		}
		checkPoisson(t, rate, made)
	}
}

func checkPoisson(t *testing.T, rate float64, made []int) {
	t.Helper()
	const top = 8 // and more
	n := float64(len(made))
	counts, mean, square := make([]int, top+1), 0.0, 0.0
	for _, k := range made {
		counts[min(k, top)]++
		mean += float64(k) / n
		square += (float64(k) - rate) * (float64(k) - rate) / n
	}
	checkMean(t, "mean number of collisions", mean, rate, math.Sqrt(rate/n))
	// The fourth central moment of a Poisson number is rate + 3 rate^2.
	checkMean(t, "variance", square, rate, math.Sqrt((rate+2*rate*rate)/n))
	law := distuv.Poisson{Lambda: rate}
	want := make([]float64, top+1)
	rest := n
	for k := range top {
		want[k] = n * law.Prob(float64(k))
		rest -= want[k]
	}
	want[top] = rest
	checkChiSquare(t, "numbers of collisions", counts, want)
}

// Goal: all particles of a slice are candidates alike, first and last too, and the numbers of
// neighbours are independent. Method: counts over ten parts of the slice; correlation of the
// numbers of neighbours, whose standard error is 1/sqrt(N).
func TestCandidatesAreSpreadEvenly(t *testing.T) {
	b := background(heavy, 300, process("p", "X+", crosssections.Isotropic, 0,
		tabulate(0, 10, inverseSpeed(1e9, testDensity, heavy))))
	m := mustModel(t, "X+", heavy, 10, 0.7, b)
	s := stream(310)
	vx, vy, vz := maxwellian(s, 1000, 3000, heavy)
	out := m.NewOutcome()
	out.KeepEvents = true
	parts, product, last := make([]int, 10), 0.0, 0.0
	calls := trials() / 1000
	for range calls {
		out.Events = out.Events[:0]
		m.Collide(s, vx, vy, vz, out)
		made := make([]float64, len(vx))
		for _, e := range out.Events {
			made[e.Particle]++
			parts[10*int(e.Particle)/len(vx)]++
		}
		last += made[len(vx)-1]
		for k := 1; k < len(made); k++ {
			product += (made[k] - m.rate) * (made[k-1] - m.rate)
		}
	}
	checkChiSquare(t, "tenths of the slice", parts, equalBins(int(out.Counts[0]), 10))
	checkMean(t, "collisions of the last", last, m.rate*float64(calls),
		math.Sqrt(m.rate*float64(calls)))
	pairs := float64(calls * (len(vx) - 1))
	checkMean(t, "correlation of neighbours", product/(pairs*m.rate), 0, 1/math.Sqrt(pairs))
}

// Goal: the channel is chosen by exactly the shares of n sigma g, between table rows too. Method:
// uniform numbers a hair on both sides of each border that Frequency gives.
func TestPickBorders(t *testing.T) {
	m := mustModel(t, "e", phys.ElectronMass, 300, 0.1, bundled(t, "Ar"))
	tab := &m.groups[0].table
	for _, row := range []float64{100.3, 1700.5, 2001.75, 8191.9} {
		g := row / tab.perSpeed
		border := 0.0
		for c, nu := range m.Frequency(g * testUnit) {
			border += nu / tab.max
			next := c + 1
			if next == len(m.channels) {
				next = -1
			}
			below, above := tab.pick(g, border-1e-12), tab.pick(g, border+1e-12)
			if nu > 0 && below != c || above == c || nu > 0 && c == 2 && above != next {
				t.Errorf("row %g, channel %d: %d below its border, %d above", row, c, below, above)
			}
		}
	}
}

// lead is a constant half kick.
type lead float64

func (l lead) HalfKicks(_ []int32, change []float64) {
	for k := range change {
		change[k] = float64(l)
	}
}

// Goal: velocities that lag behind are collided at the time of the collision. Method: cold gas of
// equal mass; backscatter stops an ion at that time, so that minus the half kick is left in the
// lagging velocity, and the loss is the energy at that time.
func TestHalfKickLeadsToTheCollision(t *testing.T) {
	m := onlyChannel(t, "X+", crosssections.Backscatter, heavy, heavy, 0, 0, 10)
	const half = 0.125
	n := 1000
	vx, vy, vz := make([]float64, n), make([]float64, n), make([]float64, n)
	for k := range vx {
		vx[k], vy[k] = 0.5-half, 0.25
	}
	out := m.NewOutcome()
	out.Advance = lead(half)
	m.Collide(stream(320), vx, vy, vz, out)
	stopped := 0
	for k := range vx {
		switch {
		case vx[k] == -half && vy[k] == 0:
			stopped++
		case vx[k] != 0.5-half || vy[k] != 0.25:
			t.Fatalf("velocity %g %g after", vx[k], vy[k])
		}
	}
	// Ions at rest do not collide again.
	if want := float64(stopped) * (0.25 + 0.0625); stopped == 0 || out.Loss[0] != want ||
		out.Counts[0] != int64(stopped) {
		t.Errorf("%d stopped, %d counted, lost %g, want %g", stopped, out.Counts[0],
			out.Loss[0], want)
	}
}

// Goal: electrons, and those they set free, lag behind after the collision as before. Method: the
// energy at the time of the collision, births included, changes by Outcome.Loss alone; and
// elastic scattering off infinitely heavy, cold targets changes no speed at that time.
func TestElectronsKeepTheirLag(t *testing.T) {
	const half = 800.0
	for _, target := range []float64{heavy, 1} {
		m := onlyChannel(t, "e", crosssections.Elastic, phys.ElectronMass, target, 0, 0, 300)
		if target == heavy {
			m = mustModel(t, "e", phys.ElectronMass, 300, 0.8, bundled(t, "Ar"))
		}
		v := speedOf(60, phys.ElectronMass)
		n := 5000
		vx, vy, vz := make([]float64, n), make([]float64, n), make([]float64, n)
		for k := range vx {
			vx[k], vy[k] = 0.6*v-half, 0.8*v
		}
		out := m.NewOutcome()
		out.Advance = lead(half)
		m.Collide(stream(330), vx, vy, vz, out)
		loss := 0.0
		for _, l := range out.Loss {
			loss += l
		}
		after := 0.0
		for k := range vx {
			x := vx[k] + half
			after += x*x + vy[k]*vy[k] + vz[k]*vz[k]
		}
		for _, b := range out.Births {
			x, y, z := b.Electron[0]+half, b.Electron[1], b.Electron[2]
			after += x*x + y*y + z*z
		}
		before := float64(n) * v * v
		if math.Abs(before-after-loss) > 1e-11*before || out.Counts[0] == 0 {
			t.Errorf("energy %g before, %g after, loss %g", before, after, loss)
		}
		if target == 1 && math.Abs(loss) > 1e-11*before {
			t.Errorf("lost %g of %g to an infinite mass", loss, before)
		}
	}
}
