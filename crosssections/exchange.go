package crosssections

import (
	"fmt"
	"slices"
	"strings"

	"ionfall/internal/phys"
)

// Exchange is what a file in the exchange form of the open-access repositories holds: blocks,
// possibly of several species and databases.
type Exchange struct {
	Blocks []Block
	// Warnings are peculiarities of the file that were dealt with, with their place.
	Warnings []string
}

// Block is one cross section of an exchange file.
type Block struct {
	Kind        Kind    // of an electron collision
	Keyword     string  // first line of the block
	Target      string  // species that is hit
	Product     string  // what stands behind the arrow; empty if nothing does
	Threshold   float64 // energy loss [eV]
	MassRatio   float64 // electron over target, of elastic and effective blocks; 0 if not given
	TwoWay      bool    // the process may run backwards
	WeightRatio float64 // statistical weight of the upper over the lower level, if TwoWay
	Database    string  // last database named before the block
	Reference   string  // last reference named before the block
	Comments    []string
	Table       Table // in eV and m2, whatever the file's units are
	Line        int   // of the keyword
}

// Imported is a species of an exchange file, ready to be used.
type Imported struct {
	Species   string
	Mass      float64   // from the mass ratio of the file [kg]; 0 if it has none
	Processes []Process // of electrons; never of kind Effective
	Warnings  []string  // what a user should see: clipped differences, oddities of the file
}

// Species are the species that the file has cross sections of, in the order of the file.
func (x *Exchange) Species() []string {
	return x.distinct(func(b *Block) string { return b.Target })
}

// Databases are the databases that the file names, in its order.
func (x *Exchange) Databases() []string {
	return x.distinct(func(b *Block) string { return b.Database })
}

func (x *Exchange) distinct(of func(*Block) string) []string {
	var names []string
	for i := range x.Blocks {
		if name := of(&x.Blocks[i]); !slices.Contains(names, name) {
			names = append(names, name)
		}
	}
	return names
}

// Only is the part of the file that comes from a database.
func (x *Exchange) Only(database string) *Exchange {
	part := &Exchange{Warnings: x.Warnings}
	for _, b := range x.Blocks {
		if b.Database == database {
			part.Blocks = append(part.Blocks, b)
		}
	}
	return part
}

// Gas is the electron collisions of a species. An effective cross section becomes an elastic one
// by ElasticFromEffective, with a warning where that is negative. It is an error if the file
// holds the species from several databases, as their cross sections must not be mixed: choose
// with Only.
func (x *Exchange) Gas(species string) (*Imported, error) {
	blocks, warnings, err := x.of(species)
	if err != nil {
		return nil, err
	}
	gas := &Imported{Species: species, Mass: massOf(blocks), Warnings: warnings}
	for i, name := range processNamesOf(blocks) {
		p := blocks[i].process()
		p.Name = name
		gas.Processes = append(gas.Processes, p)
	}
	gas.Processes, warnings = splitEffective(gas.Processes)
	gas.Warnings = append(gas.Warnings, warnings...)
	return gas, nil
}

// of is the blocks of a species to be used together, and what a user should know about them.
func (x *Exchange) of(species string) ([]Block, []string, error) {
	of := &Exchange{}
	for _, b := range x.Blocks {
		if b.Target == species {
			of.Blocks = append(of.Blocks, b)
		}
	}
	if len(of.Blocks) == 0 {
		return nil, nil, unknown("species", species, x.Species())
	}
	if d := of.Databases(); len(d) > 1 {
		return nil, nil, fmt.Errorf("species %s is in the databases %s: want one of them", species,
			strings.Join(d, ", "))
	}
	blocks, err := of.oneElastic(species)
	if err != nil {
		return nil, nil, err
	}
	warnings := slices.Clone(x.Warnings)
	if len(blocks) < len(of.Blocks) {
		warnings = append(warnings, species+": the file has an elastic and an effective "+
			"cross section; the effective one is left out")
	}
	return blocks, warnings, nil
}

// massOf is the mass of the neutral from the mass ratio of the blocks [kg], 0 if they have none.
func massOf(blocks []Block) float64 {
	for i := range blocks {
		if ratio := blocks[i].MassRatio; ratio > 0 {
			return phys.ElectronMass / ratio
		}
	}
	return 0
}

// processNamesOf are names of the processes, each used once.
func processNamesOf(blocks []Block) []string {
	var list []string
	seen := map[string]int{}
	for i := range blocks {
		name := blocks[i].process().Name
		if seen[name]++; seen[name] > 1 {
			name = fmt.Sprintf("%s (%d)", name, seen[name])
		}
		list = append(list, name)
	}
	return list
}

// oneElastic is the blocks without an effective one that an elastic one makes useless.
func (x *Exchange) oneElastic(species string) ([]Block, error) {
	lines := map[Kind][]string{}
	for _, b := range x.Blocks {
		lines[b.Kind] = append(lines[b.Kind], fmt.Sprint(b.Line))
	}
	for _, kind := range []Kind{Elastic, Effective} {
		if len(lines[kind]) > 1 {
			return nil, fmt.Errorf("species %s has several %s cross sections (lines %s): want one",
				species, kind, strings.Join(lines[kind], ", "))
		}
	}
	if len(lines[Elastic])+len(lines[Effective]) == 0 {
		return nil, fmt.Errorf("species %s has no elastic and no effective cross section: want one",
			species)
	}
	if len(lines[Elastic]) == 1 {
		return slices.DeleteFunc(slices.Clone(x.Blocks), func(b Block) bool {
			return b.Kind == Effective
		}), nil
	}
	return x.Blocks, nil
}

// process is the block as a process.
func (b *Block) process() Process {
	name := b.Kind.String()
	if b.Product != "" {
		name += " " + b.Product
	}
	if b.Kind == Effective {
		name = Elastic.String() // it is split before anybody sees it
	}
	return Process{
		Name: name, Kind: b.Kind, Projectile: ElectronName, Threshold: b.Threshold, Frame: Lab,
		Table: b.Table, Products: b.products(), WeightRatio: b.WeightRatio,
		Source: Source{
			Citation: b.Reference, Database: b.Database, Status: "read",
			Note: strings.Join(b.Comments, " "),
		},
	}
}

// products are the products that the PROCESS comment tells, or else those behind the arrow.
func (b *Block) products() []string {
	for _, c := range b.Comments {
		text, found := strings.CutPrefix(c, "PROCESS:")
		if !found {
			continue
		}
		if i := strings.LastIndex(text, ","); i >= 0 {
			kind := strings.ToUpper(strings.TrimSpace(text[i+1:]))
			if _, known := exchangeKeyword(kind); known {
				text = text[:i]
			}
		}
		if _, right, found := cutArrow(text); found && strings.TrimSpace(right) != "" {
			return splitProducts(right)
		}
	}
	if b.Product == "" {
		return nil
	}
	list := splitProducts(b.Product)
	electrons := map[Kind]int{Excitation: 1, Ionization: 2}[b.Kind]
	return append(slices.Repeat([]string{ElectronName}, electrons), list...)
}

// cutArrow cuts at -> or <->.
func cutArrow(text string) (left, right string, found bool) {
	if left, right, found = strings.Cut(text, "<->"); found {
		return left, right, true
	}
	return strings.Cut(text, "->")
}

// splitProducts splits at the plus signs that are no charge: a sign belongs to a name if it
// stands directly behind it and before a space, another sign or the end.
func splitProducts(text string) []string {
	text = strings.NewReplacer("^+", "+", "^-", "-").Replace(strings.TrimSpace(text))
	var list []string
	start := 0
	flush := func(end int) {
		name := strings.TrimSpace(text[start:end])
		if name == "E" {
			name = ElectronName
		}
		if name != "" {
			list = append(list, name)
		}
	}
	depth := 0 // of brackets, which are part of a name
	for i := range len(text) {
		switch text[i] {
		case '(', '[':
			depth++
		case ')', ']':
			depth--
		}
		if text[i] != '+' || depth > 0 {
			continue
		}
		afterName := i > start && text[i-1] != ' '
		beforeName := i+1 < len(text) && text[i+1] != ' ' && text[i+1] != '+'
		if !afterName || beforeName {
			flush(i)
			start = i + 1
		}
	}
	flush(len(text))
	return list
}
