package pic

import (
	"fmt"
	"math"
	"testing"

	"ionfall/internal/phys"
)

// positionSum returns the sum of charge number times position [cells].
func positionSum(s *Simulation) float64 {
	sum := 0.0
	for i := range s.species {
		for c := range s.species[i].chunks {
			for _, x := range s.species[i].chunks[c].x {
				sum += float64(s.species[i].Charge) * x
			}
		}
	}
	return sum
}

func totalCount(s *Simulation) int {
	n := 0
	for i := range s.species {
		n += s.species[i].Count()
	}
	return n
}

// Goal: charge is conserved to the last bit, and the field obeys Gauss's law in a run. Method: a
// discharge with collisions, secondaries and reflection; at every step node numbers must add up
// to the count of particles exactly, and the wall fields differ by the enclosed charge.
func TestChargeIsConservedEveryStep(t *testing.T) {
	for _, scheme := range schemes() {
		d := smallDischarge()
		d.scheme = scheme
		s := d.build(t)
		count := make([]int, 2)
		checked := 0
		watch(s, &spy{
			due:       always,
			particles: func(_ *Frame, species, _ int, p Particles) { count[species] += len(p.X) },
			reduce: func(f *Frame, _, _ int) {
				charge := 0.0
				for i := range f.Number {
					sum := 0.0
					for _, n := range f.Number[i] {
						sum += n
					}
					if sum != float64(count[i]) {
						t.Errorf("step %d: %v at the nodes of species %d, %d particles",
							f.Step, sum, i, count[i])
					}
					charge += float64(s.species[i].Charge) * sum
					count[i] = 0
				}
				field := phys.ElementaryCharge * f.Weight / phys.Epsilon0
				size := field * 8000
				checkNear(t, "Gauss", f.E[d.cells]-f.E[0], field*charge, 1e-11*size)
				checked++
			},
		})
		mustAdvance(t, s, 1000)
		if checked != 1000 || t.Failed() {
			t.Fatalf("%v: %d steps checked", scheme, checked)
		}
		checkCounts(t, s, d.particles)
	}
}

// checkCounts compares the ledger from the start with what is left of the loaded particles.
func checkCounts(t *testing.T, s *Simulation, loaded int) {
	t.Helper()
	l := s.TakeLedger()
	for i, sp := range l.Species {
		want := int64(loaded) + sp.Born + sp.Emitted[0] + sp.Emitted[1] -
			sp.Absorbed[0] - sp.Absorbed[1]
		if sp.Count != want || sp.Count != int64(s.species[i].Count()) || sp.Absorbed[0] == 0 {
			t.Errorf("species %d: %d particles, balance %d: %+v", i, sp.Count, want, sp)
		}
	}
	e, ion := l.Species[0], l.Species[1]
	if e.Born < 100 || e.Born != ion.Born || e.Emitted[0] == 0 || e.Reflected[1] == 0 {
		t.Errorf("born %d and %d, emitted %v, reflected %v: want pairs, and some of each",
			e.Born, ion.Born, e.Emitted, e.Reflected)
	}
	// Ions are born with the gas's velocities, whatever their sub-cycling.
	thermal := 1.5 * phys.Boltzmann * 300 * l.Weight * float64(ion.Born)
	checkMean(t, "energy of new ions", ion.BornEnergy/thermal, 1,
		math.Sqrt(2/(3*float64(ion.Born))))
	if l.Steps != 1000 || l.Step != 1000 || l.Moved == 0 {
		t.Errorf("ledger covers %d steps to %d, %d moves", l.Steps, l.Step, l.Moved)
	}
}

// Goal: the current found from the wall's charge balance is the mean of all charges' induced
// currents. Method: J dt = eps0/L dV + (e W/L) sum of z dx at every step, dx ending at the wall
// for those absorbed; pairs are born at one place and add nothing. Emission is off: emitted
// electrons start at the wall, inside the step. The difference is the fixed-point rounding of
// the deposit, 2^-24 cells a particle, twice.
//
// Ref: W. Shockley, J. Appl. Phys. 9, 635 (1938); S. Ramo, Proc. IRE 27, 584 (1939).
func TestCurrentIsTheInducedOne(t *testing.T) {
	for _, scheme := range schemes() {
		d := smallDischarge()
		d.scheme, d.plain = scheme, true
		s := d.build(t)
		var last Circuit
		next := d.build(t)
		watch(next, &spy{step: func(c Circuit) { last = c }})
		mustAdvance(t, s, 300)
		s.TakeLedger()
		c := s.config
		dt, perCell := c.TimeStep(), phys.ElementaryCharge*c.Weight/float64(c.Cells)
		conducted := 0.0
		for range 60 {
			before, v := positionSum(s), c.Drive.At(float64(s.step)/float64(d.steps))
			mustAdvance(t, s, 1)
			l := s.TakeLedger()
			moved := positionSum(s) - before
			for i, sp := range l.Species {
				moved += float64(s.species[i].Charge) * float64(c.Cells) * float64(sp.Absorbed[1])
			}
			dv := c.Drive.At(float64(s.step)/float64(d.steps)) - v
			want := (phys.Epsilon0/c.Gap*dv + perCell*moved) / dt
			// The current of this step is read at the start of the next: look ahead by a copy.
			if err := restore(t, next, stateBytes(t, s)); err != nil {
				t.Fatal(err)
			}
			mustAdvance(t, next, 1)
			rounding := 0x1p-23 * float64(totalCount(s)) * perCell / dt
			checkNear(t, fmt.Sprintf("%v, step %d", scheme, s.step), last.Current, want, rounding)
			conducted = max(conducted, math.Abs(perCell*moved/dt)/rounding)
		}
		if conducted < 1e3 {
			t.Errorf("conduction current is only %g roundings", conducted)
		}
	}
}
