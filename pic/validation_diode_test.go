package pic

import (
	"fmt"
	"math"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/validation"
)

const childSource = "C. D. Child, Phys. Rev. 32, 492 (1911); I. Langmuir, Phys. Rev. 2, 450 (1913)"

// diode is a vacuum gap whose powered wall emits as much as it can.
type diode struct {
	species Species
	gap     float64
	voltage float64 // across the gap [V]
	start   float64 // energy of the emitted over that of the voltage
	cells   int
	scheme  Scheme
}

// exact returns the current density with no field at the emitter [A/m2] and the transit time
// [s]: from u'^2 = K (sqrt u - sqrt U0), K = 4J/(eps0 sqrt(2e/M)), u = phi + U0, for particles that
// start with the energy e U0. For U0 = 0 it is the law of Child and Langmuir,
//
//	J = (4/9) eps0 sqrt(2e/M) V^(3/2)/d^2, and 3 d sqrt(M/(2 e V))
func (d diode) exact(u0 float64) (current, transit float64) {
	y := math.Sqrt(d.voltage+u0) - math.Sqrt(u0)
	k := math.Pow((4./3*math.Pow(y, 1.5)+4*math.Sqrt(u0*y))/d.gap, 2)
	charge := math.Sqrt(2 * phys.ElementaryCharge / d.species.Mass)
	return phys.Epsilon0 * charge * k / 4, 4 * math.Sqrt(y/k) / charge
}

// fastest returns the speed of a particle from rest at the collector [m/s].
func (d diode) fastest() float64 {
	return math.Sqrt(2 * phys.ElementaryCharge * d.voltage / d.species.Mass)
}

// config returns a run in which the fastest fly a fifth of a cell in a step.
func (d diode) config() Config {
	const perCell = 80 // particles, of the charge (4/3) eps0 V/d that the gap holds
	c := Config{
		Gap: d.gap, Cells: d.cells, StepsPerPeriod: 100, Scheme: d.scheme, Chunks: 1, Seed: 1,
		Species: []Species{d.species},
	}
	c.Period = 100 * 0.2 * c.CellSize() / d.fastest()
	c.Weight = 4. / 3 * phys.Epsilon0 * d.voltage / d.gap / phys.ElementaryCharge /
		float64(perCell*d.cells)
	c.Drive.Bias = float64(d.species.Charge) * d.voltage
	return c
}

// wallField returns E at the powered wall at the current step [V/m].
func wallField(s *Simulation) float64 {
	w := s.workers[0]
	s.sumCharge(w, s.step)
	s.solvePotential(w, s.step)
	sheet := phys.ElementaryCharge * s.config.Weight / phys.Epsilon0 * w.net[0]
	return (w.phi[0]-w.phi[1])/s.config.CellSize() - sheet
}

// run returns current density and mean transit time over four transits of the steady state.
//
// Each step emits the charge that takes the field off the wall, Gauss's law: the emitter's supply
// is unlimited, and as none of the emitted has to turn, no virtual cathode has to be resolved. At
// the start, twice the final current is the most.
func (d diode) run(t *testing.T) (current, transit float64) {
	t.Helper()
	c := d.config()
	s := mustNew(t, c)
	var flights, arrivals float64
	counting := false
	watch(s, &spy{hits: func(_, _ int, hits []Hit) {
		for _, h := range hits {
			if h.Wall == Grounded && counting {
				arrivals++
				flights += float64(s.step) + 0.5 - h.VY // the tag is the moment of emission
			}
		}
	}})
	limit, flight := d.exact(0)
	sheet := phys.ElementaryCharge * c.Weight
	most := 2 * limit * c.TimeStep() / sheet
	speed := math.Sqrt(d.start) * d.fastest() / c.VelocityUnit(1)
	steps := int(flight / c.TimeStep())
	for n := range 8 * steps {
		counting = n >= 4*steps
		mustAdvance(t, s, 1)
		missing := phys.Epsilon0 * float64(d.species.Charge) * wallField(s) / sheet
		number := int(math.Max(0, math.Min(most, missing)))
		for k := range number {
			age := (float64(k) + 0.5) / float64(number)
			inject(s, 0, 0, speed*age, speed, float64(s.step)-age, 0)
		}
	}
	seconds := float64(4*steps) * c.TimeStep()
	return arrivals * sheet / seconds, flights / arrivals * c.TimeStep()
}

// Goal: the current of a space-charge limited diode, and the time its charges take, are those of
// theory. Method: cold emission into a vacuum gap at constant voltage, starting with 1e-5 of
// the final energy, of which the exact solution takes account (1 % of the current). The density is
// singular at the emitter, so that the error is of first order in the cell: -6 and +2 % at 128
// cells for the two schemes. Linear extrapolation from 128 and 256 cells leaves the second order;
// from 64 and 128 cells it leaves 0.9 %, a quarter of which is expected here: 1 % is allowed.
func TestValidationChildLangmuir(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some ten seconds")
	}
	const start = 1e-5
	helium := Species{Name: "He+", Charge: 1, Mass: 6.6465e-27, Every: 1}
	for _, d := range []diode{
		{electrons(), 0.01, 100, start, 0, MomentumConserving},
		{electrons(), 0.01, 100, start, 0, EnergyConserving},
		{helium, 0.004, 250, start, 0, EnergyConserving},
	} {
		var current, transit [2]float64
		for k := range current {
			d.cells = 128 << k
			current[k], transit[k] = d.run(t)
		}
		j, flight := d.exact(start * d.voltage)
		t.Logf("over theory: %v and %v", current[0]/j, current[1]/j)
		row := validation.Row{
			Section: "space-charge limited flow", Unit: "A/m2", Source: childSource, Status: "exact",
			Quantity: fmt.Sprintf("current, %s, %g V, %g mm, %v", d.species.Name, d.voltage,
				1e3*d.gap, d.scheme),
			Reference: j, Ours: 2*current[1] - current[0], Limit: 0.01,
			LimitKind: validation.Relative, Seed: 1,
			Note: fmt.Sprintf("start at 1e-5 of the final energy; extrapolated from 128 and 256 "+
				"cells, which gave %+.1f and %+.1f %%", 100*(current[0]/j-1), 100*(current[1]/j-1)),
		}
		second := row
		second.Quantity = "transit time, " + row.Quantity[len("current, "):]
		second.Unit, second.Reference, second.Ours = "s", flight, 2*transit[1]-transit[0]
		second.Note = "as for the current; each particle carries the moment of its emission"
		record(t, row, second)
	}
}
