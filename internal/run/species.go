package run

import (
	"fmt"
	"math"
	"slices"

	"ionfall/crosssections"
	"ionfall/internal/inputerr"
	"ionfall/internal/phys"
	"ionfall/mcc"
	"ionfall/pic"
)

// heavySpecies is an ion or a fast neutral of a run.
type heavySpecies struct {
	Name     string
	Mass     float64 // [kg]
	Charge   int
	Diameter float64 // of a neutral [A]; 0 if unknown
	Affinity crosssections.Datum
}

// label is the name of the species in the simulation.
func (h heavySpecies) label() string {
	if h.Charge == 0 {
		return pic.FastPrefix + h.Name
	}
	return h.Name
}

// heavySpecies are the ions that can come into being: those that electrons make of the gases of the
// mixture, and those that the collisions of these make, and so on; then fast neutrals.
func (p *Plan) heavySpecies() []heavySpecies {
	var list []heavySpecies
	add := func(name string, mass float64, charge int) {
		known := slices.ContainsFunc(list, func(h heavySpecies) bool { return h.Name == name })
		if charge == 0 || name == crosssections.ElectronName || known {
			return
		}
		h := heavySpecies{Name: name, Mass: mass, Charge: charge}
		for _, g := range p.Gases {
			if ion, ok := g.Ion(name); ok {
				if h.Affinity.Value == 0 {
					h.Affinity = ion.Affinity
				}
			}
		}
		list = append(list, h)
	}
	for _, g := range p.Gases {
		for k := range g.Electron {
			for _, out := range g.Electron[k].Out {
				mass := out.Mass
				if ion, ok := g.Ion(out.Name); ok {
					mass = ion.Mass
				}
				add(out.Name, mass, out.Charge)
			}
		}
	}
	for done := 0; done < len(list); done++ {
		for _, q := range p.reactionsOf(list[done]) {
			for _, out := range q.Out {
				add(out.Name, out.Mass, out.Charge)
			}
		}
	}
	// Positive ions first.
	slices.SortStableFunc(list, func(a, b heavySpecies) int { return sign(b.Charge) - sign(a.Charge) })
	return append(list, p.fastNeutrals(list)...)
}

func sign(charge int) int {
	switch {
	case charge > 0:
		return 1
	case charge < 0:
		return -1
	}
	return 0
}

// settings are those of the collisions of a species, but for units and steps.
func (p *Plan) settings(h heavySpecies) mcc.Settings {
	set := mcc.Settings{Projectile: h.Name, Mass: h.Mass, Charge: h.Charge, Unit: 1, TimeStep: 1e-20}
	set.TopEnergy = 1
	set.Haste = p.haste
	set.Sharing, set.Scattering = p.sharing(), p.scattering()
	if threshold := p.fastThreshold(); threshold > 0 && h.Name != crosssections.ElectronName {
		set.Recoil = threshold
		if h.Charge == 0 {
			set.Neutral, set.Diameter, set.Stop = true, h.Diameter, threshold
		}
	}
	return set
}

// reactionsOf are the collisions of an ion with the mixture that make other particles of it.
func (p *Plan) reactionsOf(h heavySpecies) []*crosssections.Process {
	var list []*crosssections.Process
	for _, b := range p.backgrounds() {
		list = append(list, p.reactionsWith(h, b)...)
	}
	return list
}

// reactionsWith are those with one gas of the mixture.
func (p *Plan) reactionsWith(h heavySpecies, b mcc.Background) []*crosssections.Process {
	var list []*crosssections.Process
	for _, q := range mcc.Collisions(p.settings(h), p.backgrounds(), b) {
		if q.Kind == crosssections.Reaction {
			list = append(list, q)
		}
	}
	return list
}

// fastNeutrals are the neutrals that are followed: the molecules of the gases, and what reactions
// make of them.
func (p *Plan) fastNeutrals(ions []heavySpecies) []heavySpecies {
	if p.fastThreshold() <= 0 {
		return nil
	}
	var list []heavySpecies
	for _, g := range p.Gases {
		list = append(list, heavySpecies{Name: g.Name, Mass: g.Mass, Diameter: g.Diameter.Value})
	}
	for _, ion := range ions {
		for _, q := range p.reactionsOf(ion) {
			for _, out := range q.Out {
				known := slices.ContainsFunc(list, func(h heavySpecies) bool { return h.Name == out.Name })
				if out.Charge == 0 && !known {
					list = append(list, heavySpecies{Name: out.Name, Mass: out.Mass})
				}
			}
		}
	}
	return list
}

// fastThreshold is the energy above which neutrals are followed [eV]; 0 if they are not.
func (p *Plan) fastThreshold() float64 {
	if p.Case.Gas.FastNeutrals == nil {
		return 0
	}
	return p.Case.Gas.FastNeutrals.Threshold
}

func (p *Plan) leastNeutral(h heavySpecies) float64 {
	if h.Charge != 0 {
		return 0
	}
	return p.fastThreshold()
}

// missingCollisions finds species whose collisions with a part of the mixture are neither known nor
// can be estimated: left out, they would fall through the sheath as if that gas were not there.
func (p *Plan) missingCollisions() inputerr.List {
	var bad inputerr.List
	gas := p.backgrounds()
	for _, h := range p.heavy {
		for _, b := range gas {
			if len(mcc.Collisions(p.settings(h), gas, b)) > 0 {
				continue
			}
			got := b.Gas.Name
			if owner := p.ownerOf(h); owner != "" && owner != b.Gas.Name {
				got += " together with " + owner
			}
			bad = append(bad, p.Case.Errorf("gas.mixture."+b.Gas.Name, got,
				fmt.Sprintf("a gas whose collisions with %s are known", h.label()), ""))
		}
	}
	return bad
}

// ownerOf is the first gas of the mixture that declares the ion.
func (p *Plan) ownerOf(h heavySpecies) string {
	for _, g := range p.Gases {
		if _, ok := g.Ion(h.Name); ok {
			return g.Name
		}
	}
	return ""
}

// fill loads a uniform plasma: electrons, positive ions in the proportions that production and
// reactions are expected to give, and negative ions in the bulk with positive ones beside them.
func (p *Plan) fill(s *pic.Simulation, particles int, electronTemperature float64) error {
	nodes := s.Config().Cells + 1
	uniform, bulk := make([]float64, nodes), make([]float64, nodes)
	for j := range uniform {
		uniform[j] = 1
		x := (float64(j)/float64(nodes-1) - 0.5) / bulkHalfWidth
		bulk[j] = math.Max(0, 1-x*x)
	}
	if err := s.Load(0, particles, uniform, electronTemperature); err != nil {
		return err
	}
	density := s.Config().Weight * float64(particles) / p.Case.Gap
	start := p.composition(electronTemperature*phys.Boltzmann/phys.ElementaryCharge, density)
	all := 0.0 // negative ions over electrons
	for _, part := range start.negative {
		all += part
	}
	both := make([]float64, nodes)
	for j := range both {
		both[j] = 1 + all*bulk[j]/mean(bulk)
	}
	positive := particles
	for i, part := range start.negative {
		n := int(math.Round(part * float64(particles)))
		if err := s.Load(1+len(start.positive)+i, n, bulk, p.Case.Gas.Temperature); err != nil {
			return err
		}
		positive += n
	}
	loaded, whole := 0, 0.0
	for i, part := range start.positive {
		whole += part
		upTo := min(positive, int(math.Round(whole*float64(positive))))
		if i == len(start.positive)-1 {
			upTo = positive
		}
		if err := s.Load(1+i, upTo-loaded, both, p.Case.Gas.Temperature); err != nil {
			return err
		}
		loaded = upTo
	}
	return nil
}

// bulkHalfWidth is the part of the gap, on either side of its middle, that negative ions fill at
// the start.
const bulkHalfWidth = 0.35

// mean is that of a function that is linear between nodes.
func mean(v []float64) float64 {
	sum := -0.5 * (v[0] + v[len(v)-1])
	for _, x := range v {
		sum += x
	}
	return sum / float64(len(v)-1)
}
