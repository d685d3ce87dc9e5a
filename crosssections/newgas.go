package crosssections

import (
	"errors"
	"fmt"
	"maps"
	"math"
	"path"
	"slices"
	"strings"

	"ionfall/internal/phys"
)

// ImportSettings say how a species of an exchange file becomes a gas of a library.
type ImportSettings struct {
	Name     string  // of the gas, and of its folder
	Species  string  // in the file; may be empty if the file has only one
	Database string  // in the file; may be empty if the species is from only one
	File     string  // the file as the user named it, for messages and for the record
	SHA256   string  // of the file, hexadecimal
	Date     string  // day of the import, YYYY-MM-DD
	Mass     float64 // of the neutral [kg]; 0 takes that of the file's mass ratio
	// IonMasses are the masses of ions [kg] by name; the ion of the species itself can do
	// without: the neutral's mass without the missing electrons.
	IonMasses map[string]float64
	// IonsFrom is a gas whose ion collisions are taken over, or nil: files of this form have none.
	IonsFrom *Gas
}

// NewGas is a gas made from an exchange file.
type NewGas struct {
	Files    Files // of its folder, with the folder's name in front
	Gas      *Gas  // as it loads from them
	Warnings []string
	// Missing are its ions without collisions: a discharge cannot be run with them.
	Missing []string
}

// NewGas makes a gas of the library from a species of the file. The tables hold the numbers of
// the file; an effective cross section is kept as such, and split whenever the gas is loaded.
func (x *Exchange) NewGas(set ImportSettings) (*NewGas, error) {
	if set.Database != "" {
		if !slices.Contains(x.Databases(), set.Database) {
			return nil, unknown("database", set.Database, x.Databases())
		}
		x = x.Only(set.Database)
	}
	if set.Species == "" {
		species := x.Species()
		if len(species) != 1 {
			return nil, fmt.Errorf("the file holds the species %s: want one of them chosen",
				strings.Join(species, ", "))
		}
		set.Species = species[0]
	}
	blocks, warnings, err := x.of(set.Species)
	if err != nil {
		return nil, err
	}
	w := gasWriter{complaints: complaints{file: set.File}, set: set, files: Files{}}
	w.warnings = append(w.warnings, warnings...)
	w.write(blocks)
	if err := w.err(); err != nil {
		return nil, err
	}
	return w.finish()
}

// writtenGas is a gas.yaml to be written.
type writtenGas struct {
	Name     string           `yaml:"name"`
	Title    string           `yaml:"title"`
	Note     string           `yaml:"note"`
	Formula  string           `yaml:"formula,omitempty"`
	MassU    float64          `yaml:"mass_u"`
	Ions     []writtenIon     `yaml:"ions,omitempty"`
	Electron []writtenProcess `yaml:"electron"`
	Ion      []writtenProcess `yaml:"ion,omitempty"`
}

type writtenIon struct {
	Name   string  `yaml:"name"`
	Charge int     `yaml:"charge"`
	MassU  float64 `yaml:"mass_u"`
}

type writtenProcess struct {
	Name       string   `yaml:"name"`
	Kind       string   `yaml:"kind"`
	Projectile string   `yaml:"projectile,omitempty"`
	Threshold  float64  `yaml:"threshold_eV,omitempty"`
	Products   []string `yaml:"products,omitempty,flow"`
	File       string   `yaml:"file"`
}

// gasWriter collects the files of a new gas.
type gasWriter struct {
	complaints
	set      ImportSettings
	gas      writtenGas
	mass     float64 // of the neutral [kg]
	files    Files
	warnings []string
}

func (w *gasWriter) write(blocks []Block) {
	origin := fmt.Sprintf("Imported on %s from %s (SHA-256 %s), species %s", w.set.Date,
		path.Base(strings.ReplaceAll(w.set.File, `\`, "/")), w.set.SHA256, w.set.Species)
	if d := blocks[0].Database; d != "" {
		origin += ", database " + d
	}
	w.gas = writtenGas{Name: w.set.Name, Title: w.set.Species + ", imported", Note: origin + "."}
	if w.set.Species != w.set.Name {
		w.gas.Formula = w.set.Species
	}
	w.setMass(blocks)
	for i, name := range processNamesOf(blocks) {
		w.process(i+1, name, &blocks[i])
	}
	w.unusedMasses()
	if w.set.IonsFrom != nil {
		w.takeIons(w.set.IonsFrom)
	}
}

func (w *gasWriter) setMass(blocks []Block) {
	w.mass = w.set.Mass
	if w.mass == 0 {
		w.mass = massOf(blocks)
	}
	if w.mass == 0 {
		w.add(blocks[0].Line, 1, "mass_u", "no mass ratio of "+w.set.Species, "its mass given")
	}
	w.gas.MassU = inAtomicUnits(w.mass)
}

// inAtomicUnits is the mass in u to eight digits, more than any mass ratio has.
func inAtomicUnits(mass float64) float64 {
	u := mass / phys.AtomicMass
	if u == 0 {
		return 0
	}
	scale := math.Pow(10, 8-math.Ceil(math.Log10(u)))
	return math.Round(u*scale) / scale
}

// process adds process number n of electrons.
func (w *gasWriter) process(n int, name string, b *Block) {
	table := b.Table.from(b.Threshold)
	if len(table.Energy) == 0 {
		w.add(b.Line, 1, b.Keyword, fmt.Sprintf("a table up to %g eV", b.Table.Max()),
			fmt.Sprintf("rows from the threshold of %g eV on", b.Threshold))
		return
	}
	source := b.process().Source
	source.Date = w.set.Date
	if source.Citation == "" {
		source.Citation = "not named in the file"
		w.warn("%s:%d: %s has no reference: look it up, and enter it in the table",
			w.set.File, b.Line, name)
	}
	source.Note = ""
	what := name
	if b.Kind == Effective {
		what = "effective momentum transfer (elastic and inelastic)"
	}
	file := fmt.Sprintf("e-%02d-%s.csv", n, b.Kind)
	place := fmt.Sprintf("Line %d of the imported file; the date is that of the import.", b.Line)
	w.files[path.Join(w.set.Name, file)] = tableText(&TableFile{
		What:  "electrons on " + w.set.Species + ", " + what,
		Frame: Lab, Source: source, Table: table,
	}, append([]string{place}, b.Comments...)...)
	w.gas.Electron = append(w.gas.Electron, writtenProcess{
		Name: name, Kind: b.Kind.String(), Threshold: b.Threshold, Products: w.products(name, b),
		File: file,
	})
	if b.TwoWay {
		w.warn("%s:%d: %s runs both ways in the file: what it gives back to electrons is left out",
			w.set.File, b.Line, name)
	}
}

// products are those of the block, if they can be used; new ions among them are declared.
func (w *gasWriter) products(name string, b *Block) []string {
	list := b.products()
	fewest := map[Kind]int{Excitation: 1, Ionization: 2}[b.Kind]
	switch b.Kind {
	case Elastic, Effective:
		return nil
	case Ionization:
		if len(list) == 0 {
			list = []string{ElectronName, ElectronName, w.set.Species + "+"}
		}
	case Attachment:
		if len(list) == 0 {
			list = []string{w.set.Species + "-"}
		}
	}
	charge, electrons, ions := 0, 0, []string{}
	for _, p := range list {
		charge += chargeOf(p)
		if p == ElectronName {
			electrons++
		} else if chargeOf(p) != 0 {
			ions = append(ions, p)
		}
	}
	if charge != -1 || electrons < fewest || b.Kind == Attachment && electrons > 0 {
		if b.Kind == Excitation {
			w.warn("%s:%d: products of %s are left out: %s is no %s", w.set.File, b.Line, name,
				strings.Join(list, " + "), b.Kind)
			return nil
		}
		w.add(b.Line, 1, b.Keyword, "the products "+strings.Join(list, " + "),
			fmt.Sprintf("those of an %s, with the charge -1 in all", b.Kind))
		return nil
	}
	for _, ion := range ions {
		w.ion(ion, b)
	}
	return w.balanced(name, b, list)
}

// balanced adds the neutral that exchange files often leave out, or leaves the products of an
// excitation out that cannot be right.
func (w *gasWriter) balanced(name string, b *Block, list []string) []string {
	reactants := []string{ElectronName, w.set.Species}
	off := imbalance(reactants, list)
	if off == "" {
		return list
	}
	if rest := restOf(reactants, list); rest != "" {
		w.warn("%s:%d: %s: %s was added to the products, so that the atoms balance", w.set.File,
			b.Line, name, rest)
		return append(list, rest)
	}
	if b.Kind.Excites() {
		w.warn("%s:%d: products of %s are left out: %s", w.set.File, b.Line, name, off)
		return nil
	}
	w.add(b.Line, 1, b.Keyword, "the products "+strings.Join(list, " + ")+": "+off,
		"the atoms of "+w.set.Species)
	return nil
}

// ion declares an ion that a block makes.
func (w *gasWriter) ion(name string, b *Block) {
	if slices.ContainsFunc(w.gas.Ions, func(i writtenIon) bool { return i.Name == name }) {
		return
	}
	charge := chargeOf(name)
	mass := w.set.IonMasses[name]
	if mass == 0 && strings.TrimRight(name, "+-") == w.set.Species {
		mass = w.mass - float64(charge)*phys.ElectronMass
	} else if mass == 0 {
		mass, _ = formulaMass(name) // 0 if unknown
	}
	if mass == 0 {
		w.add(b.Line, 1, "ions.mass_u", "the ion "+name+" without a mass",
			"one given: only that of "+w.set.Species+"+ follows from the neutral's")
	}
	w.gas.Ions = append(w.gas.Ions, writtenIon{name, charge, inAtomicUnits(mass)})
}

// unusedMasses finds masses of ions that no process makes: slips in a name.
func (w *gasWriter) unusedMasses() {
	var known []string
	for _, ion := range w.gas.Ions {
		known = append(known, ion.Name)
	}
	for _, name := range slices.Sorted(maps.Keys(w.set.IonMasses)) {
		if !slices.Contains(known, name) {
			w.addHint(0, 0, "ions", "a mass of "+quoted(name)+", which no process makes",
				"one of "+strings.Join(known, ", "), didYouMean(name, known))
		}
	}
}

func (w *gasWriter) warn(format string, args ...any) {
	w.warnings = append(w.warnings, fmt.Sprintf(format, args...))
}

// finish writes gas.yaml and loads the gas as anybody will.
func (w *gasWriter) finish() (*NewGas, error) {
	text, err := w.yaml()
	if err != nil {
		return nil, err
	}
	w.files[path.Join(w.set.Name, GasFileName)] = text
	library, err := OpenFiles(w.files)
	if err != nil {
		return nil, fmt.Errorf("the gas that was made does not load: %w", err)
	}
	gas, err := library.Gas(w.set.Name)
	if err != nil {
		return nil, errors.Join(errors.New("the gas that was made is not found"), err)
	}
	made := &NewGas{Files: w.files, Gas: gas, Warnings: append(w.warnings, gas.Warnings...)}
	for _, ion := range gas.Ions {
		if len(gas.Processes(ion.Name)) == 0 {
			made.Missing = append(made.Missing, ion.Name)
		}
	}
	return made, nil
}
