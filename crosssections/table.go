package crosssections

import (
	"math"
	"sort"
)

// Table is a cross section against energy. See the package documentation for the policy between
// and outside the rows.
type Table struct {
	Onset        float64   // the cross section is zero below it [eV]
	Energy       []float64 // strictly increasing [eV]
	CrossSection []float64 // one an energy [m2]
	// ValidTo is the energy up to which the source means its numbers, where the rows go on
	// [eV]; 0 means up to the last row.
	ValidTo float64
}

// At is the cross section at the energy [m2].
func (t *Table) At(energyEV float64) float64 {
	n := len(t.Energy)
	if n == 0 || energyEV < t.Onset {
		return 0
	}
	if energyEV <= t.Energy[0] {
		return t.CrossSection[0]
	}
	if energyEV > t.Energy[n-1] {
		return t.continuation(energyEV)
	}
	i := sort.SearchFloat64s(t.Energy, energyEV)
	if i == n {
		return math.NaN() // the energy is not a number
	}
	e0, e1 := t.Energy[i-1], t.Energy[i]
	q0, q1 := t.CrossSection[i-1], t.CrossSection[i]
	return q0 + (q1-q0)*((energyEV-e0)/(e1-e0))
}

// continuation is the value above the last row: the power law through the last two rows, held
// constant where that would rise.
func (t *Table) continuation(energyEV float64) float64 {
	n := len(t.Energy)
	last := t.CrossSection[n-1]
	if n == 1 || last == 0 || t.CrossSection[n-2] <= last || t.Energy[n-2] <= 0 {
		return last
	}
	slope := math.Log(last/t.CrossSection[n-2]) / math.Log(t.Energy[n-1]/t.Energy[n-2])
	return last * math.Pow(energyEV/t.Energy[n-1], slope)
}

// scaled is the table with other energies, times the factor.
func (t *Table) scaled(factor float64) Table {
	s := *t
	if factor == 1 {
		return s
	}
	s.Energy = make([]float64, len(t.Energy))
	for i, e := range t.Energy {
		s.Energy[i] = factor * e
	}
	s.Onset, s.ValidTo = factor*t.Onset, factor*t.ValidTo
	return s
}

// Max is the energy of the last row [eV].
func (t *Table) Max() float64 {
	if len(t.Energy) == 0 {
		return 0
	}
	return t.Energy[len(t.Energy)-1]
}

// Limit is the energy up to which the source covers the table [eV].
func (t *Table) Limit() float64 {
	if t.ValidTo > 0 {
		return min(t.ValidTo, t.Max())
	}
	return t.Max()
}

// Beyond tells whether the energy is above what the source covers: At still gives a number, but
// it is an extrapolation, and whoever uses it should say so.
func (t *Table) Beyond(energyEV float64) bool { return energyEV > t.Limit() }

// onset is where the cross section of a process starts: nothing is invented between a threshold
// and a first row above it. Attachment is zero below its first row even without a threshold: it
// may be a resonance, and held down to slow electrons it would eat them all.
func onset(kind Kind, threshold float64, energy []float64) float64 {
	if len(energy) == 0 || threshold <= 0 && kind != Attachment {
		return 0
	}
	return max(threshold, energy[0])
}
