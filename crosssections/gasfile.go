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
	massU             float64 // of the neutral [u]
	ions              []ionEntry
	processes         []processEntry
	sets              []setEntry
}

type ionEntry struct {
	name   string
	charge int
	massU  float64 // [u]; 0 means the neutral without the missing electrons
	at     *yaml.Node
}

type processEntry struct {
	name, projectile string
	kind             Kind
	threshold        float64 // [eV]
	products         []string
	file             string
	at, fileAt       *yaml.Node
	kindAt           *yaml.Node
	productsAt       *yaml.Node
}

type setEntry struct {
	name, title string
	members     []*yaml.Node // names of processes
	at          *yaml.Node
}

// defaultSet is the set that a plain gas name means.
const defaultSet = "default"

var (
	gasKeys     = []string{"name", "title", "note", "mass_u", "ions", "electron", "ion", "sets"}
	ionKeys     = []string{"name", "charge", "mass_u"}
	processKeys = []string{"name", "kind", "projectile", "threshold_eV", "products", "file"}
	setKeys     = []string{"title", "processes"}
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
	for _, item := range r.items(m["electron"], "electron") {
		r.process(item, "electron", ElectronName)
	}
	for _, item := range r.items(m["ion"], "ion") {
		r.process(item, "ion", "")
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
	r.out.ions = append(r.out.ions, ion)
}

// process reads an entry of the section; ions name their projectile, electrons do not.
func (r *gasReader) process(n *yaml.Node, section, projectile string) {
	required := []string{"name", "kind", "file"}
	if projectile == "" {
		required = append(required, "projectile")
	}
	m := r.mapping(n, section, processKeys, required...)
	p := processEntry{
		name: r.text(m["name"], section+".name"), file: r.text(m["file"], section+".file"),
		projectile: projectile, at: n, fileAt: m["file"], kindAt: m["kind"],
		productsAt: m["products"],
	}
	if t := m["threshold_eV"]; t != nil {
		p.threshold = r.number(t, section+".threshold_eV")
	}
	for _, product := range r.items(m["products"], section+".products") {
		p.products = append(p.products, r.text(product, section+".products"))
	}
	if given := m["projectile"]; given != nil && projectile != "" {
		r.at(given, section+".projectile", quoted(given.Value), "no such key: it is the electron")
	} else if given != nil {
		p.projectile = r.text(given, section+".projectile")
	}
	if k := m["kind"]; k != nil {
		p.kind = r.kind(k, section, p.projectile == ElectronName)
	}
	r.out.processes = append(r.out.processes, p)
}

func (r *gasReader) kind(n *yaml.Node, section string, electron bool) Kind {
	var names []string
	for k := range kindNames {
		if Kind(k).OfElectron() == electron {
			names = append(names, Kind(k).String())
		}
	}
	kind, ok := parseKind(n.Value)
	if !ok || kind.OfElectron() != electron {
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
