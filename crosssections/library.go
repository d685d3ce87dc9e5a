package crosssections

import (
	"crypto/sha256"
	"embed"
	"errors"
	"fmt"
	"io/fs"
	"path"
	"slices"
	"strings"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/inputerr"
)

//go:embed data
var bundled embed.FS

// GasFileName is the file that makes a folder a gas.
const GasFileName = "gas.yaml"

// Library is a collection of gases, read and checked as a whole.
type Library struct {
	gases []libraryGas
}

// libraryGas is a gas with its sets, the default one first.
type libraryGas struct {
	name string
	sets []Gas
}

// Bundled is the library that comes with the program.
func Bundled() (*Library, error) {
	root, err := fs.Sub(bundled, "data")
	if err != nil {
		return nil, fmt.Errorf("bundled cross sections: %w", err)
	}
	return OpenLibrary(root)
}

// OpenLibrary reads all gases of a file system: a folder a gas, each with a gas.yaml. The error
// holds everything that is wrong with any of them.
func OpenLibrary(fsys fs.FS) (*Library, error) {
	entries, err := fs.ReadDir(fsys, ".")
	if err != nil {
		return nil, fmt.Errorf("cross-section library: %w", err)
	}
	var folders []string
	for _, entry := range entries {
		if entry.IsDir() && !strings.HasPrefix(entry.Name(), ".") {
			folders = append(folders, entry.Name())
		}
	}
	return openFolders(folders, func(name string) ([]byte, error) {
		return fs.ReadFile(fsys, name)
	})
}

// readFile gives the content of a file of a library by its path.
type readFile func(name string) ([]byte, error)

// openFolders reads the gases in the folders.
func openFolders(folders []string, read readFile) (*Library, error) {
	if len(folders) > MaxGases {
		return nil, fmt.Errorf("cross-section library: more than %d gases", MaxGases)
	}
	var lib Library
	var list inputerr.List
	for _, folder := range folders {
		gas, err := readGas(read, folder)
		var some inputerr.List
		switch {
		case errors.As(err, &some):
			list = append(list, some...)
		case err != nil:
			return nil, err
		default:
			lib.gases = append(lib.gases, gas)
		}
	}
	if err := list.Err(); err != nil {
		return nil, err
	}
	if len(lib.gases) == 0 {
		return nil, errors.New("cross-section library: no gas: want a folder a gas, " +
			"each with a " + GasFileName)
	}
	return &lib, nil
}

// Names are the gases of the library, sorted.
func (l *Library) Names() []string {
	names := make([]string, 0, len(l.gases))
	for _, g := range l.gases {
		names = append(names, g.name)
	}
	slices.Sort(names)
	return names
}

// Has tells whether the library has a gas with the name, which may name a set.
func (l *Library) Has(name string) bool {
	gasName, _, _ := strings.Cut(name, "/")
	return slices.ContainsFunc(l.gases, func(g libraryGas) bool { return g.name == gasName })
}

// Over is the library with those gases of the other one that it does not have itself.
func (l *Library) Over(other *Library) *Library {
	both := &Library{gases: slices.Clone(l.gases)}
	for _, g := range other.gases {
		if !l.Has(g.name) {
			both.gases = append(both.gases, g)
		}
	}
	return both
}

// Gas is the gas with the name: "He" with its default set, "He/phelps" with another one. The
// error for an unknown name lists the nearest and all known names.
func (l *Library) Gas(name string) (*Gas, error) {
	gasName, setName, hasSet := strings.Cut(name, "/")
	if !hasSet {
		setName = defaultSet
	}
	i := slices.IndexFunc(l.gases, func(g libraryGas) bool { return g.name == gasName })
	if i < 0 {
		return nil, unknown("gas", gasName, l.Names())
	}
	for _, set := range l.gases[i].sets {
		if set.Set == setName {
			return set.clone(), nil
		}
	}
	return nil, unknown("set of "+gasName, setName, l.gases[i].sets[0].Sets)
}

// clone is a copy that shares no list with the library except the rows of the tables, which
// nobody changes.
func (g Gas) clone() *Gas {
	g.Ions = slices.Clone(g.Ions)
	g.Electron = slices.Clone(g.Electron)
	g.IonNeutral = slices.Clone(g.IonNeutral)
	g.Neutral = slices.Clone(g.Neutral)
	g.Pairs = slices.Clone(g.Pairs)
	g.Sets = slices.Clone(g.Sets)
	g.Warnings = slices.Clone(g.Warnings)
	return &g
}

func unknown(what, name string, known []string) error {
	hint := didYouMean(name, known)
	if hint != "" {
		hint = " (" + hint + ")"
	}
	return fmt.Errorf("unknown %s %s%s: want one of %s", what, quoted(name), hint,
		strings.Join(known, ", "))
}

// readGas reads and checks the folder of a gas.
func readGas(read readFile, folder string) (libraryGas, error) {
	name := path.Join(folder, GasFileName)
	data, err := read(name)
	if err != nil {
		return libraryGas{}, fmt.Errorf("gas %q: %w", folder, err)
	}
	r, err := readGasFile(name, data)
	if err != nil {
		return libraryGas{}, err
	}
	r.check(folder)
	tables := r.readTables(read, folder)
	if err := r.err(); err != nil {
		return libraryGas{}, err
	}
	sum := sha256.Sum256(data)
	return libraryGas{name: folder, sets: r.assemble(folder, tables, sum[:])}, nil
}

// readTables reads the tables of all processes, each file once.
func (r *gasReader) readTables(read readFile, folder string) map[string]*TableFile {
	tables := map[string]*TableFile{}
	failed := map[string]bool{}
	load := func(file string, at *yaml.Node) bool {
		name := path.Join(folder, file)
		if file == "" || file != path.Base(file) || failed[file] {
			return false // noted before
		}
		if tables[file] != nil {
			return true
		}
		data, err := read(name)
		failed[file] = err != nil
		if err != nil {
			r.at(at, "file", quoted(file)+", which is not there",
				"a file in the folder of the gas")
			return false
		}
		table, err := ReadTable(name, data)
		failed[file] = err != nil
		if err != nil {
			var list inputerr.List
			errors.As(err, &list)
			r.list = append(r.list, list...)
			return false
		}
		tables[file] = table
		return true
	}
	for i := range r.out.pairs {
		p := &r.out.pairs[i]
		if p.law != nil || !load(p.file, p.fileAt) {
			continue
		}
		c := complaints{file: path.Join(folder, p.file)}
		t := tables[p.file]
		checkTable(p.threshold/r.pairFactor(p, t.Frame), t, &c)
		r.list = append(r.list, c.list...)
	}
	for i := range r.out.processes {
		p := &r.out.processes[i]
		if p.law != nil || !load(p.file, p.fileAt) {
			continue
		}
		name := path.Join(folder, p.file)
		c := complaints{file: name}
		checkTable(p.cost()*r.labFactor(p, tables[p.file].Frame), tables[p.file], &c)
		r.list = append(r.list, c.list...)
	}
	return tables
}
