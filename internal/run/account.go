package run

import (
	"ionfall/internal/phys"
	"ionfall/pic"
)

// work returns the energy that the field gave a species in the period of the ledger [J/m2]: what
// it has more, and what it lost, less what came in with new particles from outside.
func work(l *pic.SpeciesLedger, before float64, electrons bool) float64 {
	e := l.Kinetic - before + l.WallEnergy[0] + l.WallEnergy[1]
	for _, loss := range l.Losses {
		e += loss
	}
	if electrons {
		// A collision's loss counts both electrons of an ionization: births bring nothing.
		return e - l.EmitEnergy
	}
	return e - l.BornEnergy
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
	for i := range l.Species {
		sp := &l.Species[i]
		w := work(sp, c.Kinetic[i], i == 0)
		row.Power = append(row.Power, w/period)
		c.Kinetic[i] = sp.Kinetic
		if i == 0 {
			continue
		}
		row.Ions += sp.Count
		for wall := range 2 {
			number[wall] += l.Weight * float64(sp.Absorbed[wall])
			energy[wall] += sp.WallEnergy[wall]
		}
	}
	row.Content = l.Weight * float64(row.Ions)
	for wall := range 2 {
		row.Flux[wall] = number[wall] / period
		if number[wall] > 0 {
			row.Energy[wall] = energy[wall] / number[wall] / phys.ElementaryCharge
		}
	}
	if c.Stage == StageAveraging {
		c.Averaged.add(l, row, c.Field, period)
	}
	c.Field = l.Field
	c.Moved += l.Moved
	m.history = append(m.history, row)
}

func (t *accountTotals) add(l *pic.Ledger, row Row, fieldBefore, period float64) {
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
		if i > 0 {
			t.Born += l.Weight * float64(sp.Born)
			t.Lost += l.Weight * float64(sp.Absorbed[0]+sp.Absorbed[1])
		}
	}
}

// rebase takes the kinetic energies afresh after the particles have been resized.
func (m *machine) rebase() { m.control.Kinetic = m.sim.Kinetic() }
