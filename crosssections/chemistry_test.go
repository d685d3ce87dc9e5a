package crosssections

import (
	"math"
	"strings"
	"testing"
	"testing/fstest"

	"ionfall/internal/phys"
)

// chemicalGas is invented, but for the atoms' weights.
const chemicalGas = `name: SiH4
title: invented
mass_u: 32.117
polarizability: {value_A3: 4.6, reference: nobody, status: memory}
ions:
  - {name: SiH3+, charge: 1}
  - {name: SiH2+, charge: 1}
  - name: SiH3-
    charge: -1
    electron_affinity: {value_eV: 1.41, reference: nobody, status: memory}
electron:
  - {name: elastic, kind: elastic, file: m.csv}
  - name: ionization
    kind: ionization
    threshold_eV: 10
    branches:
      - {products: [e, e, SiH2+, H2], part: 0.75}
      - {products: [e, e, SiH3+, H], part: 0.25, appearance_eV: 12}
    file: x.csv
  - {name: attachment, kind: attachment, products: [SiH3-, H], file: x.csv}
ion:
  - name: exchange
    projectile: SiH2+
    kind: reaction
    products: [SiH3+, SiH3]
    defect_eV: -0.5
    rate: {value_m3ps: 1.05e-15}
    reference: nobody
    status: memory
  - name: on hydrogen
    projectile: SiH3+
    target: H2
    kind: isotropic
    langevin: {mobility_cm2pVs: 11.2}
    reference: nobody
    status: memory
pairs:
  - name: recombination
    reactants: [e, SiH3+]
    products: [SiH2, H]
    rate: {value_m3ps: 1e-13, exponent: -0.5}
    reference: nobody
    status: memory
  - name: detachment
    kind: detachment
    reactants: [e, SiH3-]
    products: [e, e, SiH3]
    threshold_eV: 1.41
    file: p.csv
`

func chemical(gas string) fstest.MapFS {
	return fstest.MapFS{
		"SiH4/gas.yaml": {Data: []byte(gas)},
		"SiH4/m.csv":    {Data: []byte(goodHeader + "0,3e-20\n100,3e-20\n")},
		"SiH4/x.csv":    {Data: []byte(goodHeader + "10,0\n11,2e-20\n14,4e-20\n100,4e-20\n")},
		"SiH4/p.csv":    {Data: []byte(goodHeader + "3,0\n10,2e-20\n100,2e-20\n")},
	}
}

// Goal: branches divide a cross section, laws have the rates they are made of, masses balance.
// Method: values by hand.
func TestChemistry(t *testing.T) {
	lib, err := OpenLibrary(chemical(chemicalGas))
	if err != nil {
		t.Fatal(err)
	}
	gas, err := lib.Gas("SiH4")
	if err != nil {
		t.Fatal(err)
	}
	first, second := process(t, gas, "ionization to SiH2+"), process(t, gas, "ionization to SiH3+")
	for _, c := range []struct{ energy, first, second float64 }{
		{11, 2e-20, 0}, {11.9, 2.6e-20, 0}, {14, 3e-20, 1e-20}, {50, 3e-20, 1e-20},
	} {
		a, b := first.Table.At(c.energy), second.Table.At(c.energy)
		if math.Abs(a-c.first) > 1e-3*c.first || math.Abs(b-c.second) > 1e-3*c.second {
			t.Errorf("at %g eV: %g and %g m2, want %g and %g", c.energy, a, b, c.first, c.second)
		}
	}
	if first.Threshold != 10 || second.Threshold != 12 {
		t.Errorf("thresholds %g and %g eV", first.Threshold, second.Threshold)
	}
	r := process(t, gas, "exchange")
	ion, _ := gas.Ion("SiH2+")
	mu := ion.Mass * gas.Mass / (ion.Mass + gas.Mass)
	for _, e := range []float64{0.01, 0.1, 3} {
		g := math.Sqrt(2 * e * phys.ElementaryCharge / mu)
		if k := r.Table.At(e) * g; math.Abs(k/1.05e-15-1) > 1e-3 {
			t.Errorf("at %g eV the rate is %g m3/s", e, k)
		}
	}
	// The table's energy is that of the electron, which the ion at rest takes a part of.
	d := gas.Pairs[1]
	if d.Kind != Detachment || d.Threshold != 1.41 || d.Table.At(2.99) != 0 ||
		math.Abs(d.Table.At(10)/2e-20-1) > 1e-9 || math.Abs(d.Table.Onset/3-1+1.77e-5) > 1e-6 {
		t.Errorf("detachment: %v, threshold %g eV, from %.9g eV on", d.Kind, d.Threshold, d.Table.Onset)
	}
	if sum := r.Out[0].Mass + r.Out[1].Mass; math.Abs(sum/(ion.Mass+gas.Mass)-1) > 1e-6 {
		t.Errorf("products weigh %g kg, reactants %g", sum, ion.Mass+gas.Mass)
	}
}

// Goal: what does not balance is refused at its place. Method: one change to a good file each.
func TestChemistryErrors(t *testing.T) {
	for _, c := range []struct{ old, changed, want string }{
		{"[SiH3+, SiH3]", "[SiH3+, SiH2]", "gas.yaml:25:15: products: got H missing, want the atoms of " +
			"SiH2+ and SiH4"},
		{"[SiH3+, SiH3]", "[SiH3+, SiH4, H]", "products: got 2 H too many"},
		{"[SiH3+, SiH3]", "[SiH3-, SiH3]", "products: got charge -1 in all, want +1"},
		{"part: 0.25", "part: 0.2", "gas.yaml:17:9: branches: got parts with the sum 0.95, want the sum 1"},
		{"SiH3+, H], part", "SiH3+, H2], part", "gas.yaml:18:9: products: got H too many"},
		{"appearance_eV: 12", "appearance_eV: 9", "branches.appearance_eV: got 9 eV, want at least"},
		{"threshold_eV: 10", "threshold_eV: 200", "x.csv:"},
		{"[SiH2, H]", "[SiH2]", "products: got H missing, want the atoms of e and SiH3+"},
		{"[e, SiH3+]", "[SiH2+, SiH3+]", "reactants: got SiH2+, SiH3+, want two of opposite charge"},
		{"rate: {value_m3ps: 1.05e-15}", "rate: {value_m3ps: 1.05e-9}", "at most 1e-11 m3/s"},
		{
			"rate: {value_m3ps: 1.05e-15}", "file: m.csv\n    rate: {value_m3ps: 1e-15}",
			"want one of file, rate, langevin",
		},
		{
			"langevin: {mobility_cm2pVs: 11.2}", "langevin: {mobilty_cm2pVs: 11.2}",
			`did you mean "mobility_cm2pVs"?`,
		},
		{
			"    reference: nobody\n    status: memory\npairs", "    status: memory\npairs",
			`got no "reference"`,
		},
		{"status: memory}\nions", "status: sure}\nions", "want one of read, computed, derived, memory"},
		{"kind: detachment", "kind: detachmnt", "gas.yaml:45:11: pairs.kind: got \"detachmnt\", " +
			"want one of neutralization, detachment"},
		{"    threshold_eV: 1.41\n", "", "gas.yaml:44:5: threshold_eV: got nothing, want a threshold: " +
			"detachment costs energy"},
		{"threshold_eV: 1.41", "threshold_eV: 1.2", "gas.yaml:44:5: threshold_eV: got 1.2 eV, want at " +
			"least the electron affinity, 1.41 eV"},
		{"threshold_eV: 1.41", "threshold_eV: 12", "want 0 below the threshold of"},
		{"[e, SiH3-]", "[e, SiH3+]", "gas.yaml:44:5: reactants: got e, SiH3+, want e and an ion of " +
			"the charge -1, in this order"},
		{"[e, e, SiH3]", "[e, SiH3-]", "products: got 1 electrons and charge -2 in all, want 2 " +
			"electrons and neutrals"},
		{"[e, e, SiH3]", "[e, e, SiH2]", "products: got H missing, want the atoms of e and SiH3-"},
		{
			"kind: detachment", "kind: neutralization",
			"gas.yaml:44:5: threshold_eV: got 1.41 eV, want none: neutralization has no threshold",
		},
		{"name: detachment", "name: recombination", `got a second pair "recombination"`},
		{"kind: isotropic", "kind: isotropc", "want one of isotropic, backscatter, reaction"},
	} {
		if !strings.Contains(chemicalGas, c.old) {
			t.Fatalf("%q is not in the sample", c.old)
		}
		_, err := OpenLibrary(chemical(strings.Replace(chemicalGas, c.old, c.changed, 1)))
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: got\n%v\nwant\n%s", c.changed, err, c.want)
		}
	}
}

// Goal: capture rates and mobilities are the textbook's. Method: 2.342e-9 cm3/s sqrt(alpha/mu) and
// the values that follow for SiH3+ in SiH4 and H2 (computed); the default's momentum transfer back
// to a mobility.
func TestLangevin(t *testing.T) {
	if k := CaptureRate(1, phys.AtomicMass); math.Abs(k/2.342e-15-1) > 1e-3 {
		t.Errorf("capture rate %g m3/s", k)
	}
	silane, hydrogen := bundledGas(t, "SiH4"), bundledGas(t, "H2")
	ion, _ := silane.Ion("SiH3+")
	for _, c := range []struct {
		gas            *Gas
		rate, mobility float64
	}{{silane, 1.26e-15, 1.62}, {hydrogen, 1.53e-15, 11.2}} {
		mu := ion.Mass * c.gas.Mass / (ion.Mass + c.gas.Mass)
		if k := CaptureRate(c.gas.Polarizability.Value, mu); math.Abs(k/c.rate-1) > 0.01 {
			t.Errorf("SiH3+ on %s: %g m3/s, want %g", c.gas.Name, k, c.rate)
		}
		p, ok := DefaultElastic(ion, c.gas, nil)
		if !ok {
			t.Fatal("no estimate")
		}
		const e = 0.01
		k := p.Table.At(e) * math.Sqrt(2*e*phys.ElementaryCharge/mu)
		got := phys.ElementaryCharge / (mu * loschmidt * k) * 1e4
		if math.Abs(got/c.mobility-1) > 0.01 {
			t.Errorf("SiH3+ in %s: mobility %.4g cm2/(V s), want %g", c.gas.Name, got, c.mobility)
		}
	}
}

// Goal: SiH3+ and SiH3- neutralize each other at 1.2e-7 cm3/s at 300 K by the formula of Hickman
// (computed). Method: the mean of the cross section over a Maxwellian.
func TestHickman(t *testing.T) {
	silane := bundledGas(t, "SiH4")
	a, _ := silane.Ion("SiH3+")
	b, _ := silane.Ion("SiH3-")
	p, ok := DefaultNeutralization(a, b)
	if !ok {
		t.Fatal("no formula")
	}
	mu := a.Mass * b.Mass / (a.Mass + b.Mass)
	kt := phys.Boltzmann * 300 / phys.ElementaryCharge
	sum, norm := 0.0, 0.0
	for i := range 20_000 {
		x := 12 * (float64(i) + 0.5) / 20_000
		w := math.Sqrt(x) * math.Exp(-x)
		sum += w * p.Table.At(x*kt) * math.Sqrt(2*x*kt*phys.ElementaryCharge/mu)
		norm += w
	}
	if k := sum / norm; math.Abs(k/1.2e-13-1) > 0.03 {
		t.Errorf("%.4g m3/s, want 1.2e-13", k)
	}
}

// Goal: formulas are taken apart. Method: by hand.
func TestFormula(t *testing.T) {
	for name, want := range map[string]float64{
		"SiH4": 32.117, "C2H5+": 29.062 - 5.4858e-4, "Ar*": 39.948, "N2(A3, v0-4)": 28.014, "H-": 1.008 + 5.4858e-4,
	} {
		if got, ok := formulaMass(name); !ok || math.Abs(got/phys.AtomicMass-want) > 1e-6 {
			t.Errorf("%s: %g u, want %g", name, got/phys.AtomicMass, want)
		}
	}
	for _, name := range []string{"Xx", "silane", "H2O(", "2H", ""} {
		if m, ok := formulaMass(name); ok {
			t.Errorf("%q weighs %g u", name, m/phys.AtomicMass)
		}
	}
}

// Goal: neutrals that an exchange file leaves out are added, and ions weigh what their formula
// says. Method: a file with an attachment and a dissociative ionization, products and masses by
// hand.
func TestImportBalances(t *testing.T) {
	const text = "REFERENCE: nobody\nELASTIC\nCO2\n 1.24e-5\n-----\n0 5e-20\n100 2e-20\n-----\n" +
		"ATTACHMENT\nCO2 -> O-\n-----\n4 0\n8 1e-22\n12 0\n-----\n" +
		"IONIZATION\nCO2 -> C+\n 25\n-----\n25 0\n100 1e-21\n-----\n"
	x, err := ReadExchange("x.txt", strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	made, err := x.NewGas(ImportSettings{
		File: "x.txt", Name: "CO2", Species: "CO2", Date: "2001-02-03",
	})
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []string{"", "O- CO", "e e C+ O2"} {
		if got := strings.Join(made.Gas.Electron[i].Products, " "); got != want {
			t.Errorf("products %q, want %q", got, want)
		}
	}
	if ion, ok := made.Gas.Ion("O-"); !ok || math.Abs(ion.Mass/phys.AtomicMass-15.99955) > 1e-4 {
		t.Errorf("O-: %+v", ion)
	}
	if len(made.Warnings) != 2 {
		t.Errorf("warnings %q", made.Warnings)
	}
}
