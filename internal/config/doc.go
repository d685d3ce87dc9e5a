// Package config reads the input file of a run and checks it.
//
// The file is YAML. Quantities are text with a unit ("5 Pa", "13.56 MHz"); a Case holds them as
// plain numbers in SI units, with energies in eV. Everything that is wrong with a file is
// reported at once, each error with line, column, key, what was found and what is wanted.
//
//	c, source, err := config.Load("argon.yaml")
//	if err != nil {
//		return err // an inputerr.List
//	}
//	if !known(c.Gas.Mixture[0].Gas) {
//		return c.Errorf("gas.mixture.Xx", "Xx", "a gas of the library", "")
//	}
//
// The words used here: a key path is the keys from the top joined by dots, list elements counted
// from 0 ("drive.tones.0.frequency"). The layout is the tree of all keys: it is written down once,
// in layout.go, and reading, writing (Resolved) and the JSON Schema (Schema) all follow it. To add
// a key, add the field to Case, a line to the layout, and its limits to limits.go.
package config
