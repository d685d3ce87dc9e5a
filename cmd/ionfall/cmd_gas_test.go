package main

import (
	"encoding/json"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/store"
)

// exchangeFile is in the exchange form; all its numbers are invented.
const exchangeFile = `DATABASE: Invented
REFERENCE: nobody, nowhere 1, 1 (1900)
EFFECTIVE
Xx
 1e-4
-----
0 5e-20
100 4e-20
1000 1e-20
-----
EXCITATION
Xx -> X<x> & co
 15
-----
15 0
30 2e-21
1000 2e-21
-----
IONIZATION
Xx -> Xx+
 20
-----
20 0
100 4e-21
1000 2e-21
-----
`

// folderWithExchange is a new folder with xx.txt.
func folderWithExchange(t *testing.T, replace ...string) string {
	t.Helper()
	dir := t.TempDir()
	write(t, filepath.Join(dir, "xx.txt"), strings.NewReplacer(replace...).Replace(exchangeFile))
	return dir
}

// good calls the program and wants success.
func good(t *testing.T, dir string, args ...string) outcome {
	t.Helper()
	got := call(t, dir, args...)
	if got.status != 0 {
		t.Fatalf("%q: got status %d, %q", args, got.status, got.errOut)
	}
	return got
}

// Goal: the gases are listed with what they hold. Method: whole output; the user's own in JSON.
func TestGasList(t *testing.T) {
	dir := folderWithExchange(t)
	golden(t, "gas-list.txt", good(t, dir, "gas", "list").out)
	good(t, dir, "gas", "import", "xx.txt", "--as", "He", "--library", "mine")
	var list []listedGas
	out := good(t, dir, "gas", "list", "--json", "--library", "mine").out
	if err := json.Unmarshal([]byte(out), &list); err != nil || len(list) != 8 {
		t.Fatalf("%v: %s", err, out)
	}
	argon, helium := list[0], list[4]
	if argon.Name != "Ar" || argon.From != "bundled" || helium.Name != "He" ||
		helium.From != "mine" || helium.Processes != 3 || helium.Status != "1 derived, 2 read" {
		t.Errorf("got %+v, want the bundled argon and the own helium", list)
	}
}

// Goal: all about a gas is shown. Method: whole output; JSON against the table; unknown names.
func TestGasShow(t *testing.T) {
	dir := t.TempDir()
	golden(t, "gas-show.txt", good(t, dir, "gas", "show", "Ar").out)
	var shown shownGas
	if err := json.Unmarshal([]byte(good(t, dir, "gas", "show", "He/phelps", "--json").out),
		&shown); err != nil {
		t.Fatal(err)
	}
	if shown.Set != "phelps" || len(shown.Processes) != 5 || shown.Processes[2].Threshold != 24.58 ||
		shown.Processes[2].To != 1000 || len(shown.Processes[0].SHA256) != 64 {
		t.Errorf("got %+v", shown)
	}
	got := call(t, dir, "gas", "show", "ar")
	want := "ionfall: show: unknown gas \"ar\" (did you mean \"Ar\"?): want one of Ar, CH4, CO2, " +
		"H2, He, N2, O2, SiH4\n"
	if got.status != 2 || got.errOut != want {
		t.Errorf("got %d, %q, want 2, %q", got.status, got.errOut, want)
	}
}

// Goal: the plot is an SVG with every process and both units, whatever the names and numbers.
// Method: its texts, read as XML; a gas whose only cross section is the same everywhere.
func TestGasPlot(t *testing.T) {
	dir := folderWithExchange(t)
	good(t, dir, "gas", "import", "xx.txt", "--as", "Xx", "--ions-from", "He")
	plot := func(gas string) string {
		good(t, dir, "gas", "show", gas, "--library", "gases", "--plot", "x.svg")
		all := ""
		texts := xml.NewDecoder(strings.NewReader(read(t, filepath.Join(dir, "x.svg"))))
		for {
			token, err := texts.Token()
			if errors.Is(err, io.EOF) {
				return all
			}
			if err != nil {
				t.Fatal(err)
			}
			if text, ok := token.(xml.CharData); ok {
				all += string(text) + "\n"
			}
		}
	}
	contains(t, plot("Xx"), "energy [eV]", "cross section [m2]", "e: elastic\n",
		"e: excitation X<x> & co\n", "e: ionization Xx+\n", "Xx+ backscatter (center of mass)\n",
		"1e-20\n", "100\n", "Xx, set default\n")
	flat := "ELASTIC\nFlat\n 1e-4\n-----\n1 1e-20\n-----\n"
	write(t, filepath.Join(dir, "flat.txt"), flat)
	good(t, dir, "gas", "import", "flat.txt", "--as", "Flat")
	contains(t, plot("Flat"), "e: elastic\n")
	got := call(t, dir, "gas", "show", "Ar", "--plot", "x.png")
	if got.status != 2 || got.errOut != "--plot: got \"x.png\", want a file such as argon.svg\n" {
		t.Errorf("got %d, %q", got.status, got.errOut)
	}
}

// Goal: an imported gas can be followed as a swarm and run as a discharge, and each says what it
// is made of. Method: all of it, from the file to the results.
func TestGasImportAndRun(t *testing.T) {
	slow(t)
	dir := folderWithExchange(t)
	out := good(t, dir, "gas", "import", "xx.txt", "--as", "Xx", "--ions-from", "He").out
	contains(t, out, "gases/Xx: Xx, imported, 3 processes of electrons, 2 of ions, ions: Xx+\n",
		"gas: {library: ./gases, mixture: {Xx: 1}, ...}\n")
	input := strings.Replace(small(40, 20), "mixture: {He: 1}",
		"library: ./gases, mixture: {Xx: 1}", 1)
	write(t, filepath.Join(dir, "xx.yaml"), input)
	contains(t, good(t, dir, "check", "xx.yaml").out, "xx.yaml: no errors\n")
	got := call(t, dir, "run", "xx.yaml", "--quiet")
	if got.status != 0 && got.status != 3 { // whether it is believable is not asked
		t.Fatalf("got %d, %q", got.status, got.errOut)
	}
	results := filepath.Join(dir, "results", "xx")
	contains(t, read(t, filepath.Join(results, "summary.json")), `"from": "gas.library: ./gases"`,
		"nobody, nowhere 1, 1 (1900)")
	contains(t, read(t, filepath.Join(results, "resolved.yaml")), "library: \"gases\"\n")
	if err := os.RemoveAll(filepath.Join(dir, "gases")); err != nil {
		t.Fatal(err)
	}
	contains(t, good(t, dir, "check", filepath.Join(results, "resolved.yaml")).out, "no errors")
	got = call(t, dir, "check", "xx.yaml")
	if got.status != 2 {
		t.Errorf("got %d without the library, want 2", got.status)
	}
	contains(t, got.errOut, `xx.yaml:3:33: gas.library: got "./gases", want a folder of gases; `)
}

// Goal: a gas without ion collisions says what it cannot do, and is refused where it cannot.
// Method: the words of the import, and a check.
func TestGasImportWithoutIons(t *testing.T) {
	dir := folderWithExchange(t, "100 4e-20", "100 4e-22")
	got := good(t, dir, "gas", "import", "--as", "Xx", "xx.txt", "--library", "my/own")
	contains(t, got.out, "No discharge can be run with this gas yet: the collisions of Xx+ with it "+
		"are not known\n", "Swarms of electrons can be followed",
		"warning: elastic: the inelastic cross sections exceed the effective one at ")
	input := strings.Replace(small(2, 1), "mixture: {He: 1}",
		"library: my/own, mixture: {Xx: 1}", 1)
	write(t, filepath.Join(dir, "xx.yaml"), input)
	bad := call(t, dir, "check", "xx.yaml")
	want := "xx.yaml:3:51: gas.mixture.Xx: got Xx, want a gas whose collisions with Xx+ are known\n"
	if bad.status != 2 || bad.errOut != want {
		t.Errorf("got %d, %q, want 2, %q", bad.status, bad.errOut, want)
	}
	before := read(t, filepath.Join(dir, "my/own/Xx/gas.yaml"))
	again := call(t, dir, "gas", "import", "xx.txt", "--as", "Xx", "--library", "my/own")
	want = "ionfall: import: my/own/Xx exists: choose another name or library, or move it away\n"
	if again.status != 2 || again.errOut != want ||
		read(t, filepath.Join(dir, "my/own/Xx/gas.yaml")) != before {
		t.Errorf("got %d, %q, want 2, %q, and the old gas", again.status, again.errOut, want)
	}
}

// Goal: what is wrong with a file or the command is told with its place, and nothing is left
// behind. Method: a change each, whole messages.
func TestGasImportErrors(t *testing.T) {
	more := "IONIZATION\nXx -> Xx+\n"
	for _, c := range []struct {
		old, changed string
		args         []string
		want         string
	}{
		{"100 4e-20", "-100 4e-20", nil, "xx.txt:8:1: EFFECTIVE: got \"-100 4e-20\", want an energy " +
			"that is not negative\n"},
		{"30 2e-21", "3 2e-21", nil, "xx.txt:16:1: EXCITATION: got 3 eV after 15 eV, " +
			"want increasing energies\n"},
		{"100 4e-21", "100 -4e-21", nil, "xx.txt:24:1: IONIZATION: got \"100 -4e-21\", " +
			"want a cross section from 0 to 1e-14 m2\n"},
		{"\n 20\n", "\n 2000\n", nil, "xx.txt:19:1: IONIZATION: got a table up to 1000 eV, " +
			"want rows from the threshold of 2000 eV on\n"},
		{" 1e-4", " 0", nil, "xx.txt:3:1: mass_u: got no mass ratio of Xx, want its mass given; " +
			"give it with --mass MASS_u\n"},
		{more, "IONIZATION\nXx -> X+\n", nil, "xx.txt:19:1: ions.mass_u: got the ion X+ without a " +
			"mass, want one given: only that of Xx+ follows from the neutral's; " +
			"give it with --ion NAME=MASS_u\n"},
		{"", "", []string{"--ion", "Xy+=3"}, "xx.txt: ions: got a mass of \"Xy+\", which no process " +
			"makes, want one of Xx+; did you mean \"Xx+\"?\n"},
		{"", "", []string{"--species", "Yy"}, "ionfall: import: xx.txt: unknown species \"Yy\": want " +
			"one of Xx (see --species and --database)\n"},
		{"", "", []string{"--as", "a b"}, "import: flag --as is given twice"},
		{"", "", []string{"--mass", "-1", "--ions-from", "Hf"}, "--mass: got \"-1\", want a mass in u, " +
			"above 0 and at most 10000\n--ions-from: unknown gas \"Hf\" (did you mean \"H2\"?): want " +
			"one of Ar, CH4, CO2, H2, He, N2, O2, SiH4\n"},
	} {
		dir := folderWithExchange(t, c.old, c.changed)
		if c.old == "" {
			dir = folderWithExchange(t)
		}
		got := call(t, dir, append([]string{"gas", "import", "xx.txt", "--as", "Xx"}, c.args...)...)
		if got.status != 2 || !strings.Contains(got.errOut, c.want) || got.out != "" {
			t.Errorf("%q, %q: got %d, %q, want 2, %q", c.changed, c.args, got.status, got.errOut, c.want)
		}
		if left, err := filepath.Glob(filepath.Join(dir, "gases", "*")); err != nil || left != nil {
			t.Errorf("%q: left %q, %v", c.changed, left, err)
		}
	}
}

// Goal: swarms of several fields go to the table, to JSON and to Parquet with the same numbers,
// which do not depend on the number of cores, and keep plain bounds. Method: an invented gas;
// the drift is below the speed of the mean energy, the distribution has the norm that it states.
func TestGasSwarm(t *testing.T) {
	slow(t)
	dir := folderWithExchange(t)
	good(t, dir, "gas", "import", "xx.txt", "--as", "Xx", "--ions-from", "He")
	args := []string{
		"gas", "swarm", "Xx", "--library", "gases", "--accuracy", "50", "%", "--field", "100,300", "Td",
	}
	one := good(t, dir, append(args, "--json", "--cores", "1", "--out", "sw")...)
	two := good(t, dir, append(args, "--json", "--cores", "3")...)
	if one.out != two.out || one.errOut != "" {
		t.Errorf("other cores: got\n%s\nwant\n%s\n(%q)", two.out, one.out, one.errOut)
	}
	var list []swarmJSON
	if err := json.Unmarshal([]byte(one.out), &list); err != nil || len(list) != 2 {
		t.Fatalf("%v: %s", err, one.out)
	}
	for i, field := range []float64{100, 300} {
		r := list[i]
		speed := math.Sqrt(2 * r.MeanEnergy.Value * 1.602e-19 / 9.109e-31)
		if r.Field != field || r.FluxDrift.Value > speed || r.FluxDrift.Value < 0.01*speed ||
			r.MeanEnergy.Unit != "eV" || !(r.MeanEnergy.SE > 0) || len(r.Rates) != 3 {
			t.Errorf("got %+v", r)
		}
		if rate := r.Rates["ionization Xx+"]; rate != r.Ionization || rate.Unit != "m3/s" {
			t.Errorf("ionization: got the rate %+v, want %+v", rate, r.Ionization)
		}
	}
	checkSwarmTables(t, filepath.Join(dir, "sw"), list)
	text := good(t, dir, append(args, "--out", "other")...)
	contains(t, text.out, "e in Xx, set default, gas of 300 K\n", "100 Td", "300 Td",
		"mean energy ", " +- ", "rate of ionization Xx+", "\ntables: other\n")
	contains(t, text.errOut, " Td: mean energy ", "(2 of 2)\n")
	again := call(t, dir, append(args, "--out", "other")...)
	if again.status != 2 || again.out != "" {
		t.Errorf("over old tables: got %d, %q", again.status, again.errOut)
	}
}

// checkSwarmTables compares the tables with the JSON.
func checkSwarmTables(t *testing.T, dir string, list []swarmJSON) {
	t.Helper()
	swarm, err := store.ReadTable(filepath.Join(dir, "swarm.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	for name, of := range map[string]func(r *swarmJSON) float64{
		"field_Td":                 func(r *swarmJSON) float64 { return r.Field },
		"mean_energy_eV":           func(r *swarmJSON) float64 { return r.MeanEnergy.Value },
		"townsend_m2_se":           func(r *swarmJSON) float64 { return r.Townsend.SE },
		"rate_elastic_m3ps":        func(r *swarmJSON) float64 { return r.Rates["elastic"].Value },
		"flux_drift_mps_se":        func(r *swarmJSON) float64 { return r.FluxDrift.SE },
		"ionization_rate_m3ps":     func(r *swarmJSON) float64 { return r.Ionization.Value },
		"rate_ionization_Xx+_m3ps": func(r *swarmJSON) float64 { return r.Ionization.Value },
	} {
		column, err := swarm.Floats(name)
		if err != nil {
			t.Error(err)
			continue
		}
		for i := range list {
			if column[i] != of(&list[i]) {
				t.Errorf("%s: got %v, want that of %+v", name, column, list)
			}
		}
	}
	eepf, err := store.ReadTable(filepath.Join(dir, "eepf.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	integral := map[float64]float64{}
	columns := map[string][]float64{}
	for _, name := range []string{"field_Td", "energy_eV", "width_eV", "eepf_eVm32"} {
		if columns[name], err = eepf.Floats(name); err != nil {
			t.Fatal(err)
		}
	}
	for i, f := range columns["eepf_eVm32"] {
		e, w := columns["energy_eV"][i], columns["width_eV"][i]
		volume := 2. / 3 * (math.Pow(e+w/2, 1.5) - math.Pow(e-w/2, 1.5))
		integral[columns["field_Td"][i]] += f * volume
	}
	for _, r := range list {
		if math.Abs(integral[r.Field]-1) > 1e-3 {
			t.Errorf("%g Td: integral of the distribution %g, want 1", r.Field, integral[r.Field])
		}
	}
}

// Goal: ions can be followed, and what never happened has no error. Method: an ion whose swarm
// makes no ionization.
func TestGasSwarmOfIons(t *testing.T) {
	slow(t)
	var list []swarmJSON
	out := good(t, t.TempDir(), "gas", "swarm", "He", "--species", "He+", "--field", "200 Td",
		"--accuracy=50%", "--temperature", "400 K", "--json").out
	if err := json.Unmarshal([]byte(out), &list); err != nil {
		t.Fatal(err)
	}
	r := list[0]
	// Helium ions in helium have reduced mobilities of some 8 cm2/(V s) at this field.
	if r.Mobility.Value < 4 || r.Mobility.Value > 16 || len(r.Rates) != 2 ||
		r.Ionization.Value != 0 || !math.IsNaN(r.Ionization.SE) {
		t.Errorf("got %+v", r)
	}
}

// Goal: wrong flags of a swarm are told, all at once. Method: whole messages.
func TestGasSwarmErrors(t *testing.T) {
	field := func(text, want string) string {
		return fmt.Sprintf("--field: got %q, want %s\n", text, want)
	}
	const fields = "1 to 1000 fields from 0 to 1e6 Td, such as 10,20,50 Td"
	for text, c := range map[string]struct {
		args []string
		want string
	}{
		"no unit":  {[]string{"--field", "10,20"}, field("10,20", fields)},
		"none":     {nil, field("", fields)},
		"no field": {[]string{"--field", "a Td"}, field("a Td", fields)},
		"negative": {[]string{"--field", "-5,10 Td"}, field("-5,10 Td", fields)},
		"twice":    {[]string{"--field", "5,5.0 Td"}, field("5,5.0 Td", "each field once")},
		"species": {
			[]string{"--field", "5Td", "--species", "N2+"},
			"ionfall: --species: got \"N2+\", want one of those with collisions in He: e, He+\n",
		},
		"more": {
			[]string{"--field", "5Td", "--temperature", "5 eV", "--seed", "0", "--accuracy", "1"},
			"--seed: got \"0\", want a whole number from 1 to 9223372036854775807\n",
		},
		"library": {
			[]string{"--field", "5Td", "--library", "nowhere"},
			"ionfall: --library: got \"nowhere\", want a folder of gases: it is not there\n",
		},
	} {
		got := call(t, t.TempDir(), append([]string{"gas", "swarm", "He"}, c.args...)...)
		if got.status != 2 || !strings.Contains(got.errOut, c.want) || got.out != "" {
			t.Errorf("%s: got %d, %q, want 2, %q", text, got.status, got.errOut, c.want)
		}
	}
	got := call(t, t.TempDir(), "gas")
	want := "ionfall: gas: no command given, want one of list, show, swarm, import; " +
		"for example: ionfall gas list\n"
	if got.status != 2 || got.errOut != want {
		t.Errorf("got %d, %q, want 2, %q", got.status, got.errOut, want)
	}
}
