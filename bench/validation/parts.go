package main

import (
	"errors"
	"fmt"
	"path/filepath"
	"slices"
	"strings"

	"ionfall/internal/validation"
)

// part is a file of rows and the tests that make it.
type part struct {
	file  string // in the folder of rows
	title string
	about string
	// The tests that make the rows: package, pattern of their names, more flags.
	pkg, pattern, flags string
	takes               string
	// command makes the rows instead of tests, if given.
	command string
	rows    []validation.Row
}

// repeat is the command that makes the rows anew.
func (p *part) repeat() string {
	if p.command != "" {
		return p.command
	}
	return strings.Join(strings.Fields(fmt.Sprintf("go test %s -run %s -count 1 %s -validate "+
		"-update", p.pkg, p.pattern, p.flags)), " ")
}

// parts are all parts, from the smallest piece of physics to the whole discharge.
func parts() []part { return append(piecesOfPhysics(), discharges()...) }

func piecesOfPhysics() []part {
	return []part{
		{
			file: "swarm.json", title: "Collisions: swarms in a uniform field",
			about: "Electrons and ions in a uniform field, where collisions alone decide: exactly " +
				"solved models, published solutions, an independent program, measured mobilities.",
			pkg: "./mcc", pattern: "Validation", flags: "-timeout 1h", takes: "minutes",
		},
		{
			file: "plasma.json", title: "Fields, motion and walls: plasmas with a known solution",
			about: "Waves, space charge, sheaths and ion energies against theory; balances of a " +
				"discharge.",
			pkg: "./pic", pattern: "Validation", flags: "-timeout 1h", takes: "minutes",
		},
		{
			file: "reactor.json", title: "The reactor: circuit, shells, layers",
			about: "Series circuit with an empty gap, energy of generator, circuit and plasma, fields " +
				"and flight between cylindrical and spherical shells, a dielectric before a plasma.",
			pkg: "./pic", pattern: "ValidationReactor", takes: "seconds",
		},
		{
			file: "surfaces.json", title: "Surfaces: electrons set free",
			about: "Yields of ions, fast atoms and electrons against an independent calculation of the " +
				"published formulas, point by point.",
			pkg: "./internal/surfaces", pattern: "Validation", takes: "seconds",
		},
		{
			file: "bias.json", title: "Self-bias of whole discharges",
			about: "Equal electrodes, two tones, unequal electrodes behind a blocking capacitor.",
			pkg:   "./internal/run", pattern: "ValidationBias", flags: "-timeout 1h",
			takes: "some minutes",
		},
		{
			file: "gases.json", title: "Gases of film deposition: ions that change, fast neutrals",
			about: "Ions that become others, attachment, charged particles that end each other, " +
				"electrons that detach negative ions, and where the energy of the ions goes at a high " +
				"pressure.",
			command: "go test ./mcc -run 'HydrogenIonsReact|SilaneAttachment' -count 1 -validate " +
				"-update; go test ./pic -run 'PairsDecay|DetachmentDecay' -count 1 -update; " +
				"go test ./internal/run -run 'EnergyAtTheWalls|NegativeIonsSettle' " +
				"-count 1 -update",
			takes: "some minutes",
		},
	}
}

func discharges() []part {
	return []part{
		{
			file: "coverage.json", title: "Error bars: do they hold the true value?",
			about: "Many runs that differ in the seed only, against one very long run with the same " +
				"numerics. It tests the quoted statistical errors, not the numerics.",
			pkg: "./internal/run", pattern: "ValidationCoverage", flags: "-timeout 1h",
			takes: "some minutes",
		},
		{
			file: "convergence.json", title: "Numerics: how far from the limit?",
			about: "One argon discharge with cells, steps and particles each halved and doubled, for " +
				"both field schemes, extrapolated; the automatic choice against a much finer one; and " +
				"one at 20 Pa with two and four times the automatic number of particles.",
			pkg: "./internal/run", pattern: "ValidationConvergence", flags: "-timeout 3h",
			takes: "half an hour with two free processors",
		},
		{
			file: "discharge.json", title: "Whole discharges",
			about: "An argon discharge against an independent program with the same published cross " +
				"sections, with the automatic numerics and with numerics that resolve the Debye length.",
			pkg: "./internal/run", pattern: "Argon", flags: "-timeout 1h", takes: "some minutes",
		},
		{
			file: "benchmark.json", title: "The published helium benchmark",
			about: "Cases 1 and 2 to their end, with the bundled sets of cross sections and both " +
				"schemes; cases 1 to 4 with the numerics that the program chooses. The published " +
				"values belong to another set.",
			command: "go run ./bench/benchmark --case 1 --json >result.json; " +
				"go run ./bench/benchmark --record testdata/validation/benchmark.json result.json",
			takes: "a minute a run",
		},
		{
			file: "probe.json", title: "Langmuir probe: do the error bars hold the truth?",
			about: "Synthetic sweeps of known plasmas, drawn at random: how often the stated 95 % " +
				"intervals hold the truth. 88 to 98 % pass. No published sweep of a real probe with " +
				"its numbers was at hand: what is checked against publications is the theory (tests " +
				"of internal/probe hold its formulas and tables), not a measurement.",
			pkg: "./internal/probe", pattern: "ValidationCoverage", flags: "-timeout 1h",
			takes: "some minutes",
		},
		{
			file: "probe-loop.json", title: "Langmuir probe: are hidden inputs found?",
			about: "Ten discharges at inputs drawn at random, a noisy sweep drawn in each, and the " +
				"estimate of the inputs from one set of runs. All share coarse numerics: it tests the " +
				"estimate, not the discharge.",
			pkg: "./cmd/ionfall", pattern: "ValidationClosedLoop", flags: "-timeout 1h",
			takes: "some minutes",
		},
		{
			file: "window.json", title: "Operating window: is the recommended point as predicted?",
			about: "A search over pressure and voltage in argon for a mean ion energy below 22 eV at an " +
				"ion flux above 6e17 1/(m2 s), as large as possible; a fresh run at the settings that it " +
				"recommends against its own prediction. The numerics are coarse: it tests the search, not " +
				"the discharge.",
			pkg: "./internal/scan", pattern: "ValidationWindow", takes: "a minute",
		},
	}
}

// readParts returns the parts that have rows. A file of rows that no part names is an error, as
// nobody could tell how to repeat it.
func readParts(folder string) ([]part, error) {
	names, err := filepath.Glob(filepath.Join(folder, "*.json"))
	if err != nil {
		return nil, err
	}
	if len(names) == 0 {
		return nil, fmt.Errorf("no rows (*.json) in %s: want to be in the folder of go.mod", folder)
	}
	var list []part
	var bad []error
	for _, p := range parts() {
		path := filepath.Join(folder, p.file)
		if p.rows, err = validation.Read(path); err != nil {
			bad = append(bad, err)
		}
		names = slices.DeleteFunc(names, func(name string) bool { return name == path })
		if len(p.rows) > 0 {
			list = append(list, p)
		}
	}
	for _, name := range names {
		bad = append(bad, fmt.Errorf("%s: no part of the page says how to repeat these rows: "+
			"want an entry in parts of bench/validation/parts.go", name))
	}
	return list, errors.Join(bad...)
}
