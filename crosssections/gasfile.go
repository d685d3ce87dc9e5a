package crosssections

import (
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v4"
)

// gasFile is a gas.yaml as written, with the places of what is checked later.
type gasFile struct {
	name, title, note string
	formula           string  // empty for the name
	massU             float64 // of the neutral [u]
	ions              []ionEntry
	processes         []processEntry
	pairs             []pairEntry
	sets              []setEntry

	sharing, polarizability, diameter Datum
}

type ionEntry struct {
	name     string
	charge   int
	massU    float64 // [u]; 0 means the neutral without the missing electrons, or the formula's
	affinity Datum
	at       *yaml.Node
}

type processEntry struct {
	name, projectile string
	kind             Kind
	threshold        float64 // [eV]
	products         []string
	file             string
	section          string // of gas.yaml
	target           string // empty for the gas itself
	law              *law   // instead of a file
	source           Source // of the law
	defect           float64
	kineticPart      float64 // of a release
	scattering       Scattering
	branches         []branchEntry
	at, fileAt       *yaml.Node
	kindAt           *yaml.Node
	productsAt       *yaml.Node
}

// cost is the energy that the process takes [eV].
func (p *processEntry) cost() float64 { return max(p.threshold, p.defect) }

// branchEntry is one of several sets of products.
type branchEntry struct {
	products   []string
	part       float64
	appearance float64 // [eV]
	at         *yaml.Node
}

type pairEntry struct {
	name      string
	kind      PairKind
	threshold float64 // [eV]
	reactants []string
	products  []string
	file      string
	law       *law
	source    Source
	at        *yaml.Node
	fileAt    *yaml.Node
}

type setEntry struct {
	name, title string
	members     []*yaml.Node // names of processes
	at          *yaml.Node
}

// defaultSet is the set that a plain gas name means.
const defaultSet = "default"

var (
	gasKeys = []string{
		"name", "title", "note", "formula", "mass_u", "polarizability", "diameter",
		"ionization_width", "ions", "electron", "ion", "neutral", "pairs", "sets",
	}
	ionKeys      = []string{"name", "charge", "mass_u", "electron_affinity"}
	electronKeys = []string{
		"name", "kind", "projectile", "threshold_eV", "products", "branches", "file",
	}
	heavyKeys = slices.Concat([]string{
		"name", "kind", "projectile", "target", "defect_eV", "kinetic_part", "products", "scattering",
		"file", "rate", "langevin",
	}, sourceKeys)
	pairKeys = slices.Concat([]string{
		"name", "kind", "reactants", "products", "threshold_eV", "file", "rate",
	}, sourceKeys)
	branchKeys = []string{"products", "part", "appearance_eV"}
	setKeys    = []string{"title", "processes"}
	sourceKeys = []string{"reference", "database", "date", "status", "bib", "note"}
)

// gasReader turns the nodes of a gas.yaml into a gasFile.
type gasReader struct {
	complaints
	out gasFile
}

// readGasFile reads the form of a gas.yaml; its meaning is checked in check.go.
func readGasFile(name string, data []byte) (*gasReader, error) {
	r := &gasReader{complaints: complaints{file: name}}
	if len(data) > maxGasFileBytes {
		r.add(0, 0, "", fmt.Sprintf("%d bytes", len(data)),
			fmt.Sprintf("at most %d", maxGasFileBytes))
		return r, r.err()
	}
	var document yaml.Node
	if err := yaml.Load(data, &document); err != nil {
		r.syntax(err)
		return r, r.err()
	}
	if document.Kind != yaml.DocumentNode || len(document.Content) != 1 {
		r.add(1, 1, "", "no mapping", "the keys of a gas: "+strings.Join(gasKeys, ", "))
		return r, r.err()
	}
	r.gas(document.Content[0])
	return r, r.err()
}

// syntax notes what the YAML parser says, with its place.
func (r *gasReader) syntax(err error) {
	var one *yaml.LoadError
	if errors.As(err, &one) {
		r.add(one.Mark.Line, one.Mark.Column, "", one.Message, "valid YAML")
		return
	}
	r.add(1, 1, "", err.Error(), "valid YAML")
}

func (r *gasReader) gas(n *yaml.Node) {
	m := r.mapping(n, "", gasKeys, "name", "title", "mass_u", "electron")
	r.out.name = r.text(m["name"], "name")
	r.out.title = r.text(m["title"], "title")
	r.out.note = strings.Join(strings.Fields(r.text(m["note"], "note")), " ")
	r.out.massU = r.number(m["mass_u"], "mass_u")
	for _, item := range r.items(m["ions"], "ions") {
		r.ion(item)
	}
	if m["formula"] != nil {
		r.out.formula = r.text(m["formula"], "formula")
	}
	r.out.polarizability = r.datum(m["polarizability"], "polarizability", "value_A3")
	r.out.diameter = r.datum(m["diameter"], "diameter", "value_A")
	r.out.sharing = r.datum(m["ionization_width"], "ionization_width", "value_eV")
	for _, item := range r.items(m["electron"], "electron") {
		r.electron(item)
	}
	for _, section := range []string{"ion", "neutral"} {
		for _, item := range r.items(m[section], section) {
			r.heavy(item, section)
		}
	}
	for _, item := range r.items(m["pairs"], "pairs") {
		r.pair(item)
	}
	r.sets(m["sets"])
}

func (r *gasReader) ion(n *yaml.Node) {
	m := r.mapping(n, "ions", ionKeys, "name", "charge")
	ion := ionEntry{name: r.text(m["name"], "ions.name"), at: n}
	if c := m["charge"]; c != nil {
		v, err := strconv.Atoi(c.Value)
		if err != nil || v == 0 || v < -9 || v > 9 {
			r.at(c, "ions.charge", quoted(c.Value), "a whole number such as 1 or -1")
		}
		ion.charge = v
	}
	if m["mass_u"] != nil {
		ion.massU = r.number(m["mass_u"], "ions.mass_u")
	}
	ion.affinity = r.datum(m["electron_affinity"], "ions.electron_affinity", "value_eV")
	r.out.ions = append(r.out.ions, ion)
}

func (r *gasReader) kind(n *yaml.Node, section string) Kind {
	fits := func(k Kind) bool {
		switch section {
		case "electron":
			return k.OfElectron()
		case "neutral":
			return k == Isotropic
		}
		return !k.OfElectron()
	}
	var names []string
	for k := range kindNames {
		if fits(Kind(k)) {
			names = append(names, Kind(k).String())
		}
	}
	kind, ok := parseKind(n.Value)
	if !ok || !fits(kind) {
		r.at(n, section+".kind", quoted(n.Value), "one of "+strings.Join(names, ", "))
	}
	return kind
}

func (r *gasReader) sets(n *yaml.Node) {
	if n == nil {
		return
	}
	if n.Kind != yaml.MappingNode {
		r.at(n, "sets", "no mapping", "names with the processes of each")
		return
	}
	for i := 0; i+1 < len(n.Content); i += 2 {
		key := n.Content[i]
		path := "sets." + key.Value
		m := r.mapping(n.Content[i+1], path, setKeys, setKeys...)
		set := setEntry{name: key.Value, at: key, title: r.text(m["title"], path+".title")}
		set.members = r.items(m["processes"], path+".processes")
		if slices.ContainsFunc(r.out.sets, func(s setEntry) bool { return s.name == set.name }) {
			r.at(key, "sets", "a second "+quoted(set.name), "names used once")
		}
		r.out.sets = append(r.out.sets, set)
	}
}
