package run

import (
	"fmt"
	"math"
	"slices"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/store"
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
	// negativeEvents is how many negative ions must have come and gone to judge their balance.
	negativeEvents = 600
	// leastNegative is the change of their number that is not worth it.
	leastNegative = 0.02
	// fewNegative is the part of the electrons below which negative ions do not matter.
	fewNegative = 0.01
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

// negativeCount is what became of a negative species since its number was last changed.
type negativeCount struct {
	Born, Lost int64
	Settled    bool // as many were made as lost when it was looked at last
}

// countNegative adds a period's births and losses of negative ions.
func (c *control) countNegative(species []pic.Species, l *pic.Ledger) {
	if len(c.Negative) != len(species) {
		c.Negative = make([]negativeCount, len(species))
	}
	for i := 1; i < len(species); i++ {
		if species[i].Charge < 0 {
			sp := &l.Species[i]
			c.Negative[i].Born += sp.Born
			c.Negative[i].Lost += sp.Gone + sp.Absorbed[0] + sp.Absorbed[1]
		}
	}
}

// balanceNegative brings negative ions to the number at which they would stand: their losses follow
// the positive ions, of which there are as many as electrons and negative ions together. With N
// of them beside e electrons, b made and l lost in a time, N' (e + N') l = b N (e + N). Reports
// whether it changed anything, or has seen too little to tell.
func (m *machine) balanceNegative() (open bool) {
	c := &m.control
	changed, scaled := false, false
	for i, sp := range m.sim.Species() {
		if i == 0 || sp.Charge >= 0 || i >= len(c.Negative) {
			continue
		}
		born, lost := float64(c.Negative[i].Born), float64(c.Negative[i].Lost)
		n, electrons := float64(sp.Count()), float64(m.sim.Species()[0].Count())
		if born+lost < negativeEvents {
			open = open || !c.Negative[i].Settled && n > fewNegative*electrons
			continue
		}
		ratio := born / math.Max(1, lost)
		stands := 0.5 * (math.Sqrt(electrons*electrons+4*ratio*n*(electrons+n)) - electrons)
		factor := math.Max(0.4, math.Min(2.5, stands/n))
		chance := math.Sqrt(1/math.Max(1, born) + 1/math.Max(1, lost))
		c.Negative[i] = negativeCount{Settled: math.Abs(factor-1) < 2*chance}
		if math.Abs(factor-1) < leastNegative {
			continue
		}
		m.sim.ScaleNegative(i, factor)
		c.Event = fmt.Sprintf("%s projected by %+.0f %%", sp.Name, 100*(factor-1))
		changed = changed || !c.Negative[i].Settled
		scaled = true
	}
	if scaled {
		m.rebase()
	}
	return open || changed
}

// negativeChecks judge whether as many negative ions are made as lost: they follow so slowly that
// an average sees no drift.
func (m *machine) negativeChecks() []store.Check {
	t := &m.control.Averaged
	born, lost := 0.0, 0.0
	for i, sp := range m.sim.Species() {
		if i > 0 && sp.Charge < 0 && i < len(t.NegativeBorn) {
			born += t.NegativeBorn[i]
			lost += t.NegativeLost[i]
		}
	}
	if born+lost == 0 {
		return nil
	}
	events := born + lost
	chance := driftErrors / math.Sqrt(events/2)
	b := bounds{negativeBalance.warn + chance, negativeBalance.fail + chance}
	return []store.Check{above("negative_ion_balance",
		math.Abs(born-lost)/math.Max(born, lost), b, fmt.Sprintf("difference of negative ions made "+
			"and lost, over the average; of %.0f events, chance alone makes up to %.2g %%", events,
			100*chance))}
}
