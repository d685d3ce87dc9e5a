package run

import (
	"math"
	"slices"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/mcc"
	"ionfall/pic"
)

const (
	// pairTop is the energy of relative motion up to which pairs are tabulated [eV]: that of the
	// electrons of a discharge, as ions of opposite charge meet in the bulk alone.
	pairTop = 100.0
	// pairsAPeriod is about how often pairs are looked for in a period: their rates are some
	// thousand a second.
	pairsAPeriod = 8
	// mostHaste is the largest factor by which the pilot's negative ions come and go faster.
	mostHaste = 30.0
	// hastyLoss is the part of the electrons' losses that attachment may make up in the pilot.
	hastyLoss = 0.03
)

// pairs are the reactions of the charged species of the run with each other: those of the gases,
// and the neutralization of ions that none of them has.
func (p *Plan) pairs() []crosssections.Pair {
	var list []crosssections.Pair
	have := func(list []crosssections.Pair, a, b string) bool {
		return slices.ContainsFunc(list, func(q crosssections.Pair) bool {
			return q.Reactants == [2]string{a, b} || q.Reactants == [2]string{b, a}
		})
	}
	for _, g := range p.Gases {
		others := list // of other gases
		for _, q := range g.Pairs {
			a, b := q.Reactants[0], q.Reactants[1]
			if p.speciesIndex(a) >= 0 && p.speciesIndex(b) >= 0 && !have(others, a, b) {
				list = append(list, q)
			}
		}
	}
	for _, a := range p.heavy {
		for _, b := range p.heavy {
			if a.Charge != 1 || b.Charge != -1 || have(list, a.Name, b.Name) {
				continue
			}
			q, ok := crosssections.DefaultNeutralization(
				crosssections.Ion{Name: a.Name, Mass: a.Mass, Charge: a.Charge},
				crosssections.Ion{Name: b.Name, Mass: b.Mass, Charge: b.Charge, Affinity: b.Affinity})
			if ok {
				list = append(list, q)
			}
		}
	}
	return list
}

// speciesIndex is the index of a species in the simulation, -1 for none.
func (p *Plan) speciesIndex(name string) int {
	if name == crosssections.ElectronName {
		return 0
	}
	i := slices.IndexFunc(p.heavy, func(h heavySpecies) bool {
		return h.Name == name && h.Charge != 0
	})
	if i < 0 {
		return -1
	}
	return i + 1
}

// neutralIndex is the index of the fast species of the one neutral among the products, 0 for none.
func (p *Plan) neutralIndex(products []string) int {
	neutrals := slices.DeleteFunc(slices.Clone(products), func(name string) bool {
		return name == crosssections.ElectronName
	})
	if len(neutrals) != 1 {
		return 0
	}
	return 1 + slices.IndexFunc(p.heavy, func(h heavySpecies) bool {
		return h.Name == neutrals[0] && h.Charge == 0
	})
}

// addPairs gives the simulation the reactions of charged species with each other.
func (p *Plan) addPairs(c *pic.Config, n Numerics) {
	for _, q := range p.pairs() {
		table := q.Table
		// What ends negative ions is as hasty as what makes them.
		ends := q.Reactants[0] != crosssections.ElectronName || q.Kind == crosssections.Detachment
		if haste := p.haste; haste > 1 && ends {
			table.CrossSection = slices.Clone(table.CrossSection)
			for i := range table.CrossSection {
				table.CrossSection[i] *= haste
			}
		}
		reaction := pic.PairReaction{
			A: p.speciesIndex(q.Reactants[0]), B: p.speciesIndex(q.Reactants[1]),
			Rate: mcc.NewPairRate(&table, q.Masses, pairTop),
		}
		if q.Kind == crosssections.Detachment {
			reaction.Detach = mcc.NewDetachment(q.Masses, q.Threshold, p.sharing())
			reaction.Neutral = p.neutralIndex(q.Products)
		}
		c.Pairs = append(c.Pairs, reaction)
	}
	moves := n.StepsPerPeriod / n.IonSubsteps
	c.PairEvery = n.IonSubsteps
	for k := 2; k <= moves/pairsAPeriod; k++ {
		if moves%k == 0 {
			c.PairEvery = k * n.IonSubsteps
		}
	}
}

// pilotHaste is the factor by which the pilot's attachment and neutralization are faster, so that
// negative ions, which live for a millisecond, reach their balance: both by the same factor, so
// that it stays where it is, and not so much that attachment matters to the electrons.
func (p *Plan) pilotHaste(te float64) float64 {
	if !slices.ContainsFunc(p.heavy, func(h heavySpecies) bool { return h.Charge < 0 }) {
		return 1
	}
	return math.Max(1, math.Min(mostHaste, hastyLoss/(startLife*p.attachment(te))))
}

// attachment is the frequency of attachment of an electron at the temperature [eV], in 1/s.
func (p *Plan) attachment(te float64) float64 {
	sum := 0.0
	for i, g := range p.Gases {
		for k := range g.Electron {
			if g.Electron[k].Kind == crosssections.Attachment {
				sum += p.gasDensity() * p.Case.Gas.Mixture[i].Fraction *
					maxwellRate(&g.Electron[k].Table, te)
			}
		}
	}
	return sum
}

// negativeStart is the negative ions over the electrons of the density [1/m3] at which as many are
// made as ended by positive ions (k) and by electrons (d): r (1 + r + d/k) = nu/(k n).
func (p *Plan) negativeStart(te, density float64) float64 {
	k, detached := 0.0, 0.0
	for _, q := range p.pairs() {
		if q.Kind == crosssections.Detachment {
			detached = math.Max(detached, maxwellRate(&q.Table, te))
		}
		if q.Reactants[0] == crosssections.ElectronName {
			continue
		}
		mu := q.Masses[0] * q.Masses[1] / (q.Masses[0] + q.Masses[1])
		g := math.Sqrt(2 * startEnergy * phys.ElementaryCharge / mu)
		k = math.Max(k, q.Table.At(startEnergy)*g)
	}
	if k == 0 {
		return 0
	}
	ratio := p.attachment(te) / (k * density)
	b := 1 + detached/k
	return math.Min(mostNegative, 0.5*(math.Sqrt(b*b+4*ratio)-b))
}
