package run

import (
	"math"

	"ionfall/internal/phys"
	"ionfall/internal/stats"
	"ionfall/pic"
)

// work returns the energy that the field gave a species in the period of the ledger [J/m2]: what
// it has more, and what it lost, less what came in with new particles from outside.
func work(l *pic.SpeciesLedger, before float64, electrons bool) float64 {
	e := l.Kinetic - before + l.WallEnergy[0] + l.WallEnergy[1] + l.GoneEnergy
	for _, loss := range l.Losses {
		e += loss
	}
	if electrons {
		// A collision's loss counts both electrons of an ionization: births bring nothing.
		return e - l.EmitEnergy
	}
	return e - l.BornEnergy
}

// gasHeating returns the energy that collisions of a heavy species left in the gas [J/m2]: what it
// lost, less what fast neutrals began with, which ions had lost before.
func gasHeating(l *pic.SpeciesLedger, charge int) float64 {
	sum := 0.0
	for _, loss := range l.Losses {
		sum += loss
	}
	if charge == 0 {
		sum -= l.BornEnergy
	}
	return sum
}

// account enters a period's ledger into the history and, while averaging, into the totals.
func (m *machine) account(l *pic.Ledger) {
	c := &m.control
	period := m.plan.period()
	row := Row{
		Stage: c.Stage, Weight: l.Weight, Electrons: l.Species[0].Count,
		TotalPower: l.Electric / period, FieldEnergy: l.Field, Event: c.Event,
	}
	c.Event = ""
	var energy, number [2]float64
	negative := int64(0)
	species := m.sim.Species()
	for i := range l.Species {
		sp := &l.Species[i]
		w := work(sp, c.Kinetic[i], i == 0)
		row.Power = append(row.Power, w/period)
		c.Kinetic[i] = sp.Kinetic
		if i > 0 {
			row.GasHeating += gasHeating(sp, species[i].Charge) / period
		}
		if charge := species[i].Charge; charge <= 0 {
			if i > 0 {
				negative += int64(-charge) * sp.Count
			}
			continue
		}
		row.Ions += sp.Count
		for wall := range 2 {
			number[wall] += l.Weight * float64(sp.Absorbed[wall])
			energy[wall] += sp.WallEnergy[wall]
		}
	}
	c.countNegative(species, l)
	row.Content = l.Weight * float64(row.Ions-negative)
	for wall := range 2 {
		row.Flux[wall] = number[wall] / period / m.wallArea(wall)
		if number[wall] > 0 {
			row.Energy[wall] = energy[wall] / number[wall] / phys.ElementaryCharge
		}
	}
	if lost := (row.Flux[0] + row.Flux[1]*m.wallArea(1)) * period; lost > 0 {
		now := row.Content / lost
		if c.Residence == 0 {
			c.Residence = now
		}
		c.Residence += 0.05 * (now - c.Residence)
	}
	if c.Stage == StageAveraging {
		c.Averaged.add(l, row, species, c.Field, period)
	}
	c.Field = l.Field
	c.Moved += l.Moved
	m.history = append(m.history, row)
}

func (t *accountTotals) add(l *pic.Ledger, row Row, species []pic.Species,
	fieldBefore, period float64,
) {
	if t.Periods == 0 {
		t.FieldFrom = fieldBefore
		t.Work = make([]float64, len(l.Species))
		t.Collisions = make([]float64, len(l.Species))
		t.Moves = make([]float64, len(l.Species))
	}
	t.Periods++
	t.Electric += l.Electric
	t.FieldTo = l.Field
	for i := range l.Species {
		sp := &l.Species[i]
		t.Work[i] += row.Power[i] * period
		for _, n := range sp.Collisions {
			t.Collisions[i] += float64(n)
			t.AllCollide += float64(n)
		}
		t.Beyond += float64(sp.Beyond)
		t.Moves[i] += float64(sp.Count) * float64(l.Steps)
		if species[i].Charge > 0 {
			t.Born += l.Weight * float64(sp.Born)
			t.Lost += l.Weight * float64(sp.Absorbed[0]+sp.Absorbed[1]+sp.Gone)
		}
	}
}

// wander returns the relative standard error that the slow wander of the ion number leaves in
// the mean density over the average.
//
// Births and losses one by one make the number n of simulated ions wander by 1/sqrt(n), with a
// memory of the time T that an ion stays: the number relaxes about as fast as it is renewed. Over M
// periods the mean of such a process (Ornstein-Uhlenbeck) has the variance
//
//	(1/n) (2T/M) [1 - (T/M)(1 - exp(-M/T))]
//
// Batch means see it only when M is many times T; until then it is the least error that is
// stated. In argon at 5 Pa, content over 450 periods scattered by 0.55 to 0.77 % where 1/sqrt(n)
// is 0.63 to 0.88 %.
func (m *machine) wander() float64 {
	c := &m.control
	if len(m.history) == 0 || c.Residence == 0 || c.Averaged.Periods == 0 {
		return 0
	}
	ions := float64(m.history[len(m.history)-1].Ions)
	q := c.Residence / float64(c.Averaged.Periods)
	return math.Sqrt(2 * q * (1 - q*(1-math.Exp(-1/q))) / ions)
}

// atLeast raises an estimate's error to that of the wander, for what follows the density, and adds
// what the number of negative ions makes.
func (m *machine) atLeast(e stats.Estimate) stats.Estimate {
	_, effect := m.negativeError(true)
	return m.withErrors(e, effect)
}

// withErrors does so for a given part that negative ions make.
func (m *machine) withErrors(e stats.Estimate, negative float64) stats.Estimate {
	if least := m.wander() * math.Abs(e.Mean); e.StdErr < least {
		e.StdErr = least
	}
	if negative > 0 {
		e.StdErr = math.Hypot(e.StdErr, negative*e.Mean)
	}
	return e
}

// progressAt returns the mean ion energy and flux at a wall so far, with their errors.
func (m *machine) progressAt(wall pic.Wall) (energy, flux stats.Estimate) {
	energy, flux = m.rec.Progress(wall)
	return energy, m.atLeast(flux)
}

// wallArea is the area of a wall over that of the powered electrode.
func (m *machine) wallArea(wall int) float64 {
	c := m.sim.Config()
	return c.WallArea(pic.Wall(wall))
}

// rebase takes the kinetic energies afresh after the particles have been resized.
func (m *machine) rebase() { m.control.Kinetic = m.sim.Kinetic() }
