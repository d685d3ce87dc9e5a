package pic

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"ionfall/internal/phys"
)

// used is a discharge whose particles are no longer where they were loaded.
func used(t *testing.T) *Simulation {
	t.Helper()
	d := smallDischarge()
	d.particles = 10_000
	s := d.build(t)
	mustAdvance(t, s, 200)
	return s
}

// profile returns the particle density of a species times the electrode's area per cell, summed
// over parts of the gap, in units of real particles [1/m2].
func profile(s *Simulation, species, parts int) []float64 {
	sum := make([]float64, parts)
	for c := range s.species[species].chunks {
		for _, x := range s.species[species].chunks[c].x {
			at := int(x / float64(s.config.Cells) * float64(parts))
			sum[min(at, parts-1)] += s.config.Weight
		}
	}
	return sum
}

// charge returns the charge on the electrode's area in elementary charges [1/m2].
func charge(s *Simulation) float64 {
	sum := 0.0
	for i := range s.species {
		sum += float64(s.species[i].Charge*s.species[i].Count()) * s.config.Weight
	}
	return sum
}

// pairSpread returns the sum of (E_a - E_b)^2 over neighbours in x, energies in J/m2 of the
// present weight: the variance of the energy after one of each pair was drawn and doubled.
func pairSpread(s *Simulation, i int) float64 {
	sp := &s.species[i]
	type particle struct{ x, e float64 }
	var all []particle
	for c := range sp.chunks {
		ch := &sp.chunks[c]
		for k, x := range ch.x {
			v2 := ch.vx[k]*ch.vx[k] + ch.vy[k]*ch.vy[k] + ch.vz[k]*ch.vz[k]
			all = append(all, particle{x, s.config.Weight * sp.energyPer * v2})
		}
	}
	slices.SortFunc(all, func(a, b particle) int {
		if a.x < b.x {
			return -1
		}
		return 1
	})
	sum := 0.0
	for k := 0; k+1 < len(all); k += 2 {
		sum += (all[k].e - all[k+1].e) * (all[k].e - all[k+1].e)
	}
	return sum
}

// Goal: halving keeps the charge to one particle, everywhere, and the energy on average. Method:
// counts; the profile in any part of the gap, which changes by a pair at each border at most; the
// kinetic energy of each species within the spread of the pairs it was drawn from.
func TestHalveKeepsChargeAndEnergy(t *testing.T) {
	s := used(t)
	weight, before := s.config.Weight, charge(s)
	energy, spread, counts := s.Kinetic(), []float64{}, []int{}
	var profiles [][]float64
	for i := range s.species {
		spread = append(spread, pairSpread(s, i))
		counts = append(counts, s.species[i].Count())
		profiles = append(profiles, profile(s, i, 16))
	}
	s.Halve()
	if s.config.Weight != 2*weight {
		t.Errorf("weight %g, was %g", s.config.Weight, weight)
	}
	checkNear(t, "charge", charge(s), before, 2*weight*(1+1e-9))
	for i, after := range s.Kinetic() {
		if n := s.species[i].Count(); n != counts[i]/2 && n != (counts[i]+1)/2 {
			t.Errorf("species %d: %d of %d left", i, n, counts[i])
		}
		checkMean(t, "energy", after, energy[i], math.Sqrt(spread[i]))
		for part, n := range profile(s, i, 16) {
			checkNear(t, fmt.Sprintf("part %d", part), n, profiles[i][part], 2.000001*weight)
		}
	}
	mustAdvance(t, s, 10)
}

// Goal: multiplying keeps charge and energy exactly, and the profile on average. Method: counts;
// kinetic energy to rounding; the mean position of each species, whose copies are shifted by a
// uniform number within half a cell over the number of copies.
func TestMultiplyKeepsChargeAndEnergy(t *testing.T) {
	for _, copies := range []int{2, 3} {
		s := used(t)
		before, energy := charge(s), s.Kinetic()
		var counts []int
		var means []float64
		for i := range s.species {
			counts = append(counts, s.species[i].Count())
			means = append(means, meanPosition(s, i))
		}
		s.Multiply(copies, 1)
		checkNear(t, "charge", charge(s), before, 1e-9*math.Abs(before)+1e-6*s.config.Weight)
		for i, after := range s.Kinetic() {
			n := s.species[i].Count()
			if n != copies*counts[i] {
				t.Errorf("species %d: %d particles, were %d", i, n, counts[i])
			}
			checkNear(t, "energy", after, energy[i], 1e-10*energy[i])
			// The comb of a particle is shifted by +-1/(2 copies) cells, uniformly.
			shift := 1 / (float64(copies) * math.Sqrt(12*float64(counts[i])))
			checkMean(t, "mean position", meanPosition(s, i), means[i], shift)
		}
		mustAdvance(t, s, 10)
	}
}

func meanPosition(s *Simulation, i int) float64 {
	sum := 0.0
	for c := range s.species[i].chunks {
		for _, x := range s.species[i].chunks[c].x {
			sum += x
		}
	}
	return sum / float64(s.species[i].Count())
}

// Goal: a state moves to another grid with its density and temperature. Method: from 64 cells to
// 128 and 24 with other steps, sub-cycling and chunks; without copies profile (but for rounding at
// part borders) and energy are the same; with copies the profile is smoothed over a cell.
func TestTransferKeepsProfileAndTemperature(t *testing.T) {
	for _, cells := range []int{128, 24} {
		for _, copies := range []int{1, 2} {
			from := used(t)
			d := smallDischarge()
			d.cells, d.steps, d.every, d.chunks, d.particles = cells, 400, 2, 5, 0
			to := d.build(t)
			to.Transfer(from, copies)
			checkNear(t, "charge", charge(to), charge(from), 1e-6*from.config.Weight)
			for i, e := range to.Kinetic() {
				checkNear(t, "energy", e, from.Kinetic()[i], 1e-10*e)
				// 8 parts: borders lie on nodes of all three grids.
				was := profile(from, i, 8)
				for part, n := range profile(to, i, 8) {
					bound := 1e-9 * n
					if copies > 1 { // at both borders, particles within half a coarse cell
						wide := max(1/24.0, 1/64.0)
						bound = n*8*wide + 10*from.config.Weight
					}
					checkNear(t, fmt.Sprintf("%d cells, part %d", cells, part), n, was[part], bound)
				}
			}
			mustAdvance(t, to, 10)
		}
	}
}

// Goal: Load follows the asked-for density and temperature. Method: the quiet start puts the k-th
// quantile to a particle, so that counts in parts of the gap are right to one; velocities are
// random: the mean energy within its standard error.
func TestLoadFollowsTheProfile(t *testing.T) {
	const n = 30_000
	s := mustNew(t, empty(64, 100, electrons()))
	density := make([]float64, 65)
	for j := range density {
		density[j] = 1 + float64(j) // linear, so that its integral is exact
	}
	if err := s.Load(0, n, density, 5000); err != nil {
		t.Fatal(err)
	}
	integral := func(x float64) float64 { return (x + x*x/2) / (64 + 64*64/2) }
	for part, got := range profile(s, 0, 16) {
		a, b := 4*float64(part), 4*float64(part+1)
		checkNear(t, "part of the gap", got/s.config.Weight, n*(integral(b)-integral(a)), 1)
	}
	want := 1.5 * phys.Boltzmann * 5000 * n * s.config.Weight
	checkMean(t, "energy", s.Kinetic()[0]/want, 1, math.Sqrt(2/(3.0*n)))
}

// Goal: levelling the chunks moves particles, and loses or changes none. Method: one chunk holds
// all; sums of every coordinate before and after; sizes then differ by one at most.
func TestBalance(t *testing.T) {
	s := mustNew(t, empty(64, 100, electrons()))
	for k := range 1000 {
		s.species[0].chunks[1].add(float64(k)/16, float64(k), 2, 3)
	}
	s.SetWorkers(2)
	s.Balance()
	mean, energy := meanPosition(s, 0), s.Kinetic()[0]
	if n := s.species[0].Count(); n != 1000 || mean != 999.0/32 {
		t.Errorf("%d particles with mean position %v", n, mean)
	}
	want := s.config.Weight * s.species[0].energyPer * (999*1000*1999/6 + 13*1000)
	checkNear(t, "energy", energy, want, 1e-12*want)
	for c := range s.species[0].chunks {
		if n := len(s.species[0].chunks[c].x); n < 333 || n > 334 {
			t.Errorf("chunk %d has %d", c, n)
		}
	}
}
