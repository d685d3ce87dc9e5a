package pic

import (
	"fmt"
	"math"
	"testing"

	"ionfall/internal/phys"

	"gonum.org/v1/gonum/stat/distuv"
)

// atWalls puts n particles half a cell before each wall, to cross it in the next step.
func atWalls(t *testing.T, s *Simulation, species, n int) {
	t.Helper()
	sp := &s.species[species]
	cells := float64(s.config.Cells)
	for k := range n {
		c := &sp.chunks[k%len(sp.chunks)]
		c.add(0.3, -0.7, 0.1, 0.2)
		c.add(cells-0.3, 0.8, 0.1, 0.2)
	}
	s.SetWorkers(2)
}

// Goal: electrodes reflect electrons with the asked-for probability, and reflected ones keep their
// energy and fly back. Method: N electrons cross each wall in one step; binomial bounds; the
// position is the mirrored one.
func TestElectronReflection(t *testing.T) {
	const n = 20_000
	for _, p := range []float64{0, 0.5, 0.93, 1} {
		c := empty(64, 100, electrons())
		c.Electrodes[Powered].ElectronReflection = p
		c.Electrodes[Grounded].ElectronReflection = p / 2
		s := mustNew(t, c)
		atWalls(t, s, 0, n)
		mustAdvance(t, s, 1)
		l := s.TakeLedger().Species[0]
		for wall, q := range []float64{p, p / 2} {
			if l.Reflected[wall]+l.Absorbed[wall] != n {
				t.Errorf("%d and %d of %d", l.Reflected[wall], l.Absorbed[wall], n)
			}
			checkMean(t, fmt.Sprintf("reflected at probability %g", q),
				float64(l.Reflected[wall]), q*n, math.Sqrt(q*(1-q)*n))
		}
		for k := range s.species[0].chunks {
			ch := &s.species[0].chunks[k]
			for i, x := range ch.x {
				wantX, wantV := 0.4, 0.7
				if x > 32 {
					wantX, wantV = 63.5, -0.8
				}
				checkNear(t, "position", x, wantX, 1e-6)
				checkNear(t, "velocity", ch.vx[i], wantV, 1e-6)
			}
		}
	}
}

// Goal: an electrode that reflects all keeps all electrons, and a uniform field does not heat
// them. Method: warm electrons pressed against the grounded wall by 20 V, 500 steps with some
// 40 reflections each; kinetic plus potential energy of all, at whole steps. Turns are exact
// parabolas but for hops shorter than a step: (a dt)^2 against the energy bounds these.
func TestReflectionKeepsEnergy(t *testing.T) {
	c := empty(32, 400, electrons())
	c.Drive.Bias = -20
	c.Electrodes = [2]Electrode{{ElectronReflection: 1}, {ElectronReflection: 1}}
	s := mustNew(t, c)
	mustLoad(t, s, 0, 5000, 2*phys.ElementaryCharge/phys.Boltzmann)
	kick := s.species[0].kickPerE * c.Drive.Bias / c.Gap
	energy := func() float64 {
		sum := 0.0
		for k := range s.species[0].chunks {
			ch := &s.species[0].chunks[k]
			for i, x := range ch.x {
				v := ch.vx[i] + kick/2
				sum += 0.5*v*v + kick*(float64(c.Cells)-x)
			}
		}
		return sum
	}
	mustAdvance(t, s, 1)
	before := energy()
	mustAdvance(t, s, 4000)
	if n := s.species[0].Count(); n != 5000 {
		t.Errorf("%d of 5000 electrons left", n)
	}
	if l := s.TakeLedger().Species[0]; l.Reflected[Grounded] < 100_000 {
		t.Errorf("only %v reflections", l.Reflected)
	}
	checkNear(t, "energy after over before", energy()/before, 1, 5000*kick*kick/before)
}

// Goal: ions set electrons free as the yield says, with the emission energy, into the gap.
// Method: N ions cross each wall in one step. floor(yield) electrons each, and one more with
// the rest's probability: binomial bounds. Each has the energy to rounding; directions are
// isotropic over the half space, so that cosines are uniform: chi-square. The current of the
// step is the one induced by all displacements, the emitted ones' from the wall.
func TestSecondaryEmission(t *testing.T) {
	const n = 20_000
	for i, yield := range []float64{0.3, 1, 2.5} {
		c := empty(64, 200, electrons(), ions(1))
		c.Seed = uint64(i)
		e := Electrode{IonSecondaryYield: yield, SecondaryEnergyEV: 3}
		c.Electrodes = [2]Electrode{e, e}
		s := mustNew(t, c)
		atWalls(t, s, 1, n)
		var last Circuit
		watch(s, &spy{step: func(c Circuit) { last = c }})
		mustAdvance(t, s, 1)
		l := s.TakeLedger().Species[0]
		part := yield - math.Floor(yield)
		for wall := range 2 {
			checkMean(t, fmt.Sprintf("emitted at yield %g", yield), float64(l.Emitted[wall]),
				yield*n, math.Sqrt(part*(1-part)*n))
		}
		if int64(s.species[0].Count()) != l.Emitted[0]+l.Emitted[1] {
			t.Errorf("%d electrons, %v emitted", s.species[0].Count(), l.Emitted)
		}
		total := float64(l.Emitted[0]+l.Emitted[1]) * c.Weight * 3 * phys.ElementaryCharge
		checkNear(t, "emitted energy", l.EmitEnergy, total, 1e-12*total)
		checkEmission(t, s)
		// Ions moved 0.3 cells to either wall, which cancels; electrons count -1.
		induced := float64(64*l.Emitted[1]) + positionSum(s)
		mustAdvance(t, s, 1)
		charge := phys.ElementaryCharge * c.Weight / 64
		rounding := charge * 0x1p-23 * float64(2*n+int(l.Emitted[0]+l.Emitted[1]))
		checkNear(t, "current", last.Current*c.TimeStep(), charge*induced, rounding)
	}
}

func checkEmission(t *testing.T, s *Simulation) {
	t.Helper()
	unit := s.config.VelocityUnit(1)
	speed := math.Sqrt(2*3*phys.ElementaryCharge/phys.ElectronMass) / unit
	counts, n := make([]int, 25), 0
	for k := range s.species[0].chunks {
		ch := &s.species[0].chunks[k]
		for i, x := range ch.x {
			inward, depth := ch.vx[i], x
			if x > 32 {
				inward, depth = -ch.vx[i], 64-x
			}
			v := math.Sqrt(ch.vx[i]*ch.vx[i] + ch.vy[i]*ch.vy[i] + ch.vz[i]*ch.vz[i])
			checkNear(t, "speed", v, speed, 1e-12)
			if inward < 0 || depth < 0 || depth > inward+0x1p-19 {
				t.Fatalf("electron at %g cells from the wall with %g cells a step", depth, inward)
			}
			counts[min(24, int(25*inward/v))]++
			n++
		}
	}
	sum, want := 0.0, float64(n)/25
	for _, k := range counts {
		sum += (float64(k) - want) * (float64(k) - want) / want
	}
	if bound := (distuv.ChiSquared{K: 24}).Quantile(1 - falseAlarm); !(sum <= bound) {
		t.Errorf("cosines of emission: chi-square %.1f, bound %.1f", sum, bound)
	}
}

// Goal: ions that fall through a constant field arrive with the energy of the voltage they
// crossed, however rarely they move. Method: ions at rest at many places before a wall of -60 V;
// each impact against e V x/L. The energy where the wall was crossed errs by less than
// (a/v)^2/4 of it, a the velocity gained in a move; the mean by far less.
func TestImpactEnergyOfSubcycledIons(t *testing.T) {
	for _, every := range []int{1, 4, 8} {
		for _, scheme := range schemes() {
			c := empty(64, 200, ions(every))
			c.Scheme, c.Drive.Bias, c.Chunks = scheme, -60, 1
			s := mustNew(t, c)
			unit := c.VelocityUnit(every)
			kick := math.Abs(s.species[0].kickPerE * c.Drive.Bias / c.Gap)
			var starts []float64
			for k := range 60 {
				starts = append(starts, 1+float64(k)+0.37)
				mustAdd(t, s, 0, 0, starts[k], 0, 0, 0)
			}
			var energies []float64
			watch(s, &spy{hits: func(_, _ int, hits []Hit) {
				for _, h := range hits {
					if h.Wall == Powered {
						energies = append(energies, h.VX*h.VX)
					}
				}
			}})
			mustAdvance(t, s, 40*200)
			if len(energies) != len(starts) {
				t.Fatalf("%d of %d ions arrived", len(energies), len(starts))
			}
			joule := 0.5 * s.species[0].Mass * unit * unit
			mean, want := 0.0, 0.0
			for k, v2 := range energies { // nearer ones arrive first
				exact := 60 * phys.ElementaryCharge * starts[k] / 64
				bound := 0.25 * kick * kick / v2 * exact
				checkNear(t, fmt.Sprintf("K %d: impact energy from %g cells", every, starts[k]),
					joule*v2, exact, bound+1e-9*exact)
				mean += joule * v2
				want += exact
			}
			checkNear(t, "mean impact energy", mean/want, 1, 1e-4)
		}
	}
}

// Goal: sub-cycled ions fall by the exact parabola from their first move on. Method: an ion at rest
// in a constant field; after m moves of K steps it has fallen a m^2/2, a the kick of a move.
//
// Ref: J. C. Adam, A. Gourdin Serveniere and A. B. Langdon, J. Comput. Phys. 47, 229 (1982).
func TestSubcycledFall(t *testing.T) {
	for _, every := range []int{1, 4, 8} {
		c := empty(64, 200, ions(every))
		c.Drive.Bias = -60
		s := mustNew(t, c)
		mustAdd(t, s, 0, 0, 50, 0, 0, 0)
		kick := s.species[0].kickPerE * c.Drive.Bias / c.Gap
		mustAdvance(t, s, 800)
		m := float64(800 / every)
		fallen := s.species[0].chunks[0].x[0] - 50
		checkNear(t, fmt.Sprintf("K %d: fall", every), fallen, kick*m*m/2, 1e-10)
		if fallen > -0.1 {
			t.Errorf("K %d: fell by %g cells only", every, fallen)
		}
	}
}

// Goal: sub-cycling changes nothing but the cost. Method: a discharge with K = 1, 4 and 8 and other
// seeds; ion flux and mean impact energy over 30 periods after 10. Fluxes of an ion at a time:
// Poisson counts, and the spread of energies within the run; differences within the bound.
func TestSubcyclingAgrees(t *testing.T) {
	periods := 30
	if testing.Short() {
		periods = 8
	}
	type answer struct{ count, mean, stdErr float64 }
	var list []answer
	for i, every := range []int{1, 4, 8} {
		d := smallDischarge()
		d.every, d.seed, d.chunks = every, uint64(20+i), 1
		s := d.build(t)
		mustAdvance(t, s, 10*d.steps)
		var n, sum, square float64
		joule := 0.5 * s.species[1].Mass * math.Pow(s.config.VelocityUnit(every), 2)
		watch(s, &spy{hits: func(species, _ int, hits []Hit) {
			for _, h := range hits {
				if species == 1 {
					e := joule * (h.VX*h.VX + h.VY*h.VY + h.VZ*h.VZ) / phys.ElementaryCharge
					n, sum, square = n+1, sum+e, square+e*e
				}
			}
		}})
		mustAdvance(t, s, periods*d.steps)
		list = append(list, answer{n, sum / n, math.Sqrt((square/n - sum*sum/n/n) / n)})
		t.Logf("K %d: %.0f ions, mean energy %.3f +- %.3f eV", every, n, sum/n, list[i].stdErr)
	}
	one := list[0]
	for _, other := range list[1:] {
		checkMean(t, "number of ions", other.count, one.count, math.Sqrt(other.count+one.count))
		checkMean(t, "mean energy", other.mean, one.mean, math.Hypot(other.stdErr, one.stdErr))
	}
}
