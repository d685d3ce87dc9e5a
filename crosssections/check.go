package crosssections

import (
	"fmt"
	"path"
	"slices"
	"strings"

	"go.yaml.in/yaml/v4"
)

// check notes what is wrong with the meaning of a gas.yaml that is right in form.
func (r *gasReader) check(folder string) {
	if r.out.name != folder {
		r.add(1, 1, "name", quoted(r.out.name), "the name of the folder, "+quoted(folder))
	}
	r.checkIons()
	names := map[string]bool{}
	for i := range r.out.processes {
		p := &r.out.processes[i]
		if names[p.name] {
			r.at(p.at, "name", "a second process "+quoted(p.name), "names used once")
		}
		names[p.name] = true
		r.checkProcess(p)
	}
	r.checkPairs()
	r.checkSets()
}

func (r *gasReader) checkIons() {
	seen := map[string]bool{}
	for _, ion := range r.out.ions {
		if seen[ion.name] {
			r.at(ion.at, "ions.name", "a second "+quoted(ion.name), "names used once")
		}
		seen[ion.name] = true
		if ion.charge != chargeOf(ion.name) {
			r.at(ion.at, "ions.charge", fmt.Sprintf("%d for %q", ion.charge, ion.name),
				fmt.Sprintf("%d, as the name ends", chargeOf(ion.name)))
		}
		if ion.massU == 0 && strings.TrimRight(ion.name, "+-") != r.formula() {
			if _, known := formulaMass(ion.name); !known {
				r.at(ion.at, "ions.mass_u", "nothing",
					"a mass: only the ion of the gas itself, or one whose name is a formula, can "+
						"do without")
			}
		}
	}
}

func (r *gasReader) checkProcess(p *processEntry) {
	switch {
	case p.kind.NeedsThreshold() && p.threshold == 0:
		r.at(p.at, "threshold_eV", "nothing", "a threshold: "+p.kind.String()+" costs energy")
	case !p.kind.mayHaveThreshold() && p.threshold != 0:
		r.at(p.at, "threshold_eV", fmt.Sprintf("%g eV", p.threshold),
			"none: "+p.kind.String()+" has no threshold")
	}
	if p.section == "ion" && !r.isIon(p.projectile) {
		r.atUnknown(p.at, "projectile", "", p.projectile, "one of the ions of the gas",
			r.ionNames())
	}
	if p.section == "neutral" && chargeOf(p.projectile) != 0 {
		r.at(p.at, "projectile", quoted(p.projectile), "a neutral")
	}
	if p.kind != Reaction && (p.defect != 0 || p.kineticPart != 0) {
		r.at(p.at, "defect_eV", "an energy defect of "+p.kind.String(), "one of a reaction")
	}
	if p.law != nil && p.law.langevin && p.law.mobility == 0 && p.target == "" &&
		r.out.polarizability.Value == 0 {
		r.at(p.at, "langevin", "no polarizability of the gas",
			"the key polarizability, or mobility_cm2pVs")
	}
	r.checkProducts(p)
	r.checkBranches(p)
	if p.law != nil {
		return
	}
	if p.file != path.Base(p.file) || path.Ext(p.file) != ".csv" {
		r.at(p.fileAt, "file", quoted(p.file), "a .csv file in the folder of the gas")
	}
}

// checkProducts demands what the kind needs and the balance of charge.
func (r *gasReader) checkProducts(p *processEntry) {
	if len(p.products) == 0 {
		if p.kind.needsProducts() && len(p.branches) == 0 {
			r.at(p.at, "products", "nothing", "all products: "+p.kind.String()+" has its own")
		}
		return
	}
	sum, electrons := 0, 0
	for _, product := range p.products {
		sum += chargeOf(product)
		if product == ElectronName {
			electrons++
		} else if chargeOf(product) != 0 && !r.isIon(product) {
			r.atUnknown(p.productsAt, "products", "", product, "ions declared under `ions`",
				r.ionNames())
		}
	}
	if want := chargeOf(p.projectile); sum != want {
		r.at(p.productsAt, "products", fmt.Sprintf("charge %+d in all", sum),
			fmt.Sprintf("%+d, that of the projectile", want))
	}
	want := map[Kind]int{
		Ionization: 2, Attachment: 0, Excitation: 1, Elastic: 1, Effective: 1,
		Rotation: 1, Vibration: 1, Dissociation: 1,
	}
	if n, fixed := want[p.kind]; fixed && electrons < n || p.kind == Attachment && electrons > 0 {
		r.at(p.productsAt, "products", fmt.Sprintf("%d electrons", electrons),
			fmt.Sprintf("%d for %s", n, p.kind))
	}
	if off := imbalance([]string{p.projectile, r.targetOf(p)}, p.products); off != "" {
		r.at(p.productsAt, "products", off, "the atoms of "+p.projectile+" and "+r.targetOf(p))
	}
}

// checkBranches demands of the branches what is demanded of products, and that they are all.
func (r *gasReader) checkBranches(p *processEntry) {
	if len(p.branches) == 0 {
		return
	}
	if p.kind != Ionization && p.kind != Attachment {
		r.at(p.at, "branches", "branches of "+p.kind.String(), "ionization or attachment")
		return
	}
	sum := 0.0
	lowest := p.branches[0].appearance
	for _, b := range p.branches {
		one := *p
		one.branches, one.products, one.productsAt, one.at = nil, b.products, b.at, b.at
		r.checkProducts(&one)
		sum += b.part
		lowest = min(lowest, b.appearance)
		if b.appearance < p.threshold {
			r.at(b.at, "branches.appearance_eV", fmt.Sprintf("%g eV", b.appearance),
				fmt.Sprintf("at least the threshold, %g eV", p.threshold))
		}
	}
	if sum < 1-branchTolerance || sum > 1+branchTolerance {
		r.at(p.branches[0].at, "branches", fmt.Sprintf("parts with the sum %.6g", sum), "the sum 1")
	}
	if lowest > p.threshold {
		r.at(p.at, "branches", fmt.Sprintf("no branch between %g and %g eV", p.threshold, lowest),
			"one from the threshold on")
	}
}

// branchTolerance is the rounding allowed of parts that sum to 1.
const branchTolerance = 1e-6

// targetOf is the formula of the gas that a process collides with.
func (r *gasReader) targetOf(p *processEntry) string {
	if p.target != "" {
		return p.target
	}
	return r.formula()
}

// formula is that of the gas: its name, unless another is given.
func (r *gasReader) formula() string {
	if r.out.formula != "" {
		return r.out.formula
	}
	return r.out.name
}

func (r *gasReader) checkSets() {
	if len(r.out.sets) == 0 {
		all := setEntry{name: defaultSet, title: "all processes of the gas"}
		r.checkMembers(&all, r.out.processes, nil)
		return
	}
	hasDefault := slices.ContainsFunc(r.out.sets, func(s setEntry) bool {
		return s.name == defaultSet
	})
	if !hasDefault {
		r.at(r.out.sets[0].at, "sets", "no set "+quoted(defaultSet), "one with this name")
	}
	used := map[string]bool{}
	for i := range r.out.sets {
		set := &r.out.sets[i]
		if strings.ContainsAny(set.name, "/ \t") {
			r.at(set.at, "sets", quoted(set.name), "a name without space or slash")
		}
		r.checkMembers(set, r.members(set, used), set.at)
	}
	for _, p := range r.out.processes {
		if !used[p.name] {
			r.at(p.at, "name", quoted(p.name)+" in no set", "every process in some set")
		}
	}
}

// members is the processes of a set; unknown and repeated names are noted.
func (r *gasReader) members(set *setEntry, used map[string]bool) []processEntry {
	var found []processEntry
	for _, n := range set.members {
		i := slices.IndexFunc(r.out.processes, func(p processEntry) bool {
			return p.name == n.Value
		})
		key := "sets." + set.name
		switch {
		case i < 0:
			r.atUnknown(n, key, "unknown process ", n.Value, "a process of the gas",
				r.processNames())
		case slices.ContainsFunc(found, func(p processEntry) bool { return p.name == n.Value }):
			r.at(n, key, quoted(n.Value)+" twice", "each process once")
		default:
			found = append(found, r.out.processes[i])
			used[n.Value] = true
		}
	}
	return found
}

// checkMembers demands one elastic cross section of electrons.
func (r *gasReader) checkMembers(set *setEntry, members []processEntry, at *yaml.Node) {
	elastic := 0
	for _, p := range members {
		if p.kind == Elastic || p.kind == Effective {
			elastic++
		}
	}
	if elastic == 1 {
		return
	}
	line, col := 1, 1
	if at != nil {
		line, col = at.Line, at.Column
	}
	r.add(line, col, "sets."+set.name, fmt.Sprintf("%d elastic or effective processes", elastic),
		"1")
}

// checkTable demands that nothing happens below the threshold [eV], in the frame of the table, and
// something above it.
func checkTable(threshold float64, t *TableFile, c *complaints) {
	for i, e := range t.Table.Energy {
		if q := t.Table.CrossSection[i]; e < threshold*(1-1e-9) && q != 0 {
			c.add(t.lines[i], 1, "cross_section_m2", fmt.Sprintf("%g m2 at %g eV", q, e),
				fmt.Sprintf("0 below the threshold of %g eV", threshold))
			return
		}
	}
	if last := len(t.lines) - 1; threshold > t.Table.Energy[last] {
		c.add(t.lines[last], 1, "energy_eV", fmt.Sprintf("the last row at %g eV", t.Table.Max()),
			fmt.Sprintf("rows above the threshold of %g eV", threshold))
	}
}

func (r *gasReader) isIon(name string) bool { return slices.Contains(r.ionNames(), name) }

func (r *gasReader) ionNames() []string {
	names := make([]string, 0, len(r.out.ions))
	for _, ion := range r.out.ions {
		names = append(names, ion.name)
	}
	return names
}

func (r *gasReader) processNames() []string {
	names := make([]string, 0, len(r.out.processes))
	for _, p := range r.out.processes {
		names = append(names, p.name)
	}
	return names
}

// chargeOf is the charge that a name says: the signs at its end, -1 for the electron.
func chargeOf(name string) int {
	if name == ElectronName {
		return -1
	}
	without := strings.TrimRight(name, "+-")
	signs := name[len(without):]
	return strings.Count(signs, "+") - strings.Count(signs, "-")
}
