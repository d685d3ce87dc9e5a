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
//	formula: Xx                  # unless it is the name
//	mass_u: 10.0                 # of the neutral
//	polarizability: {value_A3: 1.6, reference: ..., status: memory}   # for estimates, as is
//	diameter: {value_A: 3.4, reference: ..., status: memory}
//	ionization_width: {value_eV: 10, reference: ..., status: memory}  # of energy sharing
//	ions:                        # mass_u is needed only where the name is no chemical formula
//	  - {name: Xx+, charge: 1}
//	  - {name: Xx-, charge: -1, electron_affinity: {value_eV: 1, reference: ..., status: memory}}
//	electron:
//	  - {name: elastic, kind: elastic, file: e-elastic.csv}
//	  - name: ionization
//	    kind: ionization         # elastic, effective, excitation, rotation, vibration,
//	    threshold_eV: 12.0       # dissociation, ionization, attachment
//	    products: [e, e, Xx+]    # or branches: [{products: [...], part: 0.7, appearance_eV: 13}, ..]
//	    file: e-ionization.csv
//	ion:                         # isotropic, backscatter, reaction
//	  - {name: Xx+ isotropic, projectile: Xx+, kind: isotropic, file: ion-isotropic.csv}
//	  - name: Xx+ to Xx2+        # of the gas itself, unless a target is given
//	    projectile: Xx+
//	    target: Yy
//	    kind: reaction
//	    products: [Xx2+, Yy]     # scattering: forward lets the first one fly on as the ion did
//	    defect_eV: -0.5          # energy it takes; of what it sets free, kinetic_part is motion
//	    rate: {value_m3ps: 1e-15, falls_above_eV: 1, falls_as: 1}   # sigma = k/g; or a file
//	    reference: ...           # of a rate, with status and note
//	    status: memory
//	  - name: Xx2+ on Yy         # at the rate of a mobility, or of the polarization limit: {}
//	    projectile: Xx2+
//	    target: Yy
//	    kind: isotropic
//	    langevin: {mobility_cm2pVs: 2.5, part: 1, floor_m2: 1e-19}
//	    reference: ...
//	    status: memory
//	neutral:                     # fast neutrals; left out, hard spheres of the diameters
//	  - {name: Xx isotropic, projectile: Xx, kind: isotropic, file: neutral-isotropic.csv}
//	pairs:                       # of charged particles; k ~ T^exponent, or a file
//	  - name: recombination
//	    reactants: [e, Xx+]
//	    products: [Xx]
//	    rate: {value_m3ps: 1e-13, exponent: -0.5}
//	    reference: ...
//	    status: memory
//	  - name: detachment         # the kind is neutralization, unless it says detachment
//	    kind: detachment         # e + Xx- -> Xx + 2 e
//	    reactants: [e, Xx-]      # in this order
//	    products: [e, e, Xx]
//	    threshold_eV: 1.0        # the electron affinity, or more
//	    file: pair-detachment.csv
//	sets:                        # left out, all processes make the default set
//	  default: {title: in words, processes: [elastic, ionization, Xx+ isotropic]}
//
// Charge and atoms of every process balance. What collides a gas's ion with another gas may stand
// in the folder of either. An ion without elastic collisions with a gas of known polarizability
// gets those of the polarization limit (DefaultElastic), and ions of opposite charge without a
// pair neutralize each other by the formula of Hickman (DefaultNeutralization).
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
// of the relative motion, half of it for equal masses). A pair's first reactant is its projectile.
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
