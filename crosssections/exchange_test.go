package crosssections

import (
	"bytes"
	"math"
	"os"
	"slices"
	"strings"
	"testing"

	"ionfall/internal/phys"
)

func readSample(t *testing.T) ([]byte, *Exchange) {
	t.Helper()
	const name = "invented.txt"
	data, err := os.ReadFile("testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	x, err := ReadExchange(name, bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	return data, x
}

// Goal: every kind of block is read whole. Method: an invented file with all of them, compared
// field by field with what stands in it.
func TestReadExchangeBlocks(t *testing.T) {
	_, x := readSample(t)
	type brief struct {
		kind            Kind
		target, product string
		threshold       float64
		massRatio       float64
		twoWay          bool
		weights         float64
		database        string
		rows            int
	}
	first, second := "First invented", "Second invented"
	want := []brief{
		{Effective, "Xx", "", 0, 2e-5, false, 0, first, 3},
		{Excitation, "Xx", "Xx(a, b)", 5, 0, true, 3, first, 3},
		{Ionization, "Xx", "Xx^+", 20, 0, false, 0, first, 2},
		{Excitation, "YZ", "YZ(J=2)", 0.1, 0, false, 0, first, 5},
		{Elastic, "YZ", "", 0, 1e-5, false, 0, second, 2},
		{Attachment, "YZ", "Y^-+Z", 0, 0, false, 0, second, 3},
		{Excitation, "YZ", "YZ(v1)", 0.2, 0, false, 0, second, 2},
	}
	if len(x.Blocks) != len(want) {
		t.Fatalf("got %d blocks, want %d", len(x.Blocks), len(want))
	}
	for i, b := range x.Blocks {
		got := brief{
			b.Kind, b.Target, b.Product, b.Threshold, b.MassRatio, b.TwoWay,
			b.WeightRatio, b.Database, len(b.Table.Energy),
		}
		if got != want[i] {
			t.Errorf("block %d: got %+v, want %+v", i, got, want[i])
		}
	}
	// Units: keV and 1e-16 cm2 become eV and m2.
	elastic := x.Blocks[4].Table
	if e, q := elastic.Energy[1], elastic.CrossSection[1]; math.Abs(e-10) > 1e-12 ||
		math.Abs(q/3e-20-1) > 1e-12 {
		t.Errorf("units: got %g eV, %g m2, want 10 eV, 3e-20 m2", e, q)
	}
	// A repeated energy is a step; the same row twice is one row.
	step := x.Blocks[3].Table
	if lo, hi := step.At(0.3), step.At(0.4); lo != 2e-20 || hi != 1e-20 {
		t.Errorf("step: got %g and %g, want 2e-20 and 1e-20", lo, hi)
	}
	if len(x.Warnings) != 2 ||
		!strings.HasPrefix(x.Warnings[0], "invented.txt:59: ROTATIONAL YZ: two cross sections") {
		t.Errorf("warnings: got %q", x.Warnings)
	}
	if ref := x.Blocks[0].Reference; ref != "nobody, nowhere 1, 1 (1900)" {
		t.Errorf("reference: got %q", ref)
	}
}

// Goal: the end of lines does not matter. Method: the same file with the ends of another system.
func TestReadExchangeCRLF(t *testing.T) {
	data, want := readSample(t)
	got, err := ReadExchange("invented.txt",
		bytes.NewReader(append([]byte("\xef\xbb\xbf"), bytes.ReplaceAll(data,
			[]byte("\n"), []byte("\r\n"))...)))
	if err != nil {
		t.Fatal(err)
	}
	for i := range want.Blocks {
		if !slices.Equal(got.Blocks[i].Table.CrossSection, want.Blocks[i].Table.CrossSection) ||
			got.Blocks[i].Product != want.Blocks[i].Product {
			t.Errorf("block %d: got %+v, want %+v", i, got.Blocks[i], want.Blocks[i])
		}
	}
}

// Goal: an effective cross section becomes elastic. Method: sums by hand, with a clipped end.
func TestExchangeGas(t *testing.T) {
	_, x := readSample(t)
	gas, err := x.Gas("Xx")
	if err != nil {
		t.Fatal(err)
	}
	if want := phys.ElectronMass / 2e-5; gas.Mass != want {
		t.Errorf("mass: got %g, want %g", gas.Mass, want)
	}
	elastic := gas.Processes[0]
	if elastic.Kind != Elastic || elastic.Source.Status != "derived" {
		t.Errorf("got %s, %s", elastic.Kind, elastic.Source.Status)
	}
	for _, c := range []struct{ e, want float64 }{
		{0, 1e-19},
		{5, 1.5e-19},
		{10, 1.6e-19},
		{20, 2e-19 - 2e-20 - (4e-20 - 3e-20/9)},
		{100, 0}, // 2e-20 - 1e-20 - 1.5e-20 is below 0
	} {
		if got := elastic.Table.At(c.e); math.Abs(got-c.want) > 1e-15*1e-19+1e-12*c.want {
			t.Errorf("elastic at %g eV: got %g, want %g", c.e, got, c.want)
		}
	}
	if n := len(gas.Warnings); n != 3 || !strings.Contains(gas.Warnings[2], "at 100 eV, by 0.25") {
		t.Errorf("warnings: got %q", gas.Warnings)
	}
	if got := gas.Processes[1]; got.WeightRatio != 3 ||
		!slices.Equal(got.Products, []string{"e", "Xx(a, b)"}) {
		t.Errorf("excitation: got %+v", got)
	}
	if got := gas.Processes[2].Products; !slices.Equal(got, []string{"e", "e", "Xx+"}) {
		t.Errorf("ionization: got products %q", got)
	}
}

// Goal: databases are not mixed, and unknown names are told. Method: a species in two of them.
func TestExchangeGasChoice(t *testing.T) {
	_, x := readSample(t)
	if _, err := x.Gas("YZ"); err == nil ||
		!strings.Contains(err.Error(), "First invented, Second invented") {
		t.Errorf("two databases: got %v", err)
	}
	gas, err := x.Only("Second invented").Gas("YZ")
	if err != nil {
		t.Fatal(err)
	}
	attachment := gas.Processes[1]
	if !slices.Equal(attachment.Products, []string{"Y-", "Z"}) || attachment.Table.At(5) != 0 {
		t.Errorf("attachment: got %+v", attachment)
	}
	if _, err := x.Only("First invented").Gas("YZ"); err == nil ||
		!strings.Contains(err.Error(), "no elastic") {
		t.Errorf("without elastic: got %v", err)
	}
	if _, err := x.Gas("XX"); err == nil || !strings.Contains(err.Error(), "want one of Xx, YZ") {
		t.Errorf("unknown species: got %v", err)
	}
}

// Goal: every mistake is told with its place, all at once. Method: a file full of them, the whole
// text compared.
func TestReadExchangeErrors(t *testing.T) {
	data, err := os.ReadFile("testdata/bad.txt")
	if err != nil {
		t.Fatal(err)
	}
	_, err = ReadExchange("bad.txt", bytes.NewReader(data))
	want, readErr := os.ReadFile("testdata/bad.golden")
	if readErr != nil {
		t.Fatal(readErr)
	}
	if err == nil || err.Error()+"\n" != string(want) {
		t.Errorf("got\n%v\nwant\n%s", err, want)
	}
}

// Goal: charges and separators are told apart. Method: the spellings in use.
func TestSplitProducts(t *testing.T) {
	for text, want := range map[string][]string{
		"E + E + Ar+":  {"e", "e", "Ar+"},
		"Ar^+":         {"Ar+"},
		"H3++H":        {"H3+", "H"},
		"O^-+O":        {"O-", "O"},
		"H+ + H2":      {"H+", "H2"},
		"E+E+Xx++":     {"e", "e", "Xx++"},
		"Si2H5+ + H-":  {"Si2H5+", "H-"},
		" E + Xx(a+b)": {"e", "Xx(a+b)"},
	} {
		if got := splitProducts(text); !slices.Equal(got, want) {
			t.Errorf("%q: got %q, want %q", text, got, want)
		}
	}
}

// Goal: no file makes the reader fail otherwise than by an error, and what it accepts is sound.
// Method: random changes of the samples.
func FuzzReadExchange(f *testing.F) {
	for _, name := range []string{"invented.txt", "bad.txt"} {
		data, err := os.ReadFile("testdata/" + name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(data)
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		x, err := ReadExchange("x.txt", bytes.NewReader(data))
		if err != nil {
			return
		}
		for i := range x.Blocks {
			checkSound(t, &x.Blocks[i].Table)
		}
		for _, database := range x.Databases() {
			part := x.Only(database)
			for _, species := range part.Species() {
				gas, err := part.Gas(species)
				if err == nil && len(gas.Processes) == 0 {
					t.Fatalf("%s: no process and no error", species)
				}
			}
		}
	})
}
