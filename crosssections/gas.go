package crosssections

import "slices"

// ElectronName is the name of the electron among projectiles and products.
const ElectronName = "e"

// Source says where the numbers of a table come from.
type Source struct {
	Citation string // reference as printed: authors, journal, volume, page, year
	Database string // collection the table was taken from; empty if none
	Date     string // day of the download, YYYY-MM-DD; empty if none
	Status   string // read, computed, derived or memory
	Note     string // how it was obtained, pitfalls, doubts
	Bib      string // key of the reference in the program's list of citations; may be empty
}

// Process is one kind of collision of one projectile with the gas.
type Process struct {
	Name       string  // unique within the gas
	Kind       Kind    // what happens
	Projectile string  // "e" or the name of an ion
	Threshold  float64 // energy lost by the projectile, in the frame of the table [eV]
	Frame      Frame   // meaning of the energy of the table
	Table      Table   // cross section against energy
	// Target is the gas it collides with; empty for the gas that the process belongs to.
	Target   string
	Products []string // all products, charged and neutral; empty where nothing changes
	// Out is the products with their masses, where particles change.
	Out []Particle
	// Release is the energy that becomes motion of the products [eV].
	Release float64
	// Scattering is where the first product of a reaction goes.
	Scattering Scattering
	// WeightRatio is the statistical weight of the upper over that of the lower level of an
	// excitation that may run backwards; 0 if it may not.
	WeightRatio float64
	Source      Source // where the numbers come from
	File        string // table within the library
	SHA256      string // of that file, hexadecimal
}

// Scattering is where the first of the products of a reaction goes, in the centre-of-mass frame.
type Scattering int

// The directions of the first product; the others balance its momentum.
const (
	Anywhere Scattering = iota // isotropic
	Forward                    // as the projectile flew
	Backward                   // against it
)

var scatteringNames = [...]string{Anywhere: "isotropic", Forward: "forward", Backward: "backward"}

// String is the name of the scattering in gas.yaml.
func (s Scattering) String() string { return scatteringNames[s] }

// Particle is a product of a process.
type Particle struct {
	Name   string
	Mass   float64 // [kg]
	Charge int
}

// PairKind is what becomes of two charged particles that react.
type PairKind int

// The kinds of pairs.
const (
	// Neutralization of opposite charges: recombination with electrons, or of ions.
	Neutralization PairKind = iota
	// Detachment of the electron of a negative ion by another electron.
	Detachment
)

var pairKindNames = [...]string{Neutralization: "neutralization", Detachment: "detachment"}

// String is the name of the kind in gas.yaml.
func (k PairKind) String() string { return pairKindNames[k] }

// Pair is a reaction between two charged particles.
type Pair struct {
	Name      string
	Kind      PairKind
	Threshold float64 // energy that it takes from the relative motion [eV]
	Reactants [2]string
	Masses    [2]float64 // of the reactants [kg]
	Products  []string
	Table     Table // cross section against the energy of the relative motion
	Source    Source
	File      string // table within the library; empty if it follows from a rate
	SHA256    string // of that file
}

// Ion is an ion that the processes of a gas make or move.
type Ion struct {
	Name     string  // with the charge: "Ar+"
	Mass     float64 // [kg]
	Charge   int     // in elementary charges, with its sign
	Affinity Datum   // electron affinity of the neutral of a negative ion [eV]; may be unknown
}

// Datum is a number with its source; zero if it is not known.
type Datum struct {
	Value  float64
	Source Source
}

// Gas is a neutral gas with one set of processes.
type Gas struct {
	Name       string    // name in a mixture: "Ar"
	Set        string    // name of the set: "default"
	Title      string    // name in words: "argon"
	Note       string    // why these tables, what to doubt
	Mass       float64   // of the neutral [kg]
	Ions       []Ion     // declared ions, in the order of gas.yaml
	Electron   []Process // collisions of electrons; never of kind Effective
	IonNeutral []Process // collisions of ions, with this gas or that of Target
	Neutral    []Process // collisions of fast neutrals, with this gas or that of Target
	Pairs      []Pair    // reactions of two charged particles
	Sharing    Datum     // width of the law of energy sharing in ionization [eV]
	// Polarizability [A^3] and Diameter [A] estimate collisions that nothing is published about.
	Polarizability, Diameter Datum
	Sets                     []string // names of all sets of the gas
	Warnings                 []string // what happened while the set was prepared and a user should see
	SHA256                   string   // of gas.yaml, the name of the set and its tables, hexadecimal
}

// Ion is the declared ion with the name.
func (g *Gas) Ion(name string) (Ion, bool) {
	i := slices.IndexFunc(g.Ions, func(ion Ion) bool { return ion.Name == name })
	if i < 0 {
		return Ion{}, false
	}
	return g.Ions[i], true
}

// Processes are the collisions of the projectile with this gas: "e", an ion or a neutral.
func (g *Gas) Processes(projectile string) []Process {
	var found []Process
	for _, list := range [][]Process{g.Electron, g.IonNeutral, g.Neutral} {
		for _, p := range list {
			if p.Projectile == projectile && p.Target == "" {
				found = append(found, p)
			}
		}
	}
	return found
}
