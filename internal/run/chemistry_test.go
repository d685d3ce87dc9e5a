package run

import (
	"context"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"ionfall/internal/store"
)

// germane is a gas of files alone; its numbers are invented, but for the atoms' weights.
const germane = `name: GeH4
title: germane, invented numbers
note: for a test
mass_u: 76.662
polarizability: {value_A3: 4.5, reference: nobody, status: memory}
diameter: {value_A: 4, reference: nobody, status: memory}
ions:
  - {name: GeH3+, charge: 1}
  - {name: GeH2+, charge: 1}
  - {name: Ar+, charge: 1}
  - name: GeH3-
    charge: -1
    electron_affinity: {value_eV: 1.6, reference: nobody, status: memory}
electron:
  - {name: elastic, kind: elastic, file: elastic.csv}
  - {name: vibration, kind: vibration, threshold_eV: 0.2, products: [e, GeH4(v)], file: vibration.csv}
  - name: ionization
    kind: ionization
    threshold_eV: 11
    branches:
      - {products: [e, e, GeH2+, H2], part: 0.6}
      - {products: [e, e, GeH3+, H], part: 0.4, appearance_eV: 12}
    file: ionization.csv
  - {name: attachment, kind: attachment, products: [GeH3-, H], file: attachment.csv}
ion:
  - name: GeH2+ to GeH3+
    projectile: GeH2+
    kind: reaction
    products: [GeH3+, GeH3]
    rate: {value_m3ps: 1e-15}
    reference: nobody
    status: memory
  - name: Ar+ to GeH2+
    projectile: Ar+
    kind: reaction
    products: [GeH2+, H2, Ar]
    defect_eV: -4
    kinetic_part: 0.2
    rate: {value_m3ps: 5e-16}
    reference: nobody
    status: memory
  - {name: GeH3+ exchange, projectile: GeH3+, kind: backscatter, products: [GeH3+, GeH4], file: exchange.csv}
pairs:
  - name: detachment
    kind: detachment
    reactants: [e, GeH3-]
    products: [e, e, GeH3]
    threshold_eV: 1.6
    file: detachment.csv
`

const inventedHeader = `# what: invented
# reference: nobody
# status: memory
# frame: lab
energy_eV,cross_section_m2
`

// Goal: a gas that nobody has thought of is simulated from data files alone, in a mixture with a
// bundled one: its ions, negative ones too, their reactions, and fast neutrals. Method: a folder of
// invented numbers, a short run; every species is there, ions change into each other, and energy is
// accounted for within 2 %.
func TestAGasOfFilesAlone(t *testing.T) {
	dir := t.TempDir()
	folder := filepath.Join(dir, "mine", "GeH4")
	if err := os.MkdirAll(folder, 0o755); err != nil {
		t.Fatal(err)
	}
	for name, rows := range map[string]string{
		"gas.yaml": germane, "elastic.csv": "0,2e-19\n1000,1e-20\n",
		"vibration.csv": "0.2,0\n1,5e-20\n10,2e-20\n1000,1e-22\n", "exchange.csv": "0.001,3e-18\n1000,2e-19\n",
		"ionization.csv": "11,0\n60,5e-20\n1000,1e-20\n", "attachment.csv": "6,0\n8,4e-22\n12,0\n",
		"detachment.csv": "3,0\n10,5e-20\n1000,2e-20\n",
	} {
		if name != "gas.yaml" {
			rows = inventedHeader + rows
		}
		if err := os.WriteFile(filepath.Join(folder, name), []byte(rows), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	input := filepath.Join(dir, "in.yaml")
	text := `
gap: 20 mm
gas: {pressure: 30 Pa, library: ./mine, mixture: {GeH4: 0.3, Ar: 0.7}, fast_neutrals: {}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 150 V}]}
initial: {density: 1e15 /m3, electron_temperature: 3 eV}
numerics: {cells: 48, steps_per_period: 960, particles_per_cell: 60, ion_substeps: 8, periods: 30, average_periods: 20}
`
	if err := os.WriteFile(input, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	p, err := Prepare(input)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, h := range p.heavy {
		names = append(names, h.label())
	}
	want := []string{
		"GeH2+", "GeH3+", "Ar+", "GeH3-", "fast_GeH4", "fast_Ar", "fast_GeH3", "fast_H2",
	}
	if !slices.Equal(names, want) {
		t.Errorf("species %q, want %q", names, want)
	}
	s, out, err := Run(context.Background(), p, Options{Out: filepath.Join(dir, "out")})
	if err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{
		"ion_flux_m2ps.grounded.GeH2+", "ion_flux_m2ps.grounded.GeH3+", "ion_flux_m2ps.grounded.Ar+",
		"neutral_flux_m2ps.grounded.fast_Ar", "neutral_energy_flux_Wpm2.powered.all",
		"energetic_energy_flux_Wpm2.grounded", "gas_heating_Wpm2",
	} {
		if v := lookup(t, s, path); !(v.Value > 0) {
			t.Errorf("%s is %g", path, v.Value)
		}
	}
	for _, c := range s.Checks {
		if c.Name == "energy_balance" && c.Value > 0.02 {
			t.Errorf("energy balance %g", c.Value)
		}
	}
	if !slices.ContainsFunc(s.References, func(r store.Reference) bool {
		return strings.Contains(r.Why, "GeH3-") && strings.Contains(r.Why, "computed")
	}) {
		t.Error("the estimated collisions of GeH3- are not among the references")
	}
	if !slices.ContainsFunc(s.References, func(r store.Reference) bool {
		return r.Why == "detachment: detachment (memory)"
	}) {
		t.Error("detachment by electrons is not among the references")
	}
	confined(t, out, "GeH3_minus_density_m3")
}

// confined demands that a species is in the bulk alone: a hundredth of its peak at most in the outer
// tenths of the gap.
func confined(t *testing.T, dir, column string) {
	t.Helper()
	profiles, err := store.ReadTable(filepath.Join(dir, "profiles.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	n, err := profiles.Floats(column)
	if err != nil {
		t.Fatal(err)
	}
	peak := slices.Max(n)
	for j, v := range n {
		if at := float64(j) / float64(len(n)-1); (at < 0.1 || at > 0.9) && v > 0.01*peak {
			t.Errorf("%s at %.2f of the gap is %.3g of its peak", column, at, v/peak)
		}
	}
}
