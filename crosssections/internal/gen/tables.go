package main

import (
	"bytes"
	"fmt"
	"io/fs"

	"ionfall/crosssections"
	"ionfall/crosssections/internal/fits"
)

// file is a table to write.
type file struct {
	name    string
	header  [][2]string
	rows    []row
	beyond  float64 // a comment is written above the first row past it [eV]; 0 is none
	comment string
}

// bytes is the text of the table.
func (f *file) bytes() []byte {
	var b bytes.Buffer
	for _, h := range f.header {
		fmt.Fprintf(&b, "# %s: %s\n", h[0], h[1])
	}
	fmt.Fprintln(&b, "energy_eV,cross_section_m2")
	marked := f.beyond == 0
	for _, r := range f.rows {
		if !marked && r.energy > f.beyond {
			fmt.Fprintf(&b, "# %s\n", f.comment)
			marked = true
		}
		fmt.Fprintf(&b, "%.8g,%.6g\n", r.energy, r.q)
	}
	return b.Bytes()
}

const generated = "Written by `go generate ./crosssections`; linear interpolation keeps within " +
	"0.2 % of the formula."

// tables are all generated tables; the library holds the tables that some derive from.
func tables(library fs.FS) ([]file, error) {
	files := append(argonElectrons(), argonIons()...)
	files = append(files, heliumFormulas()...)
	files = append(files, detachment("O2"), detachment("CO2"))
	derived, err := heliumDerived(library)
	if err != nil {
		return nil, err
	}
	return append(files, derived...), nil
}

const lowest, highest = 1e-4, 1e4 // energies of the tables [eV]

func argonElectrons() []file {
	minimum := kink(fits.ArgonAmplitude, 0.1, 0.5)
	table := func(name, what, note string, rows []row) file {
		return file{
			name: "Ar/" + name, rows: rows, beyond: fits.ArgonValidTo,
			comment: "from here on the formula is extrapolated",
			header: [][2]string{
				{"what", what},
				{"reference", "A. V. Phelps and Z. Lj. Petrovic, " +
					"Plasma Sources Sci. Technol. 8, R21 (1999), analytic fit"},
				{"status", "computed"},
				{"frame", "lab"},
				{"bib", "phelps-petrovic-1999"},
				{"valid_to_eV", fmt.Sprint(fits.ArgonValidTo)},
				{"note", "The fit is meant up to about 1 keV; rows above are its extrapolation."},
				{"note", note},
				{"note", generated},
			},
		}
	}
	return []file{
		table("e-elastic.csv", "electrons on argon, elastic momentum transfer",
			"The bars of the fit enclose its first two terms only. Scatter isotropically.",
			tabulate(fits.ArgonElastic, 0, lowest/10, minimum, fits.ArgonValidTo, highest)),
		table("e-excitation.csv", "electrons on argon, sum of all excitations",
			"All levels lumped at a loss of 11.5 eV.",
			tabulate(fits.ArgonExcitation, fits.ArgonExcitationThreshold,
				fits.ArgonValidTo, highest)),
		table("e-ionization.csv", "electrons on argon, ionization",
			"Multiple ionization is not told apart.",
			tabulate(fits.ArgonIonization, fits.ArgonIonizationThreshold,
				fits.ArgonValidTo, highest)),
	}
}

func argonIons() []file {
	table := func(name, what string, f func(float64) float64) file {
		return file{
			name: "Ar/" + name, rows: tabulate(f, 0, lowest, highest),
			header: [][2]string{
				{"what", what},
				{"reference", "A. V. Phelps, J. Appl. Phys. 76, 747 (1994), analytic fit"},
				{"database", "Phelps, LXCat"},
				{"date", "2013-06-04"},
				{"status", "computed"},
				{"frame", "lab"},
				{"bib", "phelps-1994"},
				{"note", "Computed from the fit with the exponent 2.3 in the isotropic part, " +
					"which reproduces the tabulated rows of the database (read); the paper has " +
					"2.0 (memory)."},
				{"note", "The energy is that of the ion with the atom at rest, twice the " +
					"centre-of-mass energy; isotropic + 2 x backscatter is the momentum transfer."},
				{"note", generated},
			},
		}
	}
	return []file{
		table("ion-isotropic.csv", "Ar+ on argon, isotropic elastic scattering",
			fits.ArgonIonIsotropic),
		table("ion-backscatter.csv", "Ar+ on argon, backscattering (charge exchange)",
			fits.ArgonIonBackscatter),
	}
}

// detachment is that of O- by electrons, in the folder of a gas that has the ion.
func detachment(gas string) file {
	return file{
		name: gas + "/pair-Om-e.csv",
		rows: tabulate(fits.OxygenIonDetachment, fits.DetachmentOnset, 1000),
		header: [][2]string{
			{"what", "electrons with O-, detachment"},
			{"reference", "L. Vejby-Christensen et al., Phys. Rev. A 53, 2371 (1996)"},
			{"status", "memory"},
			{"frame", "center_of_mass"},
			{"valid_to_eV", "30"},
			{"note", fmt.Sprintf("Recalled is a fit of the rate coefficient to the measurement, "+
				"%g Te^%g exp(-%g/Te) m3/s with Te in eV, of models of oxygen discharges; the rows "+
				"are the cross section that has this rate coefficient at every Te.",
				fits.DetachmentRate, fits.DetachmentPower, fits.DetachmentOnset)},
			{"note", "As recalled, the measurement reaches up to some 30 eV."},
			{"note", generated},
		},
	}
}

func heliumFormulas() []file {
	ion := func(name, what, status, note string, f func(float64) float64) file {
		return file{
			name: "He/" + name, rows: tabulate(f, 0, lowest, highest),
			header: [][2]string{
				{"what", what},
				{"reference", "A. V. Phelps, compilation of ion-neutral cross sections, JILA, " +
					"analytic form"},
				{"database", "Phelps, LXCat"},
				{"date", "2013-06-04"},
				{"status", status},
				{"frame", "center_of_mass"},
				{"note", "The energy is that of the relative motion, half of the energy of the " +
					"ion with the atom at rest; isotropic + 2 x backscatter is the momentum " +
					"transfer."},
				{"note", note},
				{"note", generated},
			},
		}
	}
	return []file{
		ion("ion-isotropic.csv", "He+ on helium, isotropic elastic scattering", "computed",
			"Reproduces the tabulated rows of the database (read).", fits.HeliumIonIsotropic),
		ion("ion-backscatter.csv", "He+ on helium, backscattering (charge exchange)", "memory",
			"The formula is recalled; measured drift velocities support it and its frame.",
			fits.HeliumIonBackscatter),
		{
			name: "He/e-ionization-beb.csv",
			rows: tabulate(fits.HeliumIonizationBEB, fits.HeliumIonizationThreshold, highest),
			header: [][2]string{
				{"what", "electrons on helium, ionization, binary-encounter-Bethe model"},
				{"reference", "Y.-K. Kim and M. E. Rudd, Phys. Rev. A 50, 3954 (1994)"},
				{"status", "computed"},
				{"frame", "lab"},
				{"bib", "kim-rudd-1994"},
				{"note", "Binding energy 24.587 eV, orbital kinetic energy 39.51 eV, 2 electrons."},
				{"note", generated},
			},
		},
	}
}

// heliumJoin is where the derived elastic cross section of the default set ends [eV]: the
// rounding of its sources alone makes 7 % there, and twice as much at 300 eV.
const heliumJoin = 200

// heliumDerived are the elastic cross sections that follow from the effective one.
func heliumDerived(library fs.FS) ([]file, error) {
	read := func(name string) (crosssections.Table, error) {
		data, err := fs.ReadFile(library, "He/"+name)
		if err != nil {
			return crosssections.Table{}, err
		}
		t, err := crosssections.ReadTable(name, data)
		if err != nil {
			return crosssections.Table{}, err
		}
		return t.Table, nil
	}
	effective, err := read("e-effective.csv")
	if err != nil {
		return nil, err
	}
	var inelastic []crosssections.Process
	for _, name := range []string{"e-excitation.csv", "e-ionization.csv"} {
		t, err := read(name)
		if err != nil {
			return nil, err
		}
		t.Onset = t.Energy[0]
		inelastic = append(inelastic, crosssections.Process{Table: t})
	}
	elastic, warnings := crosssections.ElasticFromEffective(&effective, inelastic)
	if len(warnings) > 0 {
		return nil, fmt.Errorf("helium elastic: %s", warnings[0])
	}
	return heliumElastic(elastic), nil
}

// heliumElastic is the derived table as it is, and the one of the default set.
func heliumElastic(derived crosssections.Table) []file {
	var whole []row
	for i, e := range derived.Energy {
		if n := len(whole); n == 0 || rounded(e) > whole[n-1].energy {
			whole = append(whole, row{rounded(e), derived.CrossSection[i]})
		}
	}
	rows := upTo(whole, heliumJoin)
	curve := []row{rows[len(rows)-1]}
	points := []float64{curve[0].energy}
	for _, born := range fits.HeliumElasticBorn() {
		curve = append(curve, row{born[0], born[1]})
		points = append(points, born[0])
	}
	joined := append(rows[:len(rows):len(rows)], tabulate(powerLaw(curve), 0, points...)[1:]...)
	table := func(name, what, note string, rows []row, beyond float64) file {
		return file{
			name: "He/" + name, rows: rows, beyond: beyond,
			comment: "from here on the power laws to first Born values at 500 and 1000 eV",
			header: [][2]string{
				{"what", what},
				{"reference", "derived from A. V. Phelps, compilation of electron cross " +
					"sections, JILA, after R. W. Crompton, M. T. Elford and A. G. Robertson, " +
					"Aust. J. Phys. 23, 667 (1970)"},
				{"database", "Phelps, LXCat"},
				{"date", "2013-06-04"},
				{"status", "derived"},
				{"frame", "lab"},
				{"bib", "crompton-1970"},
				{"note", "Effective momentum transfer minus the lumped excitation and the " +
					"ionization of Rapp and Englander-Golden. Scatter isotropically."},
				{"note", note},
				{"note", "Written by `go generate ./crosssections`."},
			},
		}
	}
	return []file{
		table("e-elastic.csv", "electrons on helium, elastic momentum transfer",
			"Above 200 eV the terms cancel and their rounding exceeds 7 %: from there on power "+
				"laws to 1.4e-22 m2 at 500 eV and 4.5e-23 m2 at 1000 eV, first Born "+
				"approximation (at 300 eV within 4 % of the difference).", joined, heliumJoin),
		table("e-elastic-difference.csv",
			"electrons on helium, elastic momentum transfer, plain difference",
			"Noise above 300 eV, where the terms cancel.", whole, 0),
	}
}
