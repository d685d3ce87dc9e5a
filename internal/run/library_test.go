package run

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/inputerr"
	"ionfall/internal/store"
)

// inventedGas is an exchange file; all its numbers are invented.
const inventedGas = `REFERENCE: nobody, nowhere 1, 1 (1900)
ELASTIC
Xx
 1e-4
-----
0 5e-20
100 2e-20
-----
EXCITATION
Xx -> Xx*
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

// library makes a folder of gases with the invented one, under the given names.
func library(t *testing.T, dir string, names ...string) {
	t.Helper()
	x, err := crosssections.ReadExchange("xx.txt", strings.NewReader(inventedGas))
	if err != nil {
		t.Fatal(err)
	}
	bundled, err := crosssections.Bundled()
	if err != nil {
		t.Fatal(err)
	}
	helium, err := bundled.Gas("He")
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range names {
		made, err := x.NewGas(crosssections.ImportSettings{
			Name: name, File: "xx.txt", Date: "2001-02-03", IonsFrom: helium,
		})
		if err != nil {
			t.Fatal(err)
		}
		for file, data := range made.Files {
			put(t, filepath.Join(dir, filepath.FromSlash(file)), string(data))
		}
	}
}

func put(t *testing.T, path, text string) {
	t.Helper()
	if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

// with is the short input with another mixture and a library beside it.
func with(mixture string) string {
	return strings.Replace(short, "mixture: {He: 1}", "library: ./mine, mixture: "+mixture, 1)
}

// inputFolder is a folder with an input and a library of the gases.
func inputFolder(t *testing.T, text string, gases ...string) string {
	t.Helper()
	dir := t.TempDir()
	library(t, filepath.Join(dir, "mine"), gases...)
	put(t, filepath.Join(dir, "in.yaml"), text)
	return dir
}

func prepared(t *testing.T, path string) *Plan {
	t.Helper()
	p, err := Prepare(path)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// Goal: results with a gas of the user's stand for themselves. Method: the library is deleted once
// a run is prepared; it is cut and resumed, its resolved input is run again somewhere else, and
// all bits are compared.
func TestOwnGasIsKept(t *testing.T) {
	dir := inputFolder(t, with("{Xx: 0.4, He: 0.6}"), "Xx", "Unused")
	if _, err := Prepare(filepath.Join(dir, "in.yaml")); err == nil ||
		!strings.Contains(err.Error(), "whose collisions with He+ are known") {
		t.Errorf("got %v, want missing collisions", err)
	}
	put(t, filepath.Join(dir, "in.yaml"), with("{Xx: 1}"))
	p := prepared(t, filepath.Join(dir, "in.yaml"))
	if err := os.RemoveAll(filepath.Join(dir, "mine")); err != nil {
		t.Fatal(err)
	}
	whole := filepath.Join(dir, "whole")
	s, _, err := Run(context.Background(), p, Options{Out: whole, Cores: 1})
	if err != nil {
		t.Fatal(err)
	}
	of := s.Provenance["cross_sections"].(map[string]any)["Xx"].(map[string]any)
	if of["from"] != "gas.library: ./mine" || of["instead_of_bundled"] != false {
		t.Errorf("provenance: got %v", of)
	}
	if _, err := os.Stat(filepath.Join(whole, "gases", "Unused")); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("a gas that is not in use was kept: %v", err)
	}
	cut := filepath.Join(dir, "cut")
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	if _, _, err := Run(ended, p, Options{Out: cut}); !errors.Is(err, ErrInterrupted) {
		t.Fatal(err)
	}
	if err := os.RemoveAll(filepath.Join(cut+".running", "gases")); err != nil {
		t.Fatal(err)
	}
	if _, _, err := Resume(context.Background(), cut, Options{}); err != nil {
		t.Fatal(err)
	}
	sameFiles(t, "resumed", files(t, whole), files(t, cut))
	moved := filepath.Join(t.TempDir(), "moved")
	if err := os.Rename(cut, moved); err != nil {
		t.Fatal(err)
	}
	again := filepath.Join(dir, "again")
	resolved := prepared(t, filepath.Join(moved, "resolved.yaml"))
	if _, _, err := Run(context.Background(), resolved, Options{Out: again}); err != nil {
		t.Fatal(err)
	}
	a, b := files(t, whole), files(t, again)
	if !bytes.Equal(a["summary"], b["summary"]) || !bytes.Equal(a["resolved.yaml"], b["resolved.yaml"]) {
		t.Error("the resolved input gives another summary, or resolves differently")
	}
	for name := range a {
		// The hash of the input is in the bytes of the tables.
		if strings.HasSuffix(name, ".parquet") && values(t, whole, name) != values(t, again, name) {
			t.Errorf("the resolved input gives another %s", name)
		}
	}
}

// values is the content of a table as text; numbers to the last bit.
func values(t *testing.T, dir, name string) string {
	t.Helper()
	table, err := store.ReadTable(filepath.Join(dir, name))
	if err != nil {
		t.Fatal(err)
	}
	return fmt.Sprint(table.Columns)
}

// Goal: a gas of the user's goes before the bundled one of its name, and the provenance says so;
// a library out of which nothing is used leaves no trace. Method: an own He; then argon.
func TestOwnGasGoesFirst(t *testing.T) {
	dir := inputFolder(t, with("{He: 1}"), "He")
	p := prepared(t, filepath.Join(dir, "in.yaml"))
	of := p.crossSections()["He"].(map[string]any)
	if p.Gases[0].Title != "Xx, imported" || of["instead_of_bundled"] != true {
		t.Errorf("got %s, provenance %v", p.Gases[0].Title, of)
	}
	put(t, filepath.Join(dir, "in.yaml"), with("{Ar: 1}"))
	p = prepared(t, filepath.Join(dir, "in.yaml"))
	of = p.crossSections()["Ar"].(map[string]any)
	if of["from"] != "bundled" || p.resolvedLibrary() != "" {
		t.Errorf("got provenance %v, library %q", of, p.resolvedLibrary())
	}
}

// Goal: everything wrong with a library is told before any step, with its place. Method: a change
// each.
func TestLibraryErrors(t *testing.T) {
	table := filepath.Join("mine", "Xx", "e-01-elastic.csv")
	for name, c := range map[string]struct {
		input  string
		change func(dir string) error
		want   string
	}{
		"no folder": {with("{Xx: 1}"), func(dir string) error {
			return os.RemoveAll(filepath.Join(dir, "mine"))
		}, `in.yaml:3:33: gas.library: got "./mine", want a folder of gases; `},
		"empty": {with("{Xx: 1}"), func(dir string) error {
			return os.RemoveAll(filepath.Join(dir, "mine", "Xx"))
		}, "mine: no gas in it: want a folder for each, with a gas.yaml"},
		"a file": {with("{Xx: 1}"), func(dir string) error {
			return errors.Join(os.RemoveAll(filepath.Join(dir, "mine")),
				os.WriteFile(filepath.Join(dir, "mine"), nil, 0o666))
		}, "in.yaml:3:33: gas.library: got"},
		"other folder": {with("{Xx: 1}"), func(dir string) error {
			return os.Mkdir(filepath.Join(dir, "mine", "plots"), 0o777)
		}, "mine: plots in it has no gas.yaml: want nothing but gases in a library"},
		"table": {with("{Xx: 1}"), func(dir string) error {
			return os.WriteFile(filepath.Join(dir, table), []byte("# what: x\n"), 0o666)
		}, table + ":1:1: reference: got nothing, want a header line"},
		"no table": {with("{Xx: 1}"), func(dir string) error {
			return os.Remove(filepath.Join(dir, table))
		}, filepath.Join("mine", "Xx", "gas.yaml") + ":"},
		"large": {with("{Xx: 1}"), func(dir string) error {
			return os.Truncate(filepath.Join(dir, table), crosssections.MaxTableFileBytes+1)
		}, "Xx/e-01-elastic.csv: more than 4194304 bytes"},
		"unknown": {
			with("{Xy: 1}"), func(string) error { return nil },
			`gas.mixture.Xy: got "Xy", want one of Ar, CH4, CO2, H2, He, N2, O2, SiH4, Xx; did you mean "Xx"?`,
		},
	} {
		dir := inputFolder(t, c.input, "Xx")
		if err := c.change(dir); err != nil {
			t.Fatal(err)
		}
		_, err := Prepare(filepath.Join(dir, "in.yaml"))
		var list inputerr.List
		if !errors.As(err, &list) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: got\n%v\nwant %q", name, err, c.want)
		}
	}
}

// Goal: what is not simulated is refused at its place before any step. Method: gases that attach
// electrons, lose two of them, have no ion, or share one.
func TestUnusableGases(t *testing.T) {
	for name, c := range map[string]struct{ mixture, old, changed, want string }{
		"attachment": {
			"{Xx: 1}", "kind: excitation\n  threshold_eV: 15\n  products: [e, Xx*]",
			"kind: attachment\n  products: [Xx-]", "a gas whose collisions with Xx- are known",
		},
		"two electrons": {
			"{Xx: 1}", "[e, e, Xx+]", "[e, e, e, Xx++]",
			"ionization to one ion of charge 1: others are not simulated",
		},
		"same ion": {
			"{Xx: 0.5, Yy: 0.5}", "name: Xx+\n  charge: 1\n  mass_u: 5.4852505",
			"name: Xx+\n  charge: 1\n  mass_u: 6",
			"gas.mixture.Yy: got Xx+ with a mass of 5.48525 u, want 6 u, as in Xx",
		},
	} {
		dir := inputFolder(t, with(c.mixture), "Xx", "Yy")
		gas := filepath.Join(dir, "mine", "Xx", "gas.yaml")
		data, err := os.ReadFile(gas)
		if err != nil {
			t.Fatal(err)
		}
		text := strings.NewReplacer("ions:\n", "ions:\n- {name: Xx-, charge: -1}\n"+
			"- {name: Xx++, charge: 2}\n", c.old, c.changed).Replace(string(data))
		if c.old != "" {
			if !strings.Contains(string(data), c.old) {
				t.Fatalf("%s: no %q in\n%s", name, c.old, data)
			}
			put(t, gas, text)
		}
		p, err := Prepare(filepath.Join(dir, "in.yaml"))
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: got %v, %v, want %q", name, p, err, c.want)
		}
	}
}

// Goal: a checkpoint cannot write outside of its folder. Method: names that try to.
func TestKeptLibraryStaysInside(t *testing.T) {
	p := prepared(t, filepath.Join(inputFolder(t, with("{Xx: 1}"), "Xx"), "in.yaml"))
	p.ownFiles["../../../out.csv"] = []byte("x")
	out := filepath.Join(t.TempDir(), "out")
	ended, cancel := context.WithCancel(context.Background())
	cancel()
	if _, _, err := Run(ended, p, Options{Out: out}); !errors.Is(err, ErrInterrupted) {
		t.Fatal(err)
	}
	_, _, err := Resume(context.Background(), out, Options{})
	if err == nil || !strings.Contains(err.Error(), store.CheckpointFile) ||
		!strings.Contains(err.Error(), `has the file "../../../out.csv"`) {
		t.Errorf("got %v, want a refusal", err)
	}
}
