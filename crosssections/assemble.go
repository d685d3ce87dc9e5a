package crosssections

import (
	"crypto/sha256"
	"encoding/hex"
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
		}
		g.fill(folder, members, tables)
		g.hash(sum)
		gases = append(gases, g)
	}
	return gases
}

func (r *gasReader) ionList() []Ion {
	var ions []Ion
	for _, ion := range r.out.ions {
		mass := ion.massU * phys.AtomicMass
		if ion.massU == 0 {
			mass = r.out.massU*phys.AtomicMass - float64(ion.charge)*phys.ElectronMass
		}
		ions = append(ions, Ion{Name: ion.name, Mass: mass, Charge: ion.charge})
	}
	return ions
}

// fill adds the processes of a set and splits an effective cross section.
func (g *Gas) fill(folder string, members []processEntry, tables map[string]*TableFile) {
	for _, m := range members {
		t := tables[m.file]
		p := Process{
			Name: m.name, Kind: m.kind, Projectile: m.projectile, Threshold: m.threshold,
			Frame: t.Frame, Table: t.Table, Products: m.products, Source: t.Source,
			File: path.Join(folder, m.file), SHA256: t.SHA256,
		}
		p.Table.Onset = onset(p.Kind, p.Threshold, p.Table.Energy)
		if p.Projectile == ElectronName {
			g.Electron = append(g.Electron, p)
		} else {
			g.IonNeutral = append(g.IonNeutral, p)
		}
	}
	g.Electron, g.Warnings = splitEffective(g.Electron)
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
	for _, list := range [][]Process{g.Electron, g.IonNeutral} {
		for _, p := range list {
			h.Write([]byte("\n" + p.Name + " " + p.SHA256))
		}
	}
	g.SHA256 = hex.EncodeToString(h.Sum(nil))
}
