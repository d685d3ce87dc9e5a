package main

import (
	"fmt"
	"os"
	"slices"
	"strings"

	"ionfall/crosssections"
)

const (
	helium    = "He"
	heliumIon = "He+"
	allSets   = "all"
)

// namedGas is helium with one set of cross sections.
type namedGas struct {
	name     string
	gas      *crosssections.Gas
	warnings []string
}

// gases returns the sets that are asked for: a file, a bundled set, or all.
func (o *options) gases() ([]namedGas, error) {
	library, err := crosssections.Bundled()
	if err != nil {
		return nil, err
	}
	base, err := library.Gas(helium)
	if err != nil {
		return nil, err
	}
	var list []namedGas
	if o.file != "" {
		g, err := fromFile(o.file, o.database, base)
		if err != nil {
			return nil, err
		}
		list = append(list, g)
	}
	sets := []string{o.set}
	switch {
	case o.set == allSets:
		sets = base.Sets
	case o.set == "" && o.file != "":
		sets = nil
	case o.set == "":
		sets = base.Sets[:1]
	}
	for _, set := range sets {
		gas, err := library.Gas(helium + "/" + set)
		if err != nil {
			return nil, fmt.Errorf("--set: %w; or %s", err, allSets)
		}
		list = append(list, namedGas{"set " + set, gas, gas.Warnings})
	}
	for i := range list {
		list[i].gas.Mass = heliumMass
	}
	return list, nil
}

// fromFile reads the electron collisions of helium from a file in the exchange form. The ions'
// stay the bundled ones, which are those that the benchmark prescribes.
func fromFile(name, database string, base *crosssections.Gas) (namedGas, error) {
	f, err := os.Open(name)
	if err != nil {
		return namedGas{}, fmt.Errorf("--helium: %w", err)
	}
	defer f.Close() //nolint:errcheck // only read
	x, err := crosssections.ReadExchange(name, f)
	if err != nil {
		return namedGas{}, err
	}
	if database != "" {
		if !slices.Contains(x.Databases(), database) {
			return namedGas{}, fmt.Errorf("--database: %s has no %q, want one of %s", name, database,
				strings.Join(x.Databases(), ", "))
		}
		x = x.Only(database)
	}
	part, err := x.Gas(helium)
	if err != nil {
		return namedGas{}, fmt.Errorf("%s: %w", name, err)
	}
	gas := *base
	gas.Electron = part.Processes
	for i := range gas.Electron {
		if p := &gas.Electron[i]; p.Kind == crosssections.Ionization {
			p.Products = []string{crosssections.ElectronName, crosssections.ElectronName, heliumIon}
		}
	}
	return namedGas{"file " + name, &gas, part.Warnings}, nil
}
