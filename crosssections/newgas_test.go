package crosssections

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"ionfall/internal/inputerr"
	"ionfall/internal/phys"
)

// imported makes a gas from an exchange file.
func imported(t *testing.T, text string, set ImportSettings) (*NewGas, error) {
	t.Helper()
	x, err := ReadExchange("in.txt", strings.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	set.Name, set.File, set.SHA256, set.Date = "Mine", "some/in.txt", "abc", "2001-02-03"
	return x.NewGas(set)
}

// exchange is a whole file of invented numbers, with parts replaced.
func exchange(replace ...string) string {
	return strings.NewReplacer(replace...).Replace(`DATABASE: Invented
REFERENCE: nobody, nowhere 1, 1 (1900)

EFFECTIVE
Xx
 1e-4
COMMENT: a remark: with a colon
-----
0 1e-19
5 2e-19
100 1e-19
-----
EXCITATION
Xx -> Xx*
 5
-----
4 1e-21
6 3e-21
100 2e-21
-----
IONIZATION
Xx -> Xx+
 12
PROCESS: E + Xx -> E + E + Xx+, Ionization
-----
12 0
100 1e-20
-----
`)
}

// Goal: a gas that went through a folder is the one of the file. Method: cross sections of both
// at many energies, to the last bits; threshold rows that start too low included.
func TestNewGasIsThatOfTheFile(t *testing.T) {
	made, err := imported(t, exchange(), ImportSettings{})
	if err != nil {
		t.Fatal(err)
	}
	x, err := ReadExchange("in.txt", strings.NewReader(exchange()))
	if err != nil {
		t.Fatal(err)
	}
	want, err := x.Gas("Xx")
	if err != nil {
		t.Fatal(err)
	}
	got := made.Gas
	if len(got.Electron) != 3 || len(want.Processes) != 3 {
		t.Fatalf("got %d processes, want %d", len(got.Electron), len(want.Processes))
	}
	for i, p := range got.Electron {
		w := want.Processes[i]
		if p.Name != w.Name || p.Kind != w.Kind || p.Threshold != w.Threshold ||
			p.Source.Citation != w.Source.Citation || p.Source.Database != "Invented" ||
			p.Source.Date != "2001-02-03" {
			t.Errorf("got %+v, want %+v", p, w)
		}
		for e := 0.01; e < 1000; e *= 1.05 {
			a, b := p.Table.At(e), w.Table.At(e)
			if math.Abs(a-b) > 1e-13*b {
				t.Errorf("%s at %g eV: got %g, want %g", p.Name, e, a, b)
			}
		}
	}
	if q := got.Electron[1].Table.At(5); math.Abs(q/2e-21-1) > 1e-12 {
		t.Errorf("at the threshold: got %g m2, want 2e-21, between 1e-21 at 4 and 3e-21 at 6 eV", q)
	}
	ion := phys.ElectronMass/1e-4 - phys.ElectronMass
	if math.Abs(got.Ions[0].Mass/ion-1) > 1e-7 || !slices.Equal(made.Missing, []string{"Xx+"}) {
		t.Errorf("ions: got %+v, missing %q, want the mass %g", got.Ions, made.Missing, ion)
	}
	for _, part := range []string{"2001-02-03", "in.txt", "abc", "species Xx", "Invented"} {
		if !strings.Contains(got.Note, part) {
			t.Errorf("note: got %q, want %q in it", got.Note, part)
		}
	}
	if table := string(made.Files["Mine/e-01-effective.csv"]); !strings.Contains(table,
		"# note: COMMENT: a remark: with a colon\n") || !strings.Contains(table, "# status: read\n") {
		t.Errorf("the table says\n%s", table)
	}
}

// Goal: peculiarities are told and none changes the data in silence. Method: one change each.
func TestNewGasWarnings(t *testing.T) {
	for _, c := range []struct{ old, changed, want string }{
		{"5 2e-19", "5 1e-22", "elastic: the inelastic cross sections exceed the effective one"},
		{"-> Xx*\n 5", "<-> Xx*\n 5 3", "in.txt:13: excitation Xx* runs both ways"},
		{"REFERENCE: nobody", "nobody", "in.txt:4: elastic has no reference"},
		{
			"Xx -> Xx*\n 5", "Xx -> Xx*\n 5\nPROCESS: E + Xx -> Xx*, Excitation",
			"in.txt:13: products of excitation Xx* are left out: Xx* is no excitation",
		},
	} {
		made, err := imported(t, exchange(c.old, c.changed), ImportSettings{})
		if err != nil {
			t.Errorf("%q: %v", c.changed, err)
			continue
		}
		if all := strings.Join(made.Warnings, "\n"); !strings.Contains(all, c.want) {
			t.Errorf("%q: got\n%s\nwant %q", c.changed, all, c.want)
		}
	}
}

// Goal: what cannot become a gas is refused with its place. Method: one change each.
func TestNewGasErrors(t *testing.T) {
	for _, c := range []struct {
		old, changed string
		set          ImportSettings
		want         string
	}{
		{" 12\n", " 500\n", ImportSettings{}, "some/in.txt:21:1: IONIZATION: got a table up to " +
			"100 eV, want rows from the threshold of 500 eV on"},
		{" 1e-4", " 0", ImportSettings{}, "some/in.txt:4:1: mass_u: got no mass ratio of Xx, want"},
		{"E + E + Xx+", "E + E + X+ + x", ImportSettings{}, "some/in.txt:21:1: ions.mass_u: got " +
			"the ion X+ without a mass, want one given: only that of Xx+ follows"},
		{"E + E + Xx+", "E + Xx+", ImportSettings{}, "some/in.txt:21:1: IONIZATION: got the " +
			"products e + Xx+, want those of an ionization, with the charge -1 in all"},
		{"x", "x", ImportSettings{IonMasses: map[string]float64{"Xz+": 1e-26}}, "some/in.txt: ions: " +
			"got a mass of \"Xz+\", which no process makes, want one of Xx+; did you mean \"Xx+\"?"},
		{"x", "x", ImportSettings{Species: "Yy"}, `unknown species "Yy"`},
		{"x", "x", ImportSettings{Database: "Inventd"}, `did you mean "Invented"?`},
	} {
		_, err := imported(t, exchange(c.old, c.changed), c.set)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: got %v, want %q", c.changed, err, c.want)
		}
	}
}

// Goal: ion collisions are taken over, as an assumption where the gas is another one. Method: the
// numbers of helium's, for its own ion and for an invented one; the status of each.
func TestNewGasTakesIons(t *testing.T) {
	helium := bundledGas(t, "He")
	read := *helium
	read.IonNeutral = slices.Clone(helium.IonNeutral)
	read.IonNeutral[0].Source.Status = "read"
	for species, status := range map[string][]string{
		"He": {"read", helium.IonNeutral[1].Source.Status}, "Xx": {"derived", "memory"},
	} {
		text := strings.ReplaceAll(exchange(), "Xx", species)
		made, err := imported(t, text, ImportSettings{IonsFrom: &read})
		if err != nil {
			t.Fatal(err)
		}
		if len(made.Missing) != 0 || len(made.Gas.IonNeutral) != 2 {
			t.Fatalf("%s: missing %q, got %+v", species, made.Missing, made.Gas.IonNeutral)
		}
		for i, p := range made.Gas.IonNeutral {
			w := helium.IonNeutral[i]
			if p.Projectile != species+"+" || p.Kind != w.Kind || p.Frame != w.Frame ||
				p.Source.Status != status[i] || p.Source.Citation != w.Source.Citation ||
				!slices.Equal(p.Table.Energy, w.Table.Energy) ||
				!slices.Equal(p.Table.CrossSection, w.Table.CrossSection) ||
				p.Table.ValidTo != w.Table.ValidTo {
				t.Errorf("%s: got %+v, want %+v", species, p, w)
			}
		}
	}
	none := exchange("E + E + Xx+", "E + E + X+", "Xx -> Xx+", "Xx -> X+ ")
	masses := map[string]float64{"X+": 1e-26}
	made, err := imported(t, none, ImportSettings{IonsFrom: helium, IonMasses: masses})
	if err != nil || made.Gas.IonNeutral[0].Projectile != "X+" ||
		math.Abs(made.Gas.Ions[0].Mass/1e-26-1) > 1e-7 {
		t.Errorf("an only ion with a given mass: got %+v, %v", made, err)
	}
}

// Goal: errors of a file are a list with places, for editors. Method: the type.
func TestNewGasErrorType(t *testing.T) {
	_, err := imported(t, exchange(" 1e-4", " 0", " 12\n", " 500\n"), ImportSettings{})
	var list inputerr.List
	if !errors.As(err, &list) || len(list) != 2 {
		t.Errorf("got %v, want both errors", err)
	}
}

// Goal: a library lies over another. Method: helium of one's own over the bundled gases.
func TestLibraryOver(t *testing.T) {
	made, err := imported(t, strings.ReplaceAll(exchange(), "Xx", "He"), ImportSettings{})
	if err != nil {
		t.Fatal(err)
	}
	own := Files{}
	for name, data := range made.Files.Only("Mine") {
		own["He"+strings.TrimPrefix(name, "Mine")] = []byte(strings.Replace(string(data),
			"name: Mine", "name: He", 1))
	}
	mine, err := OpenFiles(own)
	if err != nil {
		t.Fatal(err)
	}
	bundled, err := Bundled()
	if err != nil {
		t.Fatal(err)
	}
	both := mine.Over(bundled)
	if !slices.Equal(both.Names(), bundled.Names()) || !mine.Has("He/default") || mine.Has("Ar") {
		t.Errorf("got %q over %q", mine.Names(), bundled.Names())
	}
	if he, err := both.Gas("He"); err != nil || he.Title != "He, imported" {
		t.Errorf("got %+v, %v, want the own helium", he, err)
	}
	if ar, err := both.Gas("Ar"); err != nil || ar.Title != "argon" {
		t.Errorf("got %+v, %v, want the bundled argon", ar, err)
	}
}
