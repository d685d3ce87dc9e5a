package pic

import (
	"bytes"
	"fmt"
	"math"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/validation"
)

// shells returns gaps of 3 cm outside a powered electrode of 2 cm radius.
func shells(shape Shape, cells int) Config {
	c := empty(cells, 100, ions(1))
	c.Gap = 0.03
	c.Geometry = Geometry{Shape: shape, AreaRatio: 2.5}
	if shape == Spheres {
		c.Geometry.AreaRatio = 6.25
	}
	return c
}

func bothShells() []Shape { return []Shape{Cylinders, Spheres} }

// Goal: potential, field and capacitance of empty cylindrical and spherical gaps are those of the
// formulas, for any number of cells. Method: 100 V across radii of 2 and 5 cm; the field at the
// nodes, the potential at 3 cm.
func TestValidationReactorVacuumShells(t *testing.T) {
	const a, b, r, volts = 0.02, 0.05, 0.03, 100
	for _, shape := range bothShells() {
		c := shells(shape, 30)
		c.Drive.Bias = volts
		s := mustNew(t, c)
		var phi, e [3]float64
		watch(s, &spy{due: always, reduce: func(f *Frame, _, _ int) {
			for k, j := range []int{0, 10, 30} {
				phi[k], e[k] = f.Phi[j], f.E[j]
			}
		}})
		mustAdvance(t, s, 1)
		want := map[string][2]float64{}
		if shape == Cylinders {
			u := math.Log(b / float64(a))
			want["capacitance"] = [2]float64{
				2 * math.Pi * phys.Epsilon0 / u, 2 * math.Pi * a * c.VacuumCapacitance(),
			}
			want["potential at 3 cm"] = [2]float64{volts * math.Log(b/r) / u, phi[1]}
			for k, at := range []float64{a, r, b} {
				want[fmt.Sprintf("field at %g cm", 100*at)] = [2]float64{volts / (at * u), e[k]}
			}
		} else {
			u := 1/a - 1/b
			want["capacitance"] = [2]float64{
				4 * math.Pi * phys.Epsilon0 / u, 4 * math.Pi * a * a * c.VacuumCapacitance(),
			}
			want["potential at 3 cm"] = [2]float64{volts * (1/r - 1/b) / u, phi[1]}
			for k, at := range []float64{a, r, b} {
				want[fmt.Sprintf("field at %g cm", 100*at)] = [2]float64{volts / (at * at * u), e[k]}
			}
		}
		for name, v := range want {
			unit := map[string]string{"cap": "F/m", "pot": "V", "fie": "V/m"}[name[:3]]
			if name == "capacitance" && shape == Spheres {
				unit = "F"
			}
			recordReactor(t, validation.Row{
				Section: "empty gap between " + shape.String(), Quantity: name, Unit: unit,
				Reference: v[0], Ours: v[1], Status: "exact", Limit: 1e-10,
				LimitKind: validation.Relative, Source: "Gauss's law", Seed: 1,
				Note: "radii 2 and 5 cm, 100 V, 30 cells",
			})
		}
	}
}

// Goal: without a field a particle between shells flies straight: its place after many steps, its
// speed and its angular momentum are exact, and both the charge and the number of particles stay.
// Method: one particle, 200 steps, against the straight line.
func TestValidationReactorFreeFlight(t *testing.T) {
	for _, shape := range bothShells() {
		c := shells(shape, 60)
		s := mustNew(t, c)
		unit := c.VelocityUnit(1)
		const x, vx, vy, vz = 20.5, -0.06, 0.11, 0.05 // [cells], [cells/step]
		mustAdd(t, s, 0, 0, x, vx*unit, vy*unit, vz*unit)
		const steps = 200
		mustAdvance(t, s, steps)
		ch := &s.species[0].chunks[0]
		inner := 1 / c.cellCurvature()
		side := math.Hypot(vy, vz)
		along := math.Hypot(ch.vy[0], ch.vz[0])
		if shape == Cylinders {
			side, along = vy, ch.vy[0]
		}
		r := math.Hypot(inner+x+vx*steps, side*steps)
		row := func(name, unit string, want, got float64) validation.Row {
			return validation.Row{
				Section: "free flight between " + shape.String(), Quantity: name, Unit: unit,
				Reference: want, Ours: got, Status: "exact", Limit: 1e-11,
				LimitKind: validation.Relative, Source: "straight line", Seed: 1,
				Note: "200 steps; angular momentum per mass",
			}
		}
		recordReactor(t,
			row("radius", "m", r*c.CellSize(), (inner+ch.x[0])*c.CellSize()),
			row("speed", "m/s", unit*math.Sqrt(vx*vx+vy*vy+vz*vz),
				unit*math.Sqrt(ch.vx[0]*ch.vx[0]+ch.vy[0]*ch.vy[0]+ch.vz[0]*ch.vz[0])),
			row("angular momentum", "m2/s", (inner+x)*side*c.CellSize()*unit,
				(inner+ch.x[0])*along*c.CellSize()*unit))
	}
}

// Goal: motion across the vacuum field of the shells converges with the second order of step and
// cell. Method: an ion on its way between the shells, steps and cells doubled together. A field
// constant in the cell scatters by where in its cell the particle starts: it has to come to the
// same place within 1 % of the first cell, over the square of the number of cells.
func TestShellsAreOfSecondOrder(t *testing.T) {
	for _, shape := range bothShells() {
		var at [2][4]float64
		for m, scheme := range schemes() {
			for k := range at[m] {
				n := 1 << k
				c := shells(shape, 60*n)
				c.Scheme, c.StepsPerPeriod, c.Period = scheme, 50*n, 4e-7
				c.Drive.Bias = -300
				s := mustNew(t, c)
				mustAdd(t, s, 0, 0, float64(40*n), 5e3, 2.5e4, 0)
				mustAdvance(t, s, 100*n)
				at[m][k] = s.species[0].chunks[0].x[0] * c.CellSize()
			}
		}
		linear, constant := at[0], at[1]
		for k := range 2 {
			ratio := (linear[k] - linear[k+1]) / (linear[k+1] - linear[k+2])
			if !(ratio > 3 && ratio < 5) {
				t.Errorf("%v: %v m, ratio %g, want about 4", shape, linear, ratio)
			}
		}
		limit := linear[3] + (linear[3]-linear[2])/3
		for k, x := range constant {
			n := float64(int(1) << k)
			checkNear(t, fmt.Sprintf("%v, field constant in a cell, %g", shape, n), x, limit,
				0.01*0.03/60/(n*n))
		}
	}
}

// shellDischarge is the small discharge between shells.
func shellDischarge(t testing.TB, g Geometry, n Network) *Simulation {
	t.Helper()
	d := smallDischarge()
	c := d.build(t).config
	c.Geometry, c.Network = g, n
	c.Weight *= c.Volume() / c.Gap
	c.Species = d.species(t, &c)
	s := mustNew(t, c)
	mustLoad(t, s, 0, d.particles, 30_000)
	mustLoad(t, s, 1, d.particles, 300)
	return s
}

// Goal: between shells charge is conserved to rounding at every step: the flux that leaves the
// powered electrode and what is in the gap arrive at the grounded one. Method: eps0 E at both walls
// with their areas against the charge in the gap, 300 steps of a discharge with everything on.
func TestShellsConserveCharge(t *testing.T) {
	for _, shape := range bothShells() {
		s := shellDischarge(t, Geometry{shape, 2.5}, Network{Capacitance: 1e-7})
		last := s.config.Cells
		watch(s, &spy{due: always, reduce: func(f *Frame, _, _ int) {
			sum := 0.0
			for j := range f.Number[0] {
				sum += f.Number[1][j] - f.Number[0][j]
			}
			sum *= phys.ElementaryCharge * f.Weight
			out := phys.Epsilon0 * (2.5*f.E[last] - f.E[0])
			checkNear(t, "charge by Gauss's law", out, sum, 1e-12*phys.Epsilon0*1e6)
		}})
		mustAdvance(t, s, 300)
	}
}

// Goal: a uniform density is deposited as one, walls included; the volumes add up. Method: a
// quiet load.
func TestShellsKeepUniformDensity(t *testing.T) {
	for _, shape := range bothShells() {
		c := shells(shape, 24)
		s := mustNew(t, c)
		mustLoad(t, s, 0, 400_000, 0)
		sum := 0.0
		for j := range c.Cells + 1 {
			sum += c.NodeVolume(j)
		}
		checkNear(t, "volume", sum, c.Volume(), 1e-12*c.Volume())
		watch(s, &spy{due: always, reduce: func(f *Frame, _, _ int) {
			for j, n := range f.Number[0] {
				want := 400_000 / c.Volume()
				checkNear(t, fmt.Sprint("density at node ", j), n/c.NodeVolume(j), want, 2e-3*want)
			}
		}})
		mustAdvance(t, s, 1)
	}
}

// Goal: between shells and behind a network the bits do not depend on the workers nor on restarts.
func TestShellsContinue(t *testing.T) {
	for _, shape := range bothShells() {
		build := func() *Simulation {
			return shellDischarge(t, Geometry{shape, 2}, Network{1e-7, 0.1, 1e-8})
		}
		straight := build()
		mustAdvance(t, straight, 201)
		s := build()
		for k, steps := range []int{77, 1, 123} {
			s.SetWorkers([]int{3, 2, 7}[k])
			mustAdvance(t, s, steps)
			file := stateBytes(t, s)
			s = build()
			if err := restore(t, s, file); err != nil {
				t.Fatal(err)
			}
		}
		if !bytes.Equal(stateBytes(t, s), stateBytes(t, straight)) {
			t.Errorf("%v: another state in pieces", shape)
		}
	}
}

// Goal: shells of an area ratio near 1 are plates. Method: the same discharge for 3 periods with
// an area ratio of 1 + 1e-9 and between plates, which go apart by rounding alone: power and
// absorbed particles.
func TestValidationReactorPlanarLimit(t *testing.T) {
	flat := shellDischarge(t, Geometry{}, Network{})
	mustAdvance(t, flat, 600)
	want := flat.TakeLedger()
	for _, shape := range bothShells() {
		s := shellDischarge(t, Geometry{shape, 1 + 1e-9}, Network{})
		mustAdvance(t, s, 600)
		got := s.TakeLedger()
		row := func(name, unit string, a, b, chance float64) validation.Row {
			return validation.Row{
				Section: "thin " + shape.String() + " and plates", Quantity: name, Unit: unit,
				Reference: a, ReferenceError: chance, OursError: chance, Ours: b, Limit: 4,
				LimitKind: validation.Sigma, Seed: 3, Status: "computed",
				Source: "the same discharge between plates",
				Note:   "argon, 10 Pa, 150 V, 3 periods; errors are the root of the counts",
			}
		}
		n := float64(want.Species[0].Absorbed[0])
		energy := want.Species[0].WallEnergy[0]
		recordReactor(t,
			row("electrons at the powered electrode", "", n,
				float64(got.Species[0].Absorbed[0]), math.Sqrt(n)),
			row("their energy", "J/m2", energy, got.Species[0].WallEnergy[0], energy/math.Sqrt(n)))
	}
}

// Goal: energy is conserved between shells and behind a network: what the electrode takes is found
// again in particles, field, walls and gas. Method: the ledgers of 5 periods of argon at 800 steps,
// as the budget of plates, with its bound of 0.5 %; both schemes.
func TestShellsEnergyBudget(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some seconds")
	}
	for _, shape := range bothShells() {
		for _, scheme := range schemes() {
			d := smallDischarge()
			d.steps, d.plain, d.particles, d.density, d.cells = 800, true, 10_000, 3e14, 32
			c := d.build(t).config
			c.Scheme, c.Geometry, c.Network = scheme, Geometry{shape, 2.5}, Network{Capacitance: 1e-7}
			c.Weight *= c.Volume() / c.Gap
			s := mustNew(t, c)
			mustLoad(t, s, 0, d.particles, 30_000)
			mustLoad(t, s, 1, d.particles, 300)
			mustAdvance(t, s, d.steps)
			var start, a account
			start.add(s.TakeLedger())
			start.kinetic += halfStep(s)
			for range 5 {
				mustAdvance(t, s, d.steps)
				a.add(s.TakeLedger())
			}
			a.kinetic += halfStep(s)
			t.Logf("%v, %v: missing %.5f", shape, scheme, a.missing(start))
			if missing := a.missing(start); !(math.Abs(missing) < 0.005) {
				t.Errorf("%v, %v: %.4f of the energy is missing", shape, scheme, missing)
			}
		}
	}
}
