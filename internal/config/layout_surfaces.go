package config

import (
	"fmt"
	"slices"
	"strings"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"
)

// The words that stand for a yield as a function of the energy.
const (
	CleanMetal   = "clean_metal"
	DirtyMetal   = "dirty_metal"
	DirtyMetalRF = "dirty_metal_rf"
)

func yieldWords() []string { return []string{CleanMetal, DirtyMetal, DirtyMetalRF} }

// IonYield is the yield of one ion.
type IonYield struct {
	// Ion is its name as written; whether there is such an ion is for the caller to decide.
	Ion string
	// Yield is the mean number of electrons an arriving ion sets free.
	Yield float64
	// Model is one of the words above, instead of a number, or "".
	Model string
}

// Emission is what electrons do at a wall: see the package surfaces.
type Emission struct {
	MaxYield           float64
	MaxEnergy          float64 // [eV]
	Threshold          float64 // [eV]
	Smoothness         float64
	Elastic, Inelastic float64
}

// Layer is a dielectric on a wall.
type Layer struct {
	// Thickness [m].
	Thickness float64
	// Permittivity is the relative one.
	Permittivity float64
}

// yields is a number for all ions, a word, or a mapping of ions to either.
type yields struct{ e *Electrode }

func (yields) number(dst *float64) number { return number{dst: dst, high: maxYield} }

func (v yields) wanted() string {
	return v.number(nil).wanted() + ", one of " + strings.Join(yieldWords(), ", ") +
		", or a mapping of ions to either, such as {Ar+: 0.07}"
}

func (v yields) decode(d *decoder, n *yaml.Node, path string) {
	switch {
	case n.Kind == yaml.MappingNode:
		v.decodeIons(d, n, path)
	case n.Kind == yaml.ScalarNode && n.Tag == "!!str" && slices.Contains(yieldWords(), n.Value):
		v.e.IonYieldModel = n.Value
	case n.Kind == yaml.ScalarNode && n.Tag != "!!null":
		before := len(d.errs)
		v.number(&v.e.IonSecondaryYield).decode(d, n, path)
		for _, e := range d.errs[before:] {
			if e.Want == v.number(nil).wanted() {
				e.Want = v.wanted()
			}
		}
	default:
		d.fail(n, path, found(n), v.wanted(), "")
	}
}

func (v yields) decodeIons(d *decoder, n *yaml.Node, path string) {
	if count := len(n.Content) / 2; count < 1 || count > maxIons {
		d.fail(n, path, fmt.Sprintf("%d ions", count), fmt.Sprintf("1 to %d", maxIons), "")
		return
	}
	first := map[string]*yaml.Node{}
	list := make([]IonYield, len(n.Content)/2)
	for i := range list {
		k, value := n.Content[2*i], n.Content[2*i+1]
		if !d.unique(k, path, first) {
			continue
		}
		if k.Tag != "!!str" || len(k.Value) > maxGasName || !GasName(strings.TrimRight(k.Value, "+")) {
			d.fail(k, path, found(k)+" as the name of an ion", "a name such as Ar+", "")
			continue
		}
		list[i].Ion = k.Value
		at := under(path, k.Value)
		d.place(k, at)
		if value.Kind == yaml.ScalarNode && slices.Contains(yieldWords(), value.Value) {
			list[i].Model = value.Value
			continue
		}
		if value.Kind != yaml.ScalarNode || value.Style&yaml.TaggedStyle != 0 {
			d.fail(value, at, found(value), v.number(nil).wanted(), "")
			continue
		}
		v.number(&list[i].Yield).decode(d, value, at)
	}
	v.e.IonYields = list
}

func (v yields) encode() *yaml.Node {
	switch {
	case v.e.IonYieldModel != "":
		return scalarNode("!!str", v.e.IonYieldModel)
	case len(v.e.IonYields) == 0:
		return v.number(&v.e.IonSecondaryYield).encode()
	}
	n := &yaml.Node{Kind: yaml.MappingNode, Tag: "!!map"}
	for i := range v.e.IonYields {
		y := &v.e.IonYields[i]
		value := v.number(&y.Yield).encode()
		if y.Model != "" {
			value = scalarNode("!!str", y.Model)
		}
		n.Content = append(n.Content, scalarNode("!!str", y.Ion), value)
	}
	return n
}

func (v yields) schema() *jsonschema.Schema {
	words := &jsonschema.Schema{Type: "string"}
	for _, w := range yieldWords() {
		words.Enum = append(words.Enum, w)
	}
	one := func() *jsonschema.Schema {
		return &jsonschema.Schema{AnyOf: []*jsonschema.Schema{v.number(new(float64)).schema(), words}}
	}
	least, most := uint64(1), uint64(maxIons)
	return &jsonschema.Schema{AnyOf: []*jsonschema.Schema{
		v.number(new(float64)).schema(), words, {
			Type: "object", MinProperties: &least, MaxProperties: &most, AdditionalProperties: one(),
		},
	}}
}

func emissionLayout(e *Emission) value {
	if *e == (Emission{}) {
		*e = Emission{Threshold: 12.5, Smoothness: 1, Elastic: 0.03, Inelastic: 0.07}
	}
	return mapping{
		fields: []field{
			{
				key: "max_yield", required: true,
				value: number{dst: &e.MaxYield, high: maxYield, above: true},
				doc:   "Largest mean number of electrons for one that arrives, at normal incidence.",
			},
			{
				key: "max_energy", required: true,
				value: quantity{
					dst: &e.MaxEnergy, dim: energy(), low: "20 eV", high: "10 keV",
				},
				doc: "Energy at which the yield is largest.",
			},
			{
				key:   "threshold",
				value: quantity{dst: &e.Threshold, dim: energy(), low: "0 eV", high: "19 eV"},
				doc:   "No electron is set free below. Default: 12.5 eV.",
			},
			{
				key: "smoothness", value: number{dst: &e.Smoothness, high: 2},
				doc: "0 rough, 1 typical, 2 polished: how the yield grows with the angle. Default: 1.",
			},
			{
				key: "elastic", value: number{dst: &e.Elastic, high: 0.5, percent: true},
				doc: "Part of the yield that is reflected with all its energy. Default: 0.03.",
			},
			{
				key: "inelastic", value: number{dst: &e.Inelastic, high: 0.5, percent: true},
				doc: "Part of the yield that comes back with less energy. Default: 0.07.",
			},
		},
		check: func(d *decoder, n *yaml.Node, path string) {
			// The yield grows with the angle by up to 1 + smoothness pi/8.
			if part := (e.Elastic + e.Inelastic) * e.MaxYield * (1 + 0.4*e.Smoothness); part > 0.8 {
				d.fail(n, path, fmt.Sprintf("%.3g reflected electrons for one that arrives", part),
					"at most 0.8: elastic and inelastic are parts of the yield", "")
			}
		},
	}
}

func layerLayout(l *Layer) value {
	return mapping{fields: []field{
		{
			key: "thickness", required: true,
			value: quantity{dst: &l.Thickness, dim: length(), low: "1 nm", high: "20 mm"},
			doc:   "Thickness of the layer.",
		},
		{
			key: "permittivity", required: true,
			value: number{dst: &l.Permittivity, low: 1, high: 1e4},
			doc:   "Relative permittivity: 3.9 for SiO2, 1 for a gap below a floating wafer.",
		},
	}}
}

// surfaceFields are what particles and charge meet at a wall.
func surfaceFields(e *Electrode) []field {
	return []field{
		{
			key: "ion_secondary_yield", value: yields{e},
			doc: "Mean number of electrons set free by an arriving ion: a number, by ion, or as a " +
				"function of the energy, known for Ar+. Default: 0.",
		},
		{
			key: "secondary_electron_energy",
			value: quantity{
				dst: &e.SecondaryElectronEnergy, dim: energy(), low: "0 eV",
				high: maxSecondaryEnergy,
			},
			doc: "Energy of the electrons set free by ions. Default: 1 eV.",
		},
		{
			key:   "electron_reflection",
			value: number{dst: &e.ElectronReflection, high: 1, below: true, percent: true},
			doc:   "Part of the arriving electrons that is reflected, at any energy. Default: 0.",
		},
		{
			key: "electron_emission", value: pointer[Emission]{&e.Emission, emissionLayout},
			doc: "Electrons set free and reflected by those electrons that are not reflected at any " +
				"energy, by their energy and angle (Vaughan). Default: none.",
		},
		{
			key: "dielectric", value: pointer[Layer]{&e.Dielectric, layerLayout},
			doc: "A layer without conduction on the electrode: its surface charges up. Default: none.",
		},
		{
			key: "floating", value: boolean{&e.Floating},
			doc: "A wafer on the electrode that is coupled to it for RF, but takes no direct current. " +
				"Default: false.",
		},
	}
}
