package pic

import (
	"bytes"
	"math"
	"testing"

	"ionfall/internal/phys"
)

// isolatedDischarge is the small discharge cut off from its drive, emission and reflection on.
func isolatedDischarge(t testing.TB, scheme Scheme) *Simulation {
	t.Helper()
	d := smallDischarge()
	d.scheme, d.every = scheme, 8
	c := d.build(t).config
	c.Drive, c.Isolated = Drive{}, true
	s := mustNew(t, c)
	mustLoad(t, s, 0, d.particles, 60_000)
	mustLoad(t, s, 1, d.particles, 300)
	return s
}

// Goal: a charge before an isolated electrode lifts it by q (1 - x/L) L/eps0, and one absorbed
// by q L/eps0; the other wall takes its own away. Method: single heavy particles, exact.
func TestIsolatedElectrodePotential(t *testing.T) {
	for _, scheme := range schemes() {
		c := empty(64, 100, ions(1))
		c.Scheme, c.Isolated, c.Weight = scheme, true, 1e9
		full := phys.ElementaryCharge * c.Weight * c.Gap / phys.Epsilon0
		for _, x := range []float64{0, 0.25, 16, 32.5, 63} {
			s := mustNew(t, c)
			var phi float64
			watch(s, &spy{step: func(c Circuit) { phi = c.Voltage }})
			mustAdd(t, s, 0, 0, x, 0, 0, 0)
			mustAdvance(t, s, 1)
			checkNear(t, "potential", phi, full*(1-x/64), 1e-12*full)
		}
		for _, wall := range []Wall{Powered, Grounded} {
			s := mustNew(t, c)
			var last Circuit
			watch(s, &spy{step: func(c Circuit) { last = c }})
			x, v, want := 0.5, -c.VelocityUnit(1), full
			if wall == Grounded {
				x, v, want = 63.5, -v, 0
			}
			mustAdd(t, s, 0, 0, x, v, 0, 0)
			mustAdvance(t, s, 3)
			checkNear(t, "potential after absorption at "+wall.String(), last.Voltage, want, 1e-12*full)
		}
	}
}

// Goal: the charge of an isolated electrode is what it absorbed less what it emitted; the field
// there is this charge over eps0 at every step; no current flows and no energy comes in. Method:
// 600 steps with collisions, emission, reflection and sub-cycled ions, against the ledger.
func TestIsolatedElectrodeKeepsItsCharge(t *testing.T) {
	for _, scheme := range schemes() {
		s := isolatedDischarge(t, scheme)
		steps, largest := 0, 0.0
		watch(s, &spy{
			due: always,
			reduce: func(f *Frame, _, _ int) {
				charge := s.SurfaceCharge()
				checkNear(t, "eps0 E[0]", phys.Epsilon0*f.E[0], charge, 1e-11*phys.Epsilon0*1e5)
				largest = math.Max(largest, math.Abs(charge))
			},
			step: func(c Circuit) {
				steps++
				if c.Current != 0 {
					t.Errorf("step %d: current %g A/m2", c.Step, c.Current)
				}
			},
		})
		mustAdvance(t, s, 600)
		l := s.TakeLedger()
		net := l.Species[1].Absorbed[0] - l.Species[0].Absorbed[0] + l.Species[0].Emitted[0]
		want := phys.ElementaryCharge * l.Weight * float64(net)
		checkNear(t, "charge", s.SurfaceCharge(), want, 1e-12*largest)
		if l.Electric != 0 || steps != 600 || !(want < 0) || l.Species[0].Emitted[0] == 0 {
			t.Errorf("energy in %g, %d steps, charge %g", l.Electric, steps, want)
		}
	}
}

// Goal: the isolated electrode is the same bits for any number of workers and after a restart.
// Method: checkpoint bytes of a straight run with one worker, and of one in pieces.
func TestIsolatedElectrodeContinues(t *testing.T) {
	for _, scheme := range schemes() {
		straight := isolatedDischarge(t, scheme)
		mustAdvance(t, straight, 301)
		s := isolatedDischarge(t, scheme)
		for k, steps := range []int{77, 1, 123, 100} {
			s.SetWorkers([]int{3, 2, 7, 1}[k])
			mustAdvance(t, s, steps)
			file := stateBytes(t, s)
			s = isolatedDischarge(t, scheme)
			if err := restore(t, s, file); err != nil {
				t.Fatal(err)
			}
		}
		if !bytes.Equal(stateBytes(t, s), stateBytes(t, straight)) {
			t.Errorf("%v: another state in pieces", scheme)
		}
		if straight.SurfaceCharge() == 0 {
			t.Error("no charge on the electrode")
		}
	}
}

// Goal: a change of the particle number keeps the charge, one of all densities scales it, and a
// transfer takes it along. Method: the charge itself.
func TestIsolatedElectrodeIsResized(t *testing.T) {
	s := isolatedDischarge(t, EnergyConserving)
	mustAdvance(t, s, 100)
	charge := s.SurfaceCharge()
	s.Halve()
	s.Multiply(3, 1)
	checkNear(t, "charge after resizing", s.SurfaceCharge(), charge, 0)
	s.ScaleWeight(1.5)
	checkNear(t, "charge after scaling", s.SurfaceCharge(), 1.5*charge, 0)
	into := mustNew(t, s.config)
	into.Transfer(s, 1)
	checkNear(t, "charge after transfer", into.SurfaceCharge(), 1.5*charge, 0)
}

func TestIsolatedElectrodeHasNoDrive(t *testing.T) {
	c := empty(64, 100, electrons())
	c.Isolated, c.Drive.Bias = true, 3
	if _, err := New(c); err == nil || err.Error() != "pic: an isolated electrode has no drive" {
		t.Error(err)
	}
}
