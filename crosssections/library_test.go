package crosssections

import (
	"os"
	"strings"
	"testing"
	"testing/fstest"
)

const goodGas = `name: Xx
title: invented
mass_u: 10
ions:
  - {name: Xx+, charge: 1}
electron:
  - {name: momentum, kind: effective, file: m.csv}
  - {name: level, kind: excitation, threshold_eV: 5, file: x.csv}
  - {name: ion, kind: ionization, threshold_eV: 5, products: [e, e, Xx+], file: x.csv}
ion:
  - {name: back, projectile: Xx+, kind: backscatter, file: m.csv}
sets:
  default: {title: all, processes: [momentum, level, ion, back]}
  less: {title: some, processes: [momentum, level]}
`

const goodHeader = `# what: invented
# reference: nobody, nowhere 1, 1 (1900)
# status: read
# frame: lab
energy_eV,cross_section_m2
`

func invented(gas string) fstest.MapFS {
	return fstest.MapFS{
		"Xx/gas.yaml": {Data: []byte(gas)},
		"Xx/m.csv":    {Data: []byte(goodHeader + "0,3e-20\n10,3e-20\n")},
		"Xx/x.csv":    {Data: []byte(goodHeader + "5,0\n10,2e-20\n")},
	}
}

// Goal: a library of one's own works, its sets differ as they should. Method: the elastic part at
// 10 eV by hand: 3 - 2 - 2 is clipped to 0 with a warning, 3 - 2 = 1 is not.
func TestOpenLibrary(t *testing.T) {
	lib, err := OpenLibrary(invented(goodGas))
	if err != nil {
		t.Fatal(err)
	}
	whole, err := lib.Gas("Xx")
	if err != nil {
		t.Fatal(err)
	}
	less, err := lib.Gas("Xx/less")
	if err != nil {
		t.Fatal(err)
	}
	if q := whole.Electron[0].Table.At(10); q != 0 || len(whole.Warnings) != 1 ||
		!strings.Contains(whole.Warnings[0], "momentum: the inelastic") {
		t.Errorf("clipped: got %g m2, warnings %q", q, whole.Warnings)
	}
	if q := less.Electron[0].Table.At(10); q < 0.99e-20 || q > 1.01e-20 || less.Warnings != nil {
		t.Errorf("not clipped: got %g m2, warnings %q", q, less.Warnings)
	}
	if whole.SHA256 == less.SHA256 || len(less.IonNeutral) != 0 || len(less.Electron) != 2 {
		t.Errorf("sets: got %+v", less)
	}
	whole.Electron[0].Name = "changed"
	if again, err := lib.Gas("Xx"); err != nil || again.Electron[0].Name != "momentum" {
		t.Errorf("a change of a gas reached the library: %v", err)
	}
}

// Goal: the hash follows every number. Method: one digit of one table.
func TestGasHash(t *testing.T) {
	hash := func(fsys fstest.MapFS) string {
		lib, err := OpenLibrary(fsys)
		if err != nil {
			t.Fatal(err)
		}
		gas, err := lib.Gas("Xx")
		if err != nil {
			t.Fatal(err)
		}
		return gas.SHA256
	}
	one, other := invented(goodGas), invented(goodGas)
	other["Xx/x.csv"].Data = []byte(goodHeader + "5,0\n10,2.1e-20\n")
	if hash(one) == hash(other) || hash(one) != hash(invented(goodGas)) {
		t.Error("the hash does not follow the tables")
	}
}

// Goal: unknown names are answered with the nearest and all. Method: the bundled library.
func TestUnknownNames(t *testing.T) {
	lib, err := Bundled()
	if err != nil {
		t.Fatal(err)
	}
	for name, want := range map[string]string{
		"ar":       "Ar",
		"He/phelp": "phelps",
		"zzz":      "want one of Ar, CH4, CO2, H2, He, N2",
	} {
		if gas, err := lib.Gas(name); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: got %v, %v, want an error with %q", name, gas, err, want)
		}
	}
}

// Goal: each mistake gives its own message at its place. Method: one change to a good file each.
func TestGasFileErrors(t *testing.T) {
	for _, c := range []struct{ old, changed, want string }{
		{"title: inv", "titel: inv", "Xx/gas.yaml:2:1: got unknown key \"titel\", want one of " +
			"name, title, note, formula, mass_u, " +
			"polarizability, diameter, ionization_width, ions, electron, ion, neutral, pairs, sets; did you mean \"title\"?"},
		{"mass_u: 10", "mass_u: -10", `Xx/gas.yaml:3:9: mass_u: got "-10", want a number above 0`},
		{"mass_u: 10", "mass_u: {", "Xx/gas.yaml:"},
		{"name: Xx\n", "name: Xy\n", `Xx/gas.yaml:1:1: name: got "Xy", want the name of the fold`},
		{"charge: 1", "charge: 2", `Xx/gas.yaml:5:5: ions.charge: got 2 for "Xx+", want 1`},
		{
			"{name: Xx+, charge: 1}", "{name: Xx+, charge: 1}\n  - {name: X+, charge: 1}",
			"Xx/gas.yaml:6:5: ions.mass_u: got nothing, want a mass",
		},
		{"kind: excitation", "kind: backscatter", "Xx/gas.yaml:8:25: electron.kind: got " +
			`"backscatter", want one of elastic, effective, excitation, ionization, attachment`},
		{
			"kind: excitation, threshold_eV: 5,", "kind: excitation,",
			"Xx/gas.yaml:8:5: threshold_eV: got nothing, want a threshold",
		},
		{
			"kind: effective", "kind: effective, threshold_eV: 1",
			"Xx/gas.yaml:7:5: threshold_eV: got 1 eV, want none",
		},
		{"[e, e, Xx+]", "[e, Xx+]", "Xx/gas.yaml:9:62: products: got charge +0 in all, want -1"},
		{"[e, e, Xx+]", "[e, Xx]", "products: got 1 electrons, want 2 for ionization"},
		{"[e, e, Xx+]", "[e, e, Xy+]", `got "Xy+", want ions declared`},
		{", products: [e, e, Xx+]", "", "Xx/gas.yaml:9:5: products: got nothing, want all prod"},
		{"projectile: Xx+", "projectile: Xy+", `projectile: got "Xy+", want one of the ions`},
		{"projectile: Xx+, ", "", `ion: got no "projectile", want the keys`},
		{"file: m.csv", "file: ../m.csv", `file: got "../m.csv", want a .csv file in the folder`},
		{"file: m.csv", "file: n.csv", `Xx/gas.yaml:7:45: file: got "n.csv", which is not there`},
		{
			"threshold_eV: 5, file", "threshold_eV: 12, file",
			"Xx/x.csv:7:1: cross_section_m2: got 2e-20 m2 at 10 eV, want 0 below the threshold",
		},
		{"name: ion,", "name: level,", `a second process "level"`},
		{"default:", "standard:", `got no set "default"`},
		{"[momentum, level]", "[momentum, levl]", `Xx/gas.yaml:14:45: sets.less: got unknown ` +
			`process "levl", want a process of the gas; did you mean "level"?`},
		{"[momentum, level]", "[level]", "sets.less: got 0 elastic or effective processes, want 1"},
		{"level, ion, back]", "level, ion]", `got "back" in no set`},
		{"title: invented", "title: &a b\nnote: *a", "Xx/gas.yaml:3:7: note: got no text"},
		{"electron:", "electron: 7\nions:", "Xx/gas.yaml:"},
	} {
		if !strings.Contains(goodGas, c.old) {
			t.Fatalf("%q is not in the sample", c.old)
		}
		lib, err := OpenLibrary(invented(strings.Replace(goodGas, c.old, c.changed, 1)))
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: got %v,\n%v\nwant\n%s", c.changed, lib, err, c.want)
		}
	}
}

// Goal: the errors of all files come at once. Method: one mistake in each of two gases and in a
// table; and a folder without a gas.
func TestAllErrorsAtOnce(t *testing.T) {
	fsys := invented(goodGas)
	fsys["Xx/x.csv"].Data = []byte(goodHeader + "5,0\n5,2e-20\n")
	fsys["Yy/gas.yaml"] = &fstest.MapFile{Data: []byte("name: Yy\n")}
	_, err := OpenLibrary(fsys)
	for _, want := range []string{"Xx/x.csv:7:1: ", `Yy/gas.yaml:1:1: got no "mass_u"`} {
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %s", err, want)
		}
	}
	if strings.Count(err.Error(), "Xx/x.csv:7:1: ") != 1 {
		t.Errorf("a table used twice is told twice: %v", err)
	}
	fsys = invented(goodGas)
	fsys["Zz/m.csv"] = &fstest.MapFile{}
	if _, err := OpenLibrary(fsys); err == nil || !strings.Contains(err.Error(), "Zz/gas.yaml") {
		t.Errorf("no gas.yaml: got %v", err)
	}
	if _, err := OpenLibrary(fstest.MapFS{}); err == nil {
		t.Error("an empty library: no error")
	}
}

// Goal: no gas.yaml makes the loader fail otherwise than by an error. Method: random changes.
func FuzzGasYAML(f *testing.F) {
	f.Add([]byte(goodGas))
	for _, name := range []string{"Ar", "He"} {
		data, err := os.ReadFile("data/" + name + "/gas.yaml")
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		lib, err := OpenLibrary(invented(string(data)))
		if err != nil {
			return
		}
		gas, err := lib.Gas("Xx")
		if err != nil || len(gas.Electron) == 0 {
			t.Fatalf("loaded, but %+v, %v", gas, err)
		}
	})
}
