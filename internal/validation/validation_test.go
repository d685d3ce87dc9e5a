package validation

import (
	"bytes"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

func sample() Row {
	return Row{
		Section: "model gas", Quantity: "drift velocity", Unit: "m/s", Reference: 100,
		ReferenceError: 3, Source: "A. Author, J. Example 1, 2 (1903)", Status: "computed",
		Ours: 120, OursError: 4, Limit: 4, LimitKind: Sigma, Seed: 7,
	}
}

// Goal: the verdict follows the limit's kind. Method: a deviation of 20, four joint errors of 5
// (a 3-4-5 triangle) and 20 %, with limits on both sides of it.
func TestJudged(t *testing.T) {
	for _, c := range []struct {
		kind  LimitKind
		limit float64
		want  bool
	}{
		{Sigma, 4.01, true},
		{Sigma, 3.99, false},
		{Relative, 0.201, true},
		{Relative, 0.199, false},
		{Absolute, 20.1, true},
		{Absolute, 19.9, false},
		{"", 1e9, false},
	} {
		r := sample()
		r.LimitKind, r.Limit = c.kind, c.limit
		if r = r.Judged(); r.Pass != c.want {
			t.Errorf("limit %g %s: pass %t, want %t", c.limit, c.kind, r.Pass, c.want)
		}
		if r.Deviation != 4 || r.Relative != 0.2 {
			t.Errorf("deviation %g sigma, %g relative, want 4 and 0.2", r.Deviation, r.Relative)
		}
	}
	for name, spoil := range map[string]func(r *Row){
		"no value": func(r *Row) { r.Ours = math.NaN() },
		"no error": func(r *Row) { r.OursError = math.NaN() },
		"nothing to judge by": func(r *Row) {
			r.OursError, r.ReferenceError, r.Ours = 0, 0, r.Reference
		},
	} {
		r := sample()
		spoil(&r)
		if r.Judged().Pass {
			t.Errorf("%s: passes", name)
		}
	}
}

// Goal: a file holds the last verdict on each quantity, and equal rows make equal bytes. Method:
// merge, replace one, merge again in another order;
// 9 comes before 10.
func TestMerge(t *testing.T) {
	path := filepath.Join(t.TempDir(), "new folder", "rows.json")
	a, b, c := sample(), sample(), sample()
	b.Section, c.Quantity = "an earlier section", "10 Td, mean energy"
	a.Quantity = "9 Td, mean energy"
	merge := func(rows ...Row) []byte {
		t.Helper()
		if err := Merge(path, rows...); err != nil {
			t.Fatal(err)
		}
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		return data
	}
	merge(a, b, c)
	a.Ours = 101
	first := merge(a)
	if again := merge(c, b, a); !bytes.Equal(first, again) {
		t.Errorf("the same rows make other bytes:\n%s\n%s", first, again)
	}
	got, err := ReadAll(filepath.Dir(path))
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff([]Row{b, a, c}, got); diff != "" {
		t.Error(diff)
	}
}

// failures counts what a test would have failed on.
type failures struct{ errors, logs int }

func (*failures) Helper()        {}
func (f *failures) Log(...any)   { f.logs++ }
func (f *failures) Error(...any) { f.errors++ }

// Goal: a row that does not pass fails the test, and is kept all the same, but only if asked to.
// Method: a passing and a failing row, without and with update.
func TestRecord(t *testing.T) {
	path := filepath.Join(t.TempDir(), "rows.json")
	good, bad := sample(), sample()
	good.Limit, bad.Quantity, bad.Limit = 4.1, "mean energy", 3
	for _, update := range []bool{false, true} {
		f := &failures{}
		Record(f, path, update, good, bad)
		if f.errors != 1 || f.logs != 1 {
			t.Errorf("%d errors and %d logs, want one each", f.errors, f.logs)
		}
		rows, err := Read(path)
		if err != nil {
			t.Fatal(err)
		}
		switch {
		case !update && len(rows) != 0:
			t.Errorf("%d rows kept unasked", len(rows))
		case update && (len(rows) != 2 || !rows[0].Pass || rows[1].Pass):
			t.Errorf("kept %+v", rows)
		}
	}
}

func TestReadRefusesOtherFiles(t *testing.T) {
	path := filepath.Join(t.TempDir(), "rows.json")
	if err := os.WriteFile(path, []byte(`[{"quantities": 1}]`), 0o600); err != nil {
		t.Fatal(err)
	}
	_, err := Read(path)
	if err == nil || !strings.Contains(err.Error(), `unknown field "quantities"`) {
		t.Errorf("got %v", err)
	}
}

// Goal: the page. Method: compared as a whole, with a failing row and a bar in a name.
func TestMarkdown(t *testing.T) {
	bad := sample()
	bad.Quantity, bad.Limit, bad.Note = "x|y", 3, "why"
	bad.Reference, bad.ReferenceError, bad.Ours, bad.OursError = 1e-17, 0, 1.2e-17, 4e-19
	got := string(Markdown([]Row{sample().Judged(), bad.Judged()}))
	want := `1 of 2 comparisons pass.

Failing:

* model gas, x\|y

## model gas

| quantity | unit | reference | source | ours | deviation | limit | pass | seed | note |
|---|---|---|---|---|---|---|---|---|---|
| drift velocity | m/s | 100.0 ± 3.0 | A. Author, J. Example 1, 2 (1903) (computed) | ` +
		`120.0 ± 4.0 | +4.0 sigma, +20 % | 4 sigma | yes | 7 |  |
| x\|y | m/s | 1e-17 | A. Author, J. Example 1, 2 (1903) (computed) | ` +
		`(1.200 ± 0.040)e-17 | +5.0 sigma, +20 % | 3 sigma | **no** | 7 | why |
`
	if diff := cmp.Diff(want, got); diff != "" {
		t.Error(diff)
	}
}
