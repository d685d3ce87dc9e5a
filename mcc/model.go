package mcc

import (
	"fmt"
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// Settings describe the projectile and the units of a Model.
type Settings struct {
	Projectile string  // "e", or an ion's name
	Mass       float64 // m [kg]
	Unit       float64 // one unit of velocity [m/s]
	TimeStep   float64 // dt of this species [s]
	TopEnergy  float64 // largest projectile energy to tabulate [eV]; beyond, rates stay
}

// Model collides one projectile species with the whole gas. It is read-only and may be shared
// by workers.
type Model struct {
	settings Settings
	channels []channel // all, in the order of Processes
	groups   []group
	rate     float64 // candidates a particle and step, nu_max dt
}

// group is what is judged by one relative speed: the channels with one component of the gas.
type group struct {
	table   table
	first   int     // index of its first channel
	upTo    float64 // cumulated share of candidates
	thermal float64
}

// NewModel prepares the collisions of the projectile with every background.
func NewModel(set Settings, gas []Background) (*Model, error) {
	m := &Model{settings: set}
	top := math.Sqrt(2 * set.TopEnergy * phys.ElementaryCharge / set.Mass)
	electrons := set.Projectile == "e"
	for _, b := range gas {
		first := len(m.channels)
		list := b.Gas.IonNeutral
		if electrons {
			list = b.Gas.Electron
		}
		for i := range list {
			p := &list[i]
			if p.Projectile != set.Projectile {
				continue
			}
			if !supported(p.Kind, electrons) {
				return nil, fmt.Errorf("mcc: process %q of %s on %s: %v collisions are not implemented",
					p.Name, set.Projectile, b.Gas.Name, p.Kind)
			}
			m.channels = append(m.channels, newChannel(p, b, set.Mass, set.Unit))
		}
		if len(m.channels) > first {
			// The target adds its own speed to the fastest relative speed.
			reach := fastestTarget * b.thermalSpeed()
			m.groups = append(m.groups, group{
				table: newTable(m.channels[first:], top+reach, reach, set.Unit), first: first,
				thermal: b.thermalSpeed() / set.Unit,
			})
		}
	}
	if len(m.channels) == 0 {
		return nil, fmt.Errorf("mcc: no cross section of %s with this gas", set.Projectile)
	}
	return m, m.finish()
}

func supported(k crosssections.Kind, electrons bool) bool {
	switch k {
	case crosssections.Elastic, crosssections.Excitation, crosssections.Ionization:
		return electrons
	case crosssections.Isotropic, crosssections.Backscatter:
		return !electrons
	default:
		return false
	}
}

func (m *Model) finish() error {
	total := 0.0
	for i := range m.groups {
		total += m.groups[i].table.max
		m.groups[i].upTo = total
	}
	for i := range m.groups {
		m.groups[i].upTo /= total
	}
	m.groups[len(m.groups)-1].upTo = 1
	m.rate = total * m.settings.TimeStep
	if m.rate > maxCandidates {
		return fmt.Errorf("mcc: %s: %.3g collision candidates a step, want at most %g: "+
			"the time step %.3g s is too long for this gas density",
			m.settings.Projectile, m.rate, maxCandidates, m.settings.TimeStep)
	}
	return nil
}

// Processes names the channels in the order of Outcome.Counts.
func (m *Model) Processes() []*crosssections.Process {
	list := make([]*crosssections.Process, len(m.channels))
	for i := range m.channels {
		list[i] = m.channels[i].process
	}
	return list
}

// CandidateRate returns nu_max dt, the mean number of candidates a particle and step.
func (m *Model) CandidateRate() float64 { return m.rate }

// Frequency returns the collision frequency [1/s] of a particle at relative speed g [m/s],
// for each channel, from the same table that Collide uses.
func (m *Model) Frequency(g float64) []float64 {
	list := make([]float64, len(m.channels))
	for _, gr := range m.groups {
		n := gr.table.channels
		at := min(g/m.settings.Unit*gr.table.perSpeed, tableRows)
		r := min(int(at), tableRows-1)
		s := at - float64(r)
		below := 0.0
		for c := range n {
			sum := (1-s)*gr.table.rows[r*n+c] + s*gr.table.rows[(r+1)*n+c]
			list[gr.first+c] = (sum - below) * gr.table.max
			below = sum
		}
	}
	return list
}
