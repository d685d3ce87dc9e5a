package run

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"

	"ionfall/crosssections"
	"ionfall/internal/inputerr"
	"ionfall/internal/phys"
	"ionfall/internal/store"
	"ionfall/mcc"
)

// keptLibrary is the folder of the results that holds the gases which came from the user's own
// library. Results so stay whole when they are moved, or the library is changed; resolved.yaml
// names this folder. For the same reason a checkpoint holds the files.
const keptLibrary = "gases"

// maxLibraryFiles bounds what is read of a wrong folder.
const maxLibraryFiles = 20_000

// ReadLibrary reads the files of a folder of gases into memory: those that belong to gases, and
// each once, so that what was checked is what is kept.
func ReadLibrary(dir string) (crosssections.Files, error) {
	folders, err := os.ReadDir(dir)
	if err != nil {
		return nil, plainCause(err)
	}
	files := crosssections.Files{}
	for _, folder := range folders {
		// A link to a folder is as good as a folder.
		info, err := os.Stat(filepath.Join(dir, folder.Name()))
		if err != nil || !info.IsDir() || strings.HasPrefix(folder.Name(), ".") {
			continue
		}
		if _, err := os.Stat(filepath.Join(dir, folder.Name(), crosssections.GasFileName)); err != nil {
			return nil, fmt.Errorf("%s in it has no %s: want nothing but gases in a library",
				folder.Name(), crosssections.GasFileName)
		}
		if err := readGasFolder(files, dir, folder.Name()); err != nil {
			return nil, err
		}
	}
	if len(files) == 0 {
		return nil, errors.New("no gas in it: want a folder for each, with a " +
			crosssections.GasFileName)
	}
	return files, nil
}

func readGasFolder(files crosssections.Files, dir, gas string) error {
	entries, err := os.ReadDir(filepath.Join(dir, gas))
	if err != nil {
		return plainCause(err)
	}
	for _, e := range entries {
		name := e.Name()
		if name != crosssections.GasFileName && filepath.Ext(name) != ".csv" {
			continue
		}
		if len(files) >= maxLibraryFiles {
			return fmt.Errorf("more than %d files of gases in it", maxLibraryFiles)
		}
		data, err := readRegular(filepath.Join(dir, gas, name))
		if err != nil {
			return fmt.Errorf("%s: %w", path.Join(gas, name), err)
		}
		files[path.Join(gas, name)] = data
	}
	return nil
}

// readRegular reads a file of bounded size. Anything else might never end.
func readRegular(name string) ([]byte, error) {
	info, err := os.Stat(name)
	if err != nil {
		return nil, plainCause(err)
	}
	if !info.Mode().IsRegular() {
		return nil, errors.New("not a regular file")
	}
	f, err := os.Open(name)
	if err != nil {
		return nil, plainCause(err)
	}
	defer func() { _ = f.Close() }() // nothing was written
	data, err := io.ReadAll(io.LimitReader(f, crosssections.MaxTableFileBytes+1))
	if err != nil {
		return nil, plainCause(err)
	}
	if len(data) > crosssections.MaxTableFileBytes {
		return nil, fmt.Errorf("more than %d bytes", crosssections.MaxTableFileBytes)
	}
	return data, nil
}

// plainCause is the error without the path, which the message around it has.
func plainCause(err error) error {
	var cause *fs.PathError
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return errors.New("it is not there")
	case errors.As(err, &cause):
		return cause.Err
	}
	return err
}

// OpenLibrary checks the gases of a folder. Errors in its files are an inputerr.List that names
// them as they are reached from dir.
func OpenLibrary(dir string) (*crosssections.Library, crosssections.Files, error) {
	files, err := ReadLibrary(dir)
	if err != nil {
		return nil, nil, err
	}
	library, err := crosssections.OpenFiles(files)
	var list inputerr.List
	if errors.As(err, &list) {
		for _, e := range list {
			e.File = filepath.Join(dir, filepath.FromSlash(e.File))
		}
	}
	return library, files, err
}

// ownLibrary opens the library that the input names, relative to the folder that the input is in.
func (p *Plan) ownLibrary(folder string) error {
	name := p.Case.Gas.Library
	if name == "" {
		return nil
	}
	dir := filepath.FromSlash(name)
	if !filepath.IsAbs(dir) {
		dir = filepath.Join(folder, dir)
	}
	library, files, err := OpenLibrary(dir)
	var list inputerr.List
	switch {
	case errors.As(err, &list):
		return err
	case err != nil:
		return inputerr.List{p.Case.Errorf("gas.library", fmt.Sprintf("%q", name),
			"a folder of gases", dir+": "+err.Error())}
	}
	p.own, p.ownFiles = library, files
	return nil
}

// keepOwn leaves of the user's files those of the gases in use.
func (p *Plan) keepOwn() {
	kept := crosssections.Files{}
	for _, g := range p.Gases {
		for name, data := range p.ownFiles.Only(g.Name) {
			kept[name] = data
		}
	}
	p.ownFiles = kept
}

// resolvedLibrary is the library that the resolved input names.
func (p *Plan) resolvedLibrary() string {
	if len(p.ownFiles) == 0 {
		return ""
	}
	return keptLibrary
}

// crossSections says where the data of each gas come from, for the provenance.
func (p *Plan) crossSections() map[string]any {
	gases := map[string]any{}
	for _, g := range p.Gases {
		of := map[string]any{"set": g.Set, "sha256": g.SHA256, "from": "bundled"}
		if p.own != nil && p.own.Has(g.Name) {
			of["from"] = "gas.library: " + p.Case.Gas.Library
			of["instead_of_bundled"] = p.bundled.Has(g.Name)
		}
		gases[g.Name] = of
	}
	return gases
}

// writeOwn puts the files of the user's gases into the results, unless they are there.
func (p *Plan) writeOwn(folder *store.Run) error {
	for name, data := range p.ownFiles {
		to := filepath.Join(folder.Path(keptLibrary), filepath.FromSlash(name))
		if there, err := os.ReadFile(to); err == nil && bytes.Equal(there, data) {
			continue
		}
		if err := os.MkdirAll(filepath.Dir(to), 0o777); err != nil {
			return fmt.Errorf("keeping the gas library: %w", err)
		}
		if err := store.WriteFile(to, data); err != nil {
			return err
		}
	}
	return nil
}

// unusable finds what the program cannot simulate, before anything is started.
func (p *Plan) unusable() inputerr.List {
	var bad inputerr.List
	declared := map[string]declaration{}
	for _, g := range p.Gases {
		key := "gas.mixture." + g.Name
		for _, ion := range g.Ions {
			other, twice := declared[ion.Name]
			if twice && math.Abs(ion.Mass/other.mass-1) > sameMass {
				bad = append(bad, p.Case.Errorf(key,
					fmt.Sprintf("%s with a mass of %.6g u", ion.Name, ion.Mass/phys.AtomicMass),
					fmt.Sprintf("%.6g u, as in %s", other.mass/phys.AtomicMass, other.gas), ""))
			}
			if !twice {
				declared[ion.Name] = declaration{g.Name, ion.Mass}
			}
		}
		for _, e := range g.Electron {
			if e.Kind == crosssections.Ionization && productCharge(g, &e) != 1 {
				bad = append(bad, p.Case.Errorf(key, "the process "+e.Name+" of "+g.Name,
					"ionization to one ion of charge 1: others are not simulated", ""))
			}
		}
	}
	if !slices.ContainsFunc(p.heavy, func(h heavySpecies) bool { return h.Charge > 0 }) {
		bad = append(bad, p.Case.Errorf("gas.mixture", "no gas with ions",
			"at least one: a discharge needs them", ""))
	}
	return append(bad, p.unsimulated()...)
}

// declaration is where an ion was declared first.
type declaration struct {
	gas  string
	mass float64
}

// sameMass is the largest relative difference between declarations of one ion.
const sameMass = 1e-3

// productCharge is the charge of the ions that a process makes.
func productCharge(g *crosssections.Gas, e *crosssections.Process) int {
	sum := 0
	for _, product := range e.Products {
		if ion, ok := g.Ion(product); ok {
			sum += ion.Charge
		}
	}
	return sum
}

// unsimulated asks the collision model which kinds of collision of a species it does not have.
func (p *Plan) unsimulated() inputerr.List {
	var bad inputerr.List
	electron := heavySpecies{Name: crosssections.ElectronName, Mass: phys.ElectronMass, Charge: -1}
	gas := p.backgrounds()
	for _, h := range append([]heavySpecies{electron}, p.heavy...) {
		for _, b := range gas {
			if len(mcc.Collisions(p.settings(h), gas, b)) == 0 {
				continue // missingCollisions tells, where it matters
			}
			// The others are there for the processes with this gas that they bring.
			if err := mcc.Check(p.settings(h), gas, b); err != nil {
				bad = append(bad, p.Case.Errorf("gas.mixture."+b.Gas.Name, "", "", err.Error()))
			}
		}
	}
	return bad
}
