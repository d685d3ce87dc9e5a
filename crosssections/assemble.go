package crosssections

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"math"
	"path"
	"slices"
	"strings"

	"ionfall/internal/phys"
)

// assemble makes the sets of a gas from what was read, the default one first.
func (r *gasReader) assemble(folder string, tables map[string]*TableFile, sum []byte) []Gas {
	sets := r.out.sets
	if len(sets) == 0 {
		sets = []setEntry{{name: defaultSet}}
	}
	names := []string{defaultSet}
	for _, set := range sets {
		if set.name != defaultSet {
			names = append(names, set.name)
		}
	}
	gases := make([]Gas, 0, len(names))
	for _, name := range names {
		i := slices.IndexFunc(sets, func(s setEntry) bool { return s.name == name })
		members := r.out.processes
		if len(r.out.sets) > 0 {
			members = r.members(&sets[i], map[string]bool{})
		}
		g := Gas{
			Name: r.out.name, Set: name, Title: r.out.title, Sets: names,
			Note: strings.TrimSpace(r.out.note + " " + sets[i].title),
			Mass: r.out.massU * phys.AtomicMass, Ions: r.ionList(),
			Sharing: r.out.sharing, Polarizability: r.out.polarizability, Diameter: r.out.diameter,
		}
		for i := range members {
			r.fill(&g, folder, &members[i], tables)
		}
		g.Electron, g.Warnings = splitEffective(g.Electron)
		g.Pairs = r.pairList(folder, tables)
		g.hash(sum)
		gases = append(gases, g)
	}
	return gases
}

func (r *gasReader) ionList() []Ion {
	var ions []Ion
	for _, ion := range r.out.ions {
		ions = append(ions, Ion{
			Name: ion.name, Mass: r.massOf(ion.name), Charge: ion.charge, Affinity: ion.affinity,
		})
	}
	return ions
}

// massOf is the mass of a particle [kg]: as declared, or of the gas itself less the missing
// electrons, or of the formula; 0 if it is unknown.
func (r *gasReader) massOf(name string) float64 {
	for _, ion := range r.out.ions {
		if ion.name == name && ion.massU > 0 {
			return ion.massU * phys.AtomicMass
		}
	}
	if plainName(name) == r.formula() || plainName(name) == r.out.name {
		return r.out.massU*phys.AtomicMass - float64(chargeOf(name))*phys.ElectronMass
	}
	mass, _ := formulaMass(name) // 0 if unknown
	return mass
}

// labFactor is the energy of a projectile over that of the relative motion, where the table's is
// the former's.
func (r *gasReader) labFactor(p *processEntry, frame Frame) float64 {
	target := r.massOf(r.targetOf(p))
	if frame != Lab || p.kind != Reaction || target == 0 {
		return 1
	}
	return (r.massOf(p.projectile) + target) / target
}

// particles are the products with their masses. One whose mass is not known has what is left.
func (r *gasReader) particles(p *processEntry, products []string) []Particle {
	list := make([]Particle, len(products))
	left, unknown := r.massOf(p.projectile)+r.massOf(r.targetOf(p)), -1
	for i, name := range products {
		list[i] = Particle{Name: name, Mass: r.massOf(name), Charge: chargeOf(name)}
		left -= list[i].Mass
		if list[i].Mass == 0 {
			unknown = i
		}
	}
	if unknown >= 0 {
		list[unknown].Mass = left
	}
	return list
}

// fill adds the member of a set, as several processes if it has branches.
func (r *gasReader) fill(g *Gas, folder string, m *processEntry, tables map[string]*TableFile) {
	p := Process{
		Name: m.name, Kind: m.kind, Projectile: m.projectile, Target: m.target,
		Threshold: m.cost(), Release: max(0, -m.defect) * m.kineticPart, Scattering: m.scattering,
		Products: m.products, Source: m.source, Frame: CenterOfMass,
	}
	if m.law != nil {
		projectile, target := r.massOf(m.projectile), r.massOf(r.targetOf(m))
		p.Table = m.law.table(r.out.polarizability.Value, projectile*target/(projectile+target))
		p.SHA256 = lawHash(m)
	} else {
		t := tables[m.file]
		p.Frame, p.Table, p.Source, p.SHA256 = t.Frame, t.Table, t.Source, t.SHA256
		p.File = path.Join(folder, m.file)
		p.Table.Onset = onset(p.Kind, p.Threshold*r.labFactor(m, t.Frame), p.Table.Energy)
	}
	list := []Process{p}
	if len(m.branches) > 0 {
		list = branched(&p, m.branches)
	}
	for i := range list {
		q := &list[i]
		if q.Kind == Reaction || q.Kind == Attachment || q.Kind == Ionization {
			q.Out = r.particles(m, q.Products)
		}
		switch m.section {
		case "electron":
			g.Electron = append(g.Electron, *q)
		case "neutral":
			g.Neutral = append(g.Neutral, *q)
		default:
			g.IonNeutral = append(g.IonNeutral, *q)
		}
	}
}

// branched divides a process among its branches. Below the appearance of a branch the others
// share its part, so that the sum is that of the table at every energy.
func branched(p *Process, branches []branchEntry) []Process {
	energies := slices.Clone(p.Table.Energy)
	for _, b := range branches {
		energies = append(energies, b.appearance, math.Nextafter(b.appearance, 0))
	}
	energies = slices.DeleteFunc(energies, func(e float64) bool {
		return e < p.Table.Energy[0] || e > p.Table.Max()
	})
	slices.Sort(energies)
	energies = slices.Compact(energies)
	var list []Process
	for _, b := range branches {
		q := *p
		q.Name = p.Name + " to " + strings.Join(chargedHeavy(b.products), " + ")
		q.Threshold, q.Products = b.appearance, b.products
		q.Table.Energy, q.Table.CrossSection = nil, nil
		for _, e := range energies {
			open := 0.0
			for _, other := range branches {
				if e >= other.appearance {
					open += other.part
				}
			}
			part := 0.0
			if e >= b.appearance && open > 0 {
				part = b.part / open
			}
			q.Table.Energy = append(q.Table.Energy, e)
			q.Table.CrossSection = append(q.Table.CrossSection, part*p.Table.At(e))
		}
		q.Table.Onset = max(p.Table.Onset, b.appearance)
		list = append(list, q)
	}
	return list
}

// chargedHeavy are the ions among the products.
func chargedHeavy(products []string) []string {
	var list []string
	for _, name := range products {
		if name != ElectronName && chargeOf(name) != 0 {
			list = append(list, name)
		}
	}
	return list
}

// pairList is the reactions of charged particles.
func (r *gasReader) pairList(folder string, tables map[string]*TableFile) []Pair {
	var list []Pair
	for i := range r.out.pairs {
		e := &r.out.pairs[i]
		p := Pair{
			Name: e.name, Kind: e.kind, Threshold: e.threshold, Products: e.products, Source: e.source,
		}
		for k, name := range e.reactants {
			p.Reactants[k], p.Masses[k] = name, r.massOf(name)
		}
		if e.law != nil {
			p.Table = e.law.table(0, p.Masses[0]*p.Masses[1]/(p.Masses[0]+p.Masses[1]))
		} else {
			t := tables[e.file]
			p.Table, p.Source, p.SHA256 = t.Table.scaled(r.pairFactor(e, t.Frame)), t.Source, t.SHA256
			p.File = path.Join(folder, e.file)
			if p.Kind == Detachment {
				p.Table.Onset = max(p.Threshold, p.Table.Energy[0])
			}
		}
		list = append(list, p)
	}
	return list
}

// pairFactor is the energy of the relative motion over that of a pair's table.
func (r *gasReader) pairFactor(p *pairEntry, frame Frame) float64 {
	first, second := r.massOf(p.reactants[0]), r.massOf(p.reactants[1])
	if frame != Lab || first+second == 0 {
		return 1
	}
	return second / (first + second)
}

// lawHash is the fingerprint of a cross section that has no file.
func lawHash(m *processEntry) string {
	sum := sha256.Sum256(fmt.Appendf(nil, "%+v %+v %g %v", *m.law, m.source, m.defect, m.products))
	return hex.EncodeToString(sum[:])
}

// splitEffective replaces an effective process by the elastic one that it contains.
func splitEffective(processes []Process) ([]Process, []string) {
	i := slices.IndexFunc(processes, func(p Process) bool { return p.Kind == Effective })
	if i < 0 {
		return processes, nil
	}
	inelastic := slices.DeleteFunc(slices.Clone(processes), func(p Process) bool {
		return p.Kind == Elastic || p.Kind == Effective
	})
	elastic := &processes[i]
	table, warnings := ElasticFromEffective(&elastic.Table, inelastic)
	elastic.Kind, elastic.Table = Elastic, table
	elastic.Source.Status = "derived"
	elastic.Source.Note = strings.TrimSpace(elastic.Source.Note +
		" The inelastic cross sections of the set were subtracted from the effective one.")
	for w := range warnings {
		warnings[w] = elastic.Name + ": " + warnings[w]
	}
	return processes, warnings
}

// hash takes the fingerprint of the set.
func (g *Gas) hash(gasFile []byte) {
	h := sha256.New()
	h.Write(gasFile)
	h.Write([]byte(g.Set))
	for _, list := range [][]Process{g.Electron, g.IonNeutral, g.Neutral} {
		for _, p := range list {
			h.Write([]byte("\n" + p.Name + " " + p.SHA256))
		}
	}
	for _, p := range g.Pairs {
		h.Write([]byte("\n" + p.Name + " " + p.SHA256))
	}
	g.SHA256 = hex.EncodeToString(h.Sum(nil))
}
