package mcc

import (
	"fmt"
	"math"
	"slices"

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
	// Charge of the projectile in elementary charges. For an ion whose elastic collisions with a gas
	// are not known they are estimated; without it, that is an error.
	Charge int
	// Neutral is the projectile a fast neutral, of the Diameter [A] if it is known.
	Neutral  bool
	Diameter float64
	// Haste multiplies the rates of attachment, for what is to come to its balance faster; below 1
	// it is 1.
	Haste float64
	// Recoil is the energy above which a target that was hit is reported [eV]; 0 for none.
	Recoil float64
	// Stop is the energy below which a projectile ends after a collision [eV]; 0 for none.
	Stop       float64
	Sharing    Sharing
	Scattering Scattering
}

// Model collides one projectile species with the whole gas. It is read-only and may be shared
// by workers.
type Model struct {
	settings Settings
	channels []channel // all, in the order of Processes
	groups   []group
	rate     float64 // candidates a particle and step, nu_max dt
	takes    bool    // some collisions end the projectile
	recoils  bool    // targets that were hit or slow projectiles are to be noticed
	stop2    float64 // square of the speed of Stop, caller's unit
}

// group is what is judged by one relative speed: the channels with one component of the gas.
type group struct {
	table   table
	first   int     // index of its first channel
	upTo    float64 // cumulated share of candidates
	thermal float64
	recoil2 float64 // square of the speed of a target with the energy Recoil; 0 for none
}

// NewModel prepares the collisions of the projectile with every background.
func NewModel(set Settings, gas []Background) (*Model, error) {
	m := &Model{settings: set}
	top := math.Sqrt(2 * set.TopEnergy * phys.ElementaryCharge / set.Mass)
	electrons := set.Projectile == "e"
	square := func(energyEV, mass float64) float64 { // of a speed, in the caller's unit
		return 2 * energyEV * phys.ElementaryCharge / mass / (set.Unit * set.Unit)
	}
	m.stop2 = square(set.Stop, set.Mass)
	m.recoils = !electrons && (set.Recoil > 0 || set.Stop > 0)
	for _, b := range gas {
		first := len(m.channels)
		for _, p := range processesOf(&set, gas, b) {
			if err := simulated(&set, p, b); err != nil {
				return nil, err
			}
			m.channels = append(m.channels, newChannel(p, b, &set))
		}
		if len(m.channels) > first {
			// The target adds its own speed to the fastest relative speed.
			reach := fastestTarget * b.thermalSpeed()
			m.groups = append(m.groups, group{
				table: newTable(m.channels[first:], top+reach, reach, set.Unit), first: first,
				thermal: b.thermalSpeed() / set.Unit,
				recoil2: square(set.Recoil, b.Gas.Mass),
			})
		}
	}
	if len(m.channels) == 0 {
		return nil, fmt.Errorf("mcc: no cross section of %s with this gas", set.Projectile)
	}
	return m, m.finish()
}

// Collisions are the collisions of the projectile with a component of the gas: those that are
// published, and estimates where nothing is.
func Collisions(set Settings, gas []Background, b Background) []*crosssections.Process {
	return processesOf(&set, gas, b)
}

// Check tells whether the collisions of the projectile with a part of the gas can be simulated.
func Check(set Settings, gas []Background, b Background) error {
	for _, p := range processesOf(&set, gas, b) {
		if err := simulated(&set, p, b); err != nil {
			return err
		}
	}
	return nil
}

func simulated(set *Settings, p *crosssections.Process, b Background) error {
	if !supported(p.Kind, set.Projectile == crosssections.ElectronName) {
		return fmt.Errorf("mcc: process %q of %s on %s: %v collisions are not implemented",
			p.Name, set.Projectile, b.Gas.Name, p.Kind)
	}
	return complete(p, b)
}

// processesOf are the collisions of the projectile with a component of the gas, estimated where
// nothing is published.
func processesOf(set *Settings, gas []Background, b Background) []*crosssections.Process {
	var list []*crosssections.Process
	if set.Projectile == crosssections.ElectronName {
		for i := range b.Gas.Electron {
			if p := &b.Gas.Electron[i]; p.Projectile == set.Projectile {
				list = append(list, p)
			}
		}
		return list
	}
	elastic := false
	for _, from := range gas {
		all := from.Gas.IonNeutral
		if set.Neutral {
			all = from.Gas.Neutral
		}
		for i := range all {
			p := &all[i]
			onThis := p.Target == b.Gas.Name || p.Target == "" && from.Gas == b.Gas
			if p.Projectile == set.Projectile && onThis {
				list = append(list, p)
				elastic = elastic || p.Kind == crosssections.Isotropic ||
					p.Kind == crosssections.Backscatter
			}
		}
	}
	if elastic {
		return list
	}
	if p, ok := estimated(set, b, list); ok {
		list = append(list, &p)
	}
	return list
}

// estimated is the elastic scattering of an ion or a fast neutral that nothing is published about.
func estimated(set *Settings, b Background, known []*crosssections.Process) (
	crosssections.Process, bool,
) {
	if set.Neutral {
		return crosssections.DefaultNeutral(set.Projectile, set.Diameter, b.Gas)
	}
	if set.Charge == 0 {
		return crosssections.Process{}, false
	}
	var reactions []crosssections.Process
	for _, p := range known {
		reactions = append(reactions, *p)
	}
	ion := crosssections.Ion{Name: set.Projectile, Mass: set.Mass, Charge: set.Charge}
	return crosssections.DefaultElastic(ion, b.Gas, reactions)
}

func supported(k crosssections.Kind, electrons bool) bool {
	switch k {
	case crosssections.Elastic, crosssections.Ionization, crosssections.Attachment:
		return electrons
	case crosssections.Isotropic, crosssections.Backscatter, crosssections.Reaction:
		return !electrons
	default:
		return electrons && k.Excites()
	}
}

// complete demands masses of all products of a reaction.
func complete(p *crosssections.Process, b Background) error {
	if p.Kind != crosssections.Attachment && p.Kind != crosssections.Reaction {
		return nil
	}
	ok := len(p.Out) > 0
	for _, out := range p.Out {
		ok = ok && out.Mass > 0
	}
	if !ok {
		return fmt.Errorf("mcc: process %q on %s: the mass of a product is not known", p.Name,
			b.Gas.Name)
	}
	return nil
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
	m.takes = m.stop2 > 0 || slices.ContainsFunc(m.channels, func(c channel) bool { return c.takes() })
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

// Targets names the gas of each channel, in the order of Processes.
func (m *Model) Targets() []string {
	list := make([]string, len(m.channels))
	for i := range m.channels {
		list[i] = m.channels[i].target
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
