package run

import (
	"fmt"
	"math"

	"ionfall/internal/stats"
	"ionfall/internal/store"
	"ionfall/pic"
)

// bounds of a trust check: above warn it is doubtful, above fail it is not to be used.
type bounds struct{ warn, fail float64 }

// The bounds. Those of the numerics are common practice (C. K. Birdsall and A. B. Langdon,
// Plasma Physics via Computer Simulation (1985); M. M. Turner, Phys. Plasmas 13, 033506 (2006)),
// for the energy-conserving scheme T. Powis and I. D. Kaganovich, Phys. Plasmas 31, 023901
// (2024).
var (
	momentumCell  = bounds{1, 2}
	energyCell    = bounds{4, 8}
	plasmaStep    = bounds{0.3, 0.6}
	collisionStep = bounds{0.1, 0.3}
	crossingPart  = bounds{0.01, 0.05}
	balanceOfAll  = bounds{0.02, 0.05}
	ionBalance    = bounds{0.02, 0.05}
	tableEnd      = bounds{1e-4, 1e-2}
	// By how much the number of negative ions is off is not known better than their data.
	negativeBalance = bounds{0.15, 0.5}
	// Turned round: below warn it is doubtful.
	perCell     = bounds{50, 10}
	perDebye    = bounds{20, 5}
	ionMoves    = bounds{80, 20}
	sheathCells = bounds{10, 5}
)

// above judges a value that should be small.
func above(name string, value float64, b bounds, text string) store.Check {
	c := store.Check{Name: name, Value: value, Bound: b.warn, Verdict: store.OK, Text: text}
	switch {
	case !(value <= b.fail):
		c.Verdict, c.Bound = store.Fail, b.fail
	case value > b.warn:
		c.Verdict = store.Warn
	}
	return c
}

// below judges a value that should be large.
func below(name string, value float64, b bounds, text string) store.Check {
	c := store.Check{Name: name, Value: value, Bound: b.warn, Verdict: store.OK, Text: text}
	switch {
	case !(value >= b.fail):
		c.Verdict, c.Bound = store.Fail, b.fail
	case value < b.warn:
		c.Verdict = store.Warn
	}
	return c
}

// trust judges the run by its own measurements.
func (m *machine) trust() []store.Check {
	checks := m.resolutionChecks()
	checks = append(checks, m.particleChecks()...)
	checks = append(checks, m.balanceChecks()...)
	checks = append(checks, m.negativeChecks()...)
	checks = append(checks, m.reactorChecks()...)
	return append(checks, m.statisticsChecks()...)
}

func (m *machine) resolutionChecks() []store.Check {
	n := m.control.Numerics
	q := m.measured()
	dx, dt := m.plan.Case.Gap/float64(n.Cells), m.plan.period()/float64(n.StepsPerPeriod)
	cell := energyCell
	if n.scheme() == pic.MomentumConserving {
		cell = momentumCell
	}
	return []store.Check{
		above("cell_size", dx/q.debye(), cell,
			"cell size over the Debye length where the plasma is densest, "+n.scheme().String()),
		below("sheath_cells", q.Sheath/dx, sheathCells,
			"cells in the narrower sheath"),
		above("plasma_frequency_step", q.frequency()*dt, plasmaStep,
			"electron plasma frequency times the time step, where the plasma is densest"),
		below("ion_moves", float64(n.StepsPerPeriod/n.IonSubsteps)/float64(m.plan.fastestHarmonic()),
			ionMoves, "moves of an ion in a period of the fastest tone"),
		above("cells_crossed", m.rec.CrossingPart(), crossingPart,
			"part of the electrons that cross more than one cell in a step"),
	}
}

func (m *machine) particleChecks() []store.Check {
	n := m.control.Numerics
	t := &m.control.Averaged
	q := m.measured()
	weight := m.history[len(m.history)-1].Weight
	c := m.sim.Config()
	dx := m.plan.Case.Gap / float64(n.Cells) * c.Area(0.5*float64(n.Cells))
	center := m.rec.CenterDensity().Mean / weight
	worst, name := 0.0, ""
	for i, sp := range m.sim.Species() {
		if p := t.Collisions[i] / t.Moves[i] * float64(sp.Every); p > worst || name == "" {
			worst, name = p, sp.Name
		}
	}
	return []store.Check{
		above("collision_probability", worst, collisionStep,
			"collisions of a particle with the gas in a move, mean; largest for "+name),
		below("particles_per_cell", center*dx, perCell,
			"electrons in a cell in the middle of the gap"),
		below("particles_per_debye_length", center*q.debye()*c.Area(0.5*float64(n.Cells)), perDebye,
			"electrons in a Debye length in the middle of the gap. Their noise acts as collisions "+
				"between them, which argon feels: with four times the automatic number the density "+
				"in the middle was 15 % higher at 5 Pa, the ion flux 11 % higher at 20 Pa"),
		above("table_range", t.Beyond/math.Max(1, t.AllCollide), tableEnd,
			"part of the collisions judged by a cross section beyond the end of its data"),
	}
}

func (m *machine) balanceChecks() []store.Check {
	t := &m.control.Averaged
	// Births and losses come one by one: their difference wanders by the root of their number.
	weight := m.history[len(m.history)-1].Weight
	chance := driftErrors * math.Sqrt((t.Born+t.Lost)/weight) / (t.Born / weight)
	ions := bounds{ionBalance.warn + chance, ionBalance.fail + chance}
	rest := t.Electric - (t.FieldTo - t.FieldFrom)
	scale := math.Abs(t.Electric)
	for _, w := range t.Work {
		rest -= w
		scale = math.Max(scale, math.Abs(w))
	}
	return []store.Check{
		above("energy_balance", math.Abs(rest)/scale, balanceOfAll,
			fmt.Sprintf("energy from the drive not found in the particles or the field, %+.2f %%",
				100*rest/scale)),
		above("ion_balance", math.Abs(t.Born-t.Lost)/math.Max(t.Born, t.Lost), ions,
			fmt.Sprintf("difference of ions made and ions lost to the walls, over the average; "+
				"chance alone makes up to %.2g %%", 100*chance)),
	}
}

func (m *machine) statisticsChecks() []store.Check {
	c := &m.control
	periods := c.Averaged.Periods
	_, drift, name := m.steady(len(m.history) - periods)
	steady := above("steadiness", drift, bounds{driftErrors, 2 * driftErrors},
		"largest drift over the average, in its own standard errors: "+name)
	if ok, _, _ := m.steady(len(m.history) - periods); ok && steady.Verdict != store.OK {
		// Significant, yet too small to matter for the asked-for accuracy.
		steady.Verdict = store.OK
		steady.Text += "; below half of the asked-for accuracy"
	}
	want := m.plan.Case.Accuracy
	worst := 0.0
	for _, wall := range m.plan.substrates() {
		energy, flux := m.progressAt(wall)
		worst = math.Max(worst, energy.StdErr/energy.Mean/want.IonEnergy)
		worst = math.Max(worst, flux.StdErr/flux.Mean/want.IonFlux)
		if math.IsNaN(energy.StdErr) || math.IsNaN(flux.StdErr) {
			worst = math.NaN()
		}
	}
	n, length := m.rec.Batches()
	return []store.Check{
		steady,
		above("accuracy", worst, bounds{1, 5},
			"largest standard error of ion energy and flux at a substrate, over that asked for"),
		below("averaging_time", float64(periods)/math.Max(1, c.Residence),
			bounds{0.99 * m.plan.leastLives(), 0.1},
			fmt.Sprintf("periods averaged over those that an ion stays in the gap (%.0f)", c.Residence)),
		below("batches", float64(n), bounds{stats.MinBatches, 2},
			fmt.Sprintf("batches of %d periods from which the errors are taken", length)),
	}
}

// verdict is the worst of the checks.
func verdict(checks []store.Check) string {
	worst := store.OK
	for _, c := range checks {
		if c.Verdict == store.Fail || c.Verdict == store.Warn && worst == store.OK {
			worst = c.Verdict
		}
	}
	return worst
}
