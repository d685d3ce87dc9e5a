package crosssections

import (
	"fmt"
	"slices"
	"strings"
)

// checkPairs demands of each pair known reactants that fit its kind, and the balance of charge and
// atoms.
func (r *gasReader) checkPairs() {
	names := map[string]bool{}
	for i := range r.out.pairs {
		p := &r.out.pairs[i]
		if names[p.name] {
			r.at(p.at, "pairs.name", "a second pair "+quoted(p.name), "names used once")
		}
		names[p.name] = true
		for _, name := range p.reactants {
			if name != ElectronName && !r.isIon(name) {
				r.atUnknown(p.at, "reactants", "", name, "e and the ions of the gas", r.ionNames())
			}
		}
		check := r.checkNeutralization
		if p.kind == Detachment {
			check = r.checkDetachment
		}
		if !check(p) {
			continue
		}
		if off := imbalance(p.reactants, p.products); off != "" {
			r.at(p.at, "products", off, "the atoms of "+strings.Join(p.reactants, " and "))
		}
	}
}

// checkNeutralization demands opposite charges and none afterwards.
func (r *gasReader) checkNeutralization(p *pairEntry) (ok bool) {
	if p.threshold != 0 {
		r.at(p.at, "threshold_eV", fmt.Sprintf("%g eV", p.threshold),
			"none: neutralization has no threshold")
	}
	if len(p.reactants) != 2 || chargeOf(p.reactants[0])*chargeOf(p.reactants[1]) >= 0 {
		r.at(p.at, "reactants", strings.Join(p.reactants, ", "), "two of opposite charge")
		return false
	}
	sum, have := charges(p.reactants), charges(p.products)
	if have != sum || sum != 0 {
		r.at(p.at, "products", fmt.Sprintf("charge %+d in all", have),
			"0, from reactants of charge 0 in all")
	}
	return true
}

// checkDetachment demands an electron and a negative ion, two electrons afterwards, and that the
// threshold is enough to free one.
func (r *gasReader) checkDetachment(p *pairEntry) (ok bool) {
	if len(p.reactants) != 2 || p.reactants[0] != ElectronName || chargeOf(p.reactants[1]) != -1 {
		r.at(p.at, "reactants", strings.Join(p.reactants, ", "),
			"e and an ion of the charge -1, in this order")
		return false
	}
	if p.threshold == 0 {
		r.at(p.at, "threshold_eV", "nothing", "a threshold: detachment costs energy")
	}
	i := slices.IndexFunc(r.out.ions, func(ion ionEntry) bool { return ion.name == p.reactants[1] })
	if i >= 0 {
		affinity := r.out.ions[i].affinity.Value
		if p.threshold > 0 && p.threshold < affinity*(1-affinityRounding) {
			r.at(p.at, "threshold_eV", fmt.Sprintf("%g eV", p.threshold),
				fmt.Sprintf("at least the electron affinity, %g eV", affinity))
		}
	}
	electrons := 0
	for _, name := range p.products {
		if name == ElectronName {
			electrons++
		}
	}
	if have := charges(p.products); electrons != 2 || have != -2 {
		r.at(p.at, "products", fmt.Sprintf("%d electrons and charge %+d in all", electrons, have),
			"2 electrons and neutrals")
	}
	return true
}

// affinityRounding is how far a threshold may be below an affinity given with more digits.
const affinityRounding = 0.005

// charges is the sum of the charges of the particles.
func charges(names []string) int {
	sum := 0
	for _, name := range names {
		sum += chargeOf(name)
	}
	return sum
}
