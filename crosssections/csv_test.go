package crosssections

import (
	"fmt"
	"slices"
	"strings"
	"testing"
)

const sampleTable = `# what: invented, for a test
# reference: nobody, nowhere 1, 1 (1900)
# database: none at all
# date: 2013-06-04
# status: read
# frame: center_of_mass
# bib: phelps-1994
# valid_to_eV: 5
# note: one
# note: two: three
energy_eV,cross_section_m2
0,1e-20
# a remark
5, 2e-20
1e3,3e-20
`

// Goal: everything in a table file arrives. Method: a whole file, field by field.
func TestReadTable(t *testing.T) {
	got, err := ReadTable("t.csv", []byte(sampleTable))
	if err != nil {
		t.Fatal(err)
	}
	source := Source{
		Citation: "nobody, nowhere 1, 1 (1900)", Database: "none at all", Date: "2013-06-04",
		Status: "read", Note: "one two: three", Bib: "phelps-1994",
	}
	if got.Source != source || got.Frame != CenterOfMass || got.What != "invented, for a test" {
		t.Errorf("header: got %+v", got)
	}
	if !slices.Equal(got.Table.Energy, []float64{0, 5, 1000}) ||
		!slices.Equal(got.Table.CrossSection, []float64{1e-20, 2e-20, 3e-20}) ||
		got.Table.ValidTo != 5 {
		t.Errorf("rows: got %+v", got.Table)
	}
	crlf, err := ReadTable("t.csv", []byte(strings.ReplaceAll(sampleTable, "\n", "\r\n")))
	if err != nil || crlf.Source != source || crlf.SHA256 == got.SHA256 {
		t.Errorf("other line ends: got %+v, %v", crlf, err)
	}
}

// Goal: each mistake gives its own message at its place. Method: one change to a good file each,
// the whole message compared.
func TestReadTableErrors(t *testing.T) {
	keys := "what, reference, database, date, status, frame, bib, valid_to_eV, note"
	for _, c := range []struct{ old, changed, want string }{
		{"# frame", "# fram", "t.csv:1:1: frame: got nothing, want a header line `# frame: ...`\n" +
			`t.csv:6:3: got unknown key "fram", want one of ` + keys + `; did you mean "frame"?`},
		{"center_of_mass", "cm", `t.csv:6:10: frame: got "cm", want lab or center_of_mass`},
		{"2013-06-04", "4 June", `t.csv:4:9: date: got "4 June", want a day as 2013-06-04`},
		{
			"2013-06-04", "2013-13-04",
			`t.csv:4:9: date: got "2013-13-04", want a day as 2013-06-04`,
		},
		{
			": read", ": red",
			`t.csv:5:11: status: got "red", want one of read, computed, derived, memory`,
		},
		{"phelps-1994", "phelp-1994", `t.csv:7:8: bib: got "phelp-1994", want a known reference; ` +
			`did you mean "phelps-1994"?`},
		{
			"valid_to_eV: 5", "valid_to_eV: NaN",
			`t.csv:8:16: valid_to_eV: got "NaN", want an energy in eV above 0`,
		},
		{"# note: one", "# note", `t.csv:9:1: got "# note", want a line "# key: value"`},
		{
			"# note: one", "# frame: lab",
			"t.csv:9:3: frame: got a second value, want one (the first is on line 6)",
		},
		{"energy_eV,", "energy,", `t.csv:11:1: got "energy,cross_section_m2", want the line ` +
			`"energy_eV,cross_section_m2"`},
		{
			"5, 2e-20", "5 2e-20",
			`t.csv:14:1: got "5 2e-20", want two numbers with a comma between them`,
		},
		{"5, 2e-20", "5, -2e-20", `t.csv:14:3: cross_section_m2: got " -2e-20", ` +
			`want a number from 0 to 1e-14 m2`},
		{"5, 2e-20", "5,2e-4", `t.csv:14:3: cross_section_m2: got "2e-4", ` +
			`want a number from 0 to 1e-14 m2`},
		{"5, 2e-20", "NaN,2e-20", `t.csv:14:1: energy_eV: got "NaN", ` +
			`want a number from 0 to 1e+09 eV`},
		{"1e3", "4", "t.csv:15:1: energy_eV: got 4 eV after 5 eV, want increasing energies"},
		{
			"0,1e-20\n# a remark\n5, 2e-20\n1e3,3e-20\n", "",
			"t.csv:11:1: got no rows, want at least one",
		},
	} {
		if !strings.Contains(sampleTable, c.old) {
			t.Fatalf("%q is not in the sample", c.old)
		}
		_, err := ReadTable("t.csv", []byte(strings.Replace(sampleTable, c.old, c.changed, 1)))
		if err == nil || err.Error() != c.want {
			t.Errorf("%q: got\n%v\nwant\n%s", c.changed, err, c.want)
		}
	}
}

// Goal: the limits hold. Method: a file that just fits and one row, error or byte too many.
func TestReadTableLimits(t *testing.T) {
	rows := func(n int, format string) []byte {
		b := []byte(goodHeader)
		for i := range n {
			b = fmt.Appendf(b, format, i)
		}
		return b
	}
	if _, err := ReadTable("t.csv", rows(maxRows, "%d,0\n")); err != nil {
		t.Errorf("largest file: got %v", err)
	}
	if _, err := ReadTable("t.csv", rows(maxRows+7, "%d,0\n")); err == nil ||
		err.Error() != "t.csv:100006:1: got more than 100000 rows, want fewer" {
		t.Errorf("too many rows: got %v", err)
	}
	if _, err := ReadTable("t.csv", rows(maxRows, "x%d\n")); err == nil ||
		!strings.HasSuffix(err.Error(), "and 80 more") {
		t.Errorf("bad rows: got %v, want 100 errors and no more", err)
	}
	long := sampleTable + strings.Repeat("#\n", MaxTableFileBytes/2)
	if _, err := ReadTable("t.csv", []byte(long)); err == nil ||
		!strings.Contains(err.Error(), "want at most 4194304") {
		t.Errorf("large file: got %v", err)
	}
}

// Goal: no input makes the reader fail otherwise than by an error, and what it accepts is sound.
// Method: random changes of a good file.
func FuzzReadTable(f *testing.F) {
	f.Add([]byte(sampleTable))
	f.Add([]byte("#:\n,\n\r\n# what:x"))
	f.Fuzz(func(t *testing.T, data []byte) {
		table, err := ReadTable("t.csv", data)
		if err != nil {
			return
		}
		checkSound(t, &table.Table)
	})
}

func checkSound(t *testing.T, table *Table) {
	t.Helper()
	n := len(table.Energy)
	if n == 0 || n != len(table.CrossSection) {
		t.Fatalf("%d energies, %d cross sections", n, len(table.CrossSection))
	}
	for i := range n {
		if i > 0 && table.Energy[i] <= table.Energy[i-1] {
			t.Fatalf("row %d: %g eV after %g eV", i, table.Energy[i], table.Energy[i-1])
		}
		for _, e := range []float64{table.Energy[i], 1.5 * table.Energy[i], 2e9} {
			if q := table.At(e); !(q >= 0 && q <= maxCrossSection) {
				t.Fatalf("%g m2 at %g eV", q, e)
			}
		}
	}
}
