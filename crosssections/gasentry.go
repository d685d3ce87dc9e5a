package crosssections

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/bib"
)

// electron reads a process of electrons.
func (r *gasReader) electron(n *yaml.Node) {
	const section = "electron"
	m := r.mapping(n, section, electronKeys, "name", "kind", "file")
	p := processEntry{
		name: r.text(m["name"], section+".name"), file: r.text(m["file"], section+".file"),
		projectile: ElectronName, section: section, at: n, fileAt: m["file"], kindAt: m["kind"],
		productsAt: m["products"],
	}
	if t := m["threshold_eV"]; t != nil {
		p.threshold = r.number(t, section+".threshold_eV")
	}
	p.products = r.texts(m["products"], section+".products")
	if given := m["projectile"]; given != nil {
		r.at(given, section+".projectile", quoted(given.Value), "no such key: it is the electron")
	}
	if k := m["kind"]; k != nil {
		p.kind = r.kind(k, section)
	}
	for _, b := range r.items(m["branches"], section+".branches") {
		p.branches = append(p.branches, r.branch(b, &p))
	}
	if m["branches"] != nil && m["products"] != nil {
		r.at(m["products"], section+".products", "products and branches", "one of them")
	}
	r.out.processes = append(r.out.processes, p)
}

// branch reads one of several sets of products; it appears at the threshold unless it says where.
func (r *gasReader) branch(n *yaml.Node, p *processEntry) branchEntry {
	m := r.mapping(n, "branches", branchKeys, "products", "part")
	b := branchEntry{
		products: r.texts(m["products"], "branches.products"),
		part:     r.number(m["part"], "branches.part"), appearance: p.threshold, at: n,
	}
	if m["appearance_eV"] != nil {
		b.appearance = r.number(m["appearance_eV"], "branches.appearance_eV")
	}
	return b
}

// heavy reads a process of ions or fast neutrals, whose cross section is a table or a law.
func (r *gasReader) heavy(n *yaml.Node, section string) {
	m := r.mapping(n, section, heavyKeys, "name", "kind", "projectile")
	p := processEntry{
		name: r.text(m["name"], section+".name"), section: section,
		projectile: r.text(m["projectile"], section+".projectile"),
		products:   r.texts(m["products"], section+".products"),
		at:         n, fileAt: m["file"], kindAt: m["kind"], productsAt: m["products"],
	}
	if m["target"] != nil {
		p.target = r.text(m["target"], section+".target")
	}
	if p.target == r.out.name {
		p.target = ""
	}
	if k := m["kind"]; k != nil {
		p.kind = r.kind(k, section)
	}
	p.defect = r.signed(m["defect_eV"], section+".defect_eV", -maxDefect, maxDefect)
	p.kineticPart = r.signed(m["kinetic_part"], section+".kinetic_part", 0, 1)
	if s := m["scattering"]; s != nil {
		i := slices.Index(scatteringNames[:], s.Value)
		if i < 0 {
			r.at(s, section+".scattering", quoted(s.Value),
				"one of "+strings.Join(scatteringNames[:], ", "))
		}
		p.scattering = Scattering(max(0, i))
	}
	p.file, p.law = r.crossSection(n, m, section)
	if p.law != nil {
		p.source = r.source(n, m, section)
	}
	if p.law != nil && p.law.from == 0 {
		p.law.from = max(0, p.defect)
	}
	r.out.processes = append(r.out.processes, p)
}

// maxDefect is above any energy of a reaction [eV].
const maxDefect = 1000

// crossSection reads where a cross section comes from: exactly one of a file and a law.
func (r *gasReader) crossSection(n *yaml.Node, m map[string]*yaml.Node, section string) (
	file string, l *law,
) {
	given := 0
	for _, key := range []string{"file", "rate", "langevin"} {
		if m[key] != nil {
			given++
		}
	}
	if given != 1 {
		r.at(n, section, fmt.Sprintf("%d of them", given), "one of file, rate, langevin")
		return "", nil
	}
	switch {
	case m["rate"] != nil:
		return "", r.rate(m["rate"], section+".rate")
	case m["langevin"] != nil:
		return "", r.langevin(m["langevin"], section+".langevin")
	}
	return r.text(m["file"], section+".file"), nil
}

var (
	rateKeys     = []string{"value_m3ps", "exponent", "falls_above_eV", "falls_as"}
	langevinKeys = []string{"mobility_cm2pVs", "part", "floor_m2", "falls_above_eV", "falls_as"}
)

// rate reads a rate coefficient at 300 K: sigma = k/g, up to an energy if one is given.
func (r *gasReader) rate(n *yaml.Node, path string) *law {
	m := r.mapping(n, path, rateKeys, "value_m3ps")
	l := law{rate: r.number(m["value_m3ps"], path+".value_m3ps"), power: 1}
	l.exponent = r.signed(m["exponent"], path+".exponent", -1, 1)
	r.fall(&l, m, path)
	if l.rate > maxRate {
		r.at(m["value_m3ps"], path, fmt.Sprintf("%g m3/s", l.rate),
			fmt.Sprintf("at most %g m3/s (1 cm3/s is 1e-6 m3/s)", maxRate))
	}
	return &l
}

// maxRate is above any rate coefficient of heavy particles; larger ones are a wrong unit [m3/s].
const maxRate = 1e-11

// langevin reads elastic scattering at a constant rate.
func (r *gasReader) langevin(n *yaml.Node, path string) *law {
	l := law{langevin: true, part: 1, power: 1}
	if n.Kind == yaml.MappingNode && len(n.Content) == 0 {
		return &l
	}
	m := r.mapping(n, path, langevinKeys)
	if m["mobility_cm2pVs"] != nil {
		l.mobility = r.number(m["mobility_cm2pVs"], path+".mobility_cm2pVs")
	}
	if m["part"] != nil {
		l.part = r.number(m["part"], path+".part")
	}
	if m["floor_m2"] != nil {
		l.floor = r.number(m["floor_m2"], path+".floor_m2")
	}
	r.fall(&l, m, path)
	return &l
}

// fall reads how a law ends.
func (r *gasReader) fall(l *law, m map[string]*yaml.Node, path string) {
	if m["falls_above_eV"] != nil {
		l.falls = r.number(m["falls_above_eV"], path+".falls_above_eV")
	}
	if m["falls_as"] != nil {
		l.power = r.number(m["falls_as"], path+".falls_as")
	}
}

// pair reads a reaction of two charged particles.
func (r *gasReader) pair(n *yaml.Node) {
	const section = "pairs"
	m := r.mapping(n, section, pairKeys, "name", "reactants", "products")
	p := pairEntry{
		name: r.text(m["name"], section+".name"), at: n, fileAt: m["file"],
		reactants: r.texts(m["reactants"], section+".reactants"),
		products:  r.texts(m["products"], section+".products"),
	}
	if k := m["kind"]; k != nil {
		i := slices.Index(pairKindNames[:], k.Value)
		if i < 0 {
			r.at(k, section+".kind", quoted(k.Value),
				"one of "+strings.Join(pairKindNames[:], ", "))
		}
		p.kind = PairKind(max(0, i))
	}
	if t := m["threshold_eV"]; t != nil {
		p.threshold = r.number(t, section+".threshold_eV")
	}
	p.file, p.law = r.crossSection(n, m, section)
	if p.law != nil {
		p.source, p.law.from = r.source(n, m, section), p.threshold
	}
	r.out.pairs = append(r.out.pairs, p)
}

// source reads where a number comes from.
func (r *gasReader) source(n *yaml.Node, m map[string]*yaml.Node, path string) Source {
	s := Source{}
	to := []*string{&s.Citation, &s.Database, &s.Date, &s.Status, &s.Bib, &s.Note}
	for i, key := range sourceKeys {
		if m[key] != nil {
			*to[i] = strings.Join(strings.Fields(r.text(m[key], path+"."+key)), " ")
		}
	}
	for _, key := range []string{"reference", "status"} {
		if m[key] == nil {
			r.at(n, path, "no "+quoted(key), "the keys reference, status")
		}
	}
	if m["status"] != nil && !slices.Contains(statuses, s.Status) {
		r.at(m["status"], path+".status", quoted(s.Status), "one of "+strings.Join(statuses, ", "))
	}
	if m["date"] != nil && !day.MatchString(s.Date) {
		r.at(m["date"], path+".date", quoted(s.Date), "a day as 2013-06-04")
	}
	if _, ok := bib.Lookup(s.Bib); s.Bib != "" && !ok {
		r.atUnknown(m["bib"], path+".bib", "", s.Bib, "a known reference", bib.Keys())
	}
	return s
}

// datum reads a number with its source.
func (r *gasReader) datum(n *yaml.Node, path, valueKey string) Datum {
	if n == nil {
		return Datum{}
	}
	known := append([]string{valueKey}, sourceKeys...)
	m := r.mapping(n, path, known, valueKey)
	return Datum{Value: r.number(m[valueKey], path+"."+valueKey), Source: r.source(n, m, path)}
}

// texts are the items of a list of texts.
func (r *gasReader) texts(n *yaml.Node, key string) []string {
	var list []string
	for _, item := range r.items(n, key) {
		list = append(list, r.text(item, key))
	}
	return list
}

// signed is a number between bounds, 0 where nothing is given.
func (r *gasReader) signed(n *yaml.Node, key string, low, high float64) float64 {
	if n == nil {
		return 0
	}
	v, err := strconv.ParseFloat(n.Value, 64)
	if n.Kind != yaml.ScalarNode || err != nil || math.IsNaN(v) || v < low || v > high {
		r.at(n, key, quoted(n.Value), fmt.Sprintf("a number from %g to %g", low, high))
		return 0
	}
	return v
}
