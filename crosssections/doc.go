// Package crosssections holds collision data: which collisions a gas has, how large their cross
// sections are, and where each number comes from.
//
// # Vocabulary
//
// A gas is data, not code: a folder with a gas.yaml (masses, ions, processes) and one table a
// process. A process is one kind of collision of one projectile with the gas. A set is a choice
// of processes used together; every gas has a default set, and "He/phelps" names another one.
//
//	lib, err := crosssections.Bundled()
//	argon, err := lib.Gas("Ar")
//	for _, p := range argon.Electron {
//		fmt.Println(p.Name, p.Kind, p.Threshold, p.Table.At(20)) // at 20 eV, in m2
//	}
//
// # The form of a gas
//
// gas.yaml says what can happen, the tables say how often and on whose word:
//
//	name: Xx                     # the folder has this name
//	title: in words
//	note: why these tables, what to doubt
//	mass_u: 10.0                 # of the neutral
//	ions:
//	  - {name: Xx+, charge: 1}   # mass_u is needed unless it is the ion of the gas itself
//	electron:
//	  - {name: elastic, kind: elastic, file: e-elastic.csv}
//	  - name: ionization
//	    kind: ionization         # elastic, effective, excitation, ionization, attachment
//	    threshold_eV: 12.0
//	    products: [e, e, Xx+]
//	    file: e-ionization.csv
//	ion:                         # isotropic, backscatter, reaction
//	  - {name: Xx+ isotropic, projectile: Xx+, kind: isotropic, file: ion-isotropic.csv}
//	sets:                        # left out, all processes make the default set
//	  default: {title: in words, processes: [elastic, ionization, Xx+ isotropic]}
//
// A set holds one elastic or effective process of electrons; from an effective one the inelastic
// processes of the set are subtracted on loading. See ReadTable for the form of the tables. To
// add a gas, add a folder; everything about it is checked when the library is opened.
//
// # Units and frames
//
// Energies are in eV and cross sections in m2. The energy of an electron is that in the frame of
// the target. For ions it matters which energy a table means, and published tables differ:
// Frame says Lab (the projectile's energy with the target at rest) or CenterOfMass (the energy
// of the relative motion, half of it for equal masses).
//
// # Policy outside a table
//
// Linear between rows. Zero below the threshold. Below the first row, the first value where
// there is no threshold, and zero where there is one and for attachment. Above the last row, the
// straight line through the last two rows on logarithmic axes, but never rising. Table.Beyond
// tells whether an energy is past what the source covers, so that nobody reads on silently.
//
// # Provenance
//
// Every table opens with comment lines that name its reference, the database it was taken from
// with the date, and a status: "read" (copied from a document or data file), "computed" (from a
// published formula), "derived" (from other tables, the note says how) or "memory" (recalled,
// not checked against a source). Only data that may be passed on is bundled: open-access
// databases and formulas printed in papers. Every table and every set carries its SHA-256.
package crosssections

//go:generate go run ./internal/gen -dir data
