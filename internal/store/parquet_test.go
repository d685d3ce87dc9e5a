package store

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/parquet-go/parquet-go"

	"ionfall/internal/table"
)

// mixed returns a table of n rows with a column of every kind, its names not in alphabetic order.
func mixed(n int) *table.Table {
	text, whole := make([]string, n), make([]int64, n)
	x, value, se := make([]float64, n), make([]float64, n), make([]float64, n)
	for i := range n {
		text[i] = []string{"Ar+", "SiH3+", "π ≥ 0", ""}[i%4]
		whole[i] = int64(i*i) - 7
		x[i] = math.Sqrt(float64(i))
		value[i], se[i] = math.Exp(math.Sin(float64(i))*100), math.NaN()
	}
	if n > 4 {
		copy(whole, []int64{math.MaxInt64, math.MinInt64})
		copy(x, []float64{math.Inf(1), math.Inf(-1), math.Copysign(0, -1), 5e-324, math.NaN()})
	}
	t := table.New("mixed", "a table of all kinds")
	t.AddFloat("x_m", "m", "position", x)
	t.AddText("species", "what moves", text)
	t.AddEstimate("flux_m2ps", "1/(m2 s)", "flux", value, se)
	t.AddInt("count", "", "particles", whole)
	t.AddFloat("ion_flux_m2ps.grounded.all", "1/(m2 s)", "a result as a column", value)
	return t
}

func sameTable(t *testing.T, got, want *table.Table) {
	t.Helper()
	if got.Name != want.Name || got.Doc != want.Doc || len(got.Columns) != len(want.Columns) {
		t.Fatalf("got %q %q with %d columns", got.Name, got.Doc, len(got.Columns))
	}
	for i, c := range got.Columns {
		w := want.Columns[i]
		if c.Name != w.Name || c.Unit != w.Unit || c.Doc != w.Doc || c.Len() != w.Len() {
			t.Errorf("got %s [%s] %q, %d rows; want %s [%s] %q, %d rows", c.Name, c.Unit, c.Doc,
				c.Len(), w.Name, w.Unit, w.Doc, w.Len())
		}
		bits := func(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) }
		if (c.Float == nil) != (w.Float == nil) || (c.Int == nil) != (w.Int == nil) ||
			!slices.EqualFunc(c.Float, w.Float, bits) || !slices.Equal(c.Int, w.Int) ||
			!slices.Equal(c.Text, w.Text) {
			t.Errorf("column %s differs", c.Name)
		}
	}
}

// TestTableRoundTrip: lengths about the batches of the writer, and one of several row groups.
func TestTableRoundTrip(t *testing.T) {
	lengths := []int{0, 1, 5, valueBatch - 1, valueBatch, valueBatch + 1, 102_600}
	if !testing.Short() {
		lengths = append(lengths, rowGroup+3)
	}
	for _, n := range lengths {
		run := newRun(t)
		want := mixed(n)
		if err := run.WriteTable(want, map[string]string{"seed": "1"}); err != nil {
			t.Fatal(err)
		}
		got, err := ReadTable(run.Path("mixed.parquet"))
		if err != nil {
			t.Fatalf("%d rows: %v", n, err)
		}
		sameTable(t, got, want)
		if err := got.Validate(); err != nil {
			t.Error(err)
		}
	}
}

func TestTableMetadata(t *testing.T) {
	run := newRun(t)
	given := map[string]string{"seed": "1", "input": "ab12"}
	if err := run.WriteTable(mixed(3), given); err != nil {
		t.Fatal(err)
	}
	meta, err := ReadMeta(run.Path("mixed.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	columns := `{"name":"x_m","unit":"m","doc":"position"}`
	if meta["schema_version"] != "1" || meta["table"] != "mixed" || meta["input"] != "ab12" ||
		meta["title"] != "a table of all kinds" || meta["seed"] != "1" || len(meta) != 6 ||
		!strings.HasPrefix(meta["columns"], "["+columns) {
		t.Errorf("metadata: %v", meta)
	}
	err = run.WriteTable(mixed(3), map[string]string{"title": "mine"})
	if err == nil || !strings.Contains(err.Error(), `"title" is reserved`) {
		t.Errorf("reserved key: %v", err)
	}
	bad := mixed(3)
	bad.Columns[0].Unit = "V"
	if err := run.WriteTable(bad, nil); err == nil || !strings.Contains(err.Error(), "x_m") {
		t.Errorf("wrong unit: %v", err)
	}
}

// TestTableIsReproducible: the same table and metadata give the same bytes.
func TestTableIsReproducible(t *testing.T) {
	run := newRun(t)
	meta := map[string]string{}
	for i := range 20 {
		meta[fmt.Sprint("key", i)] = "value"
	}
	var first string
	for i := range 5 {
		if err := run.WriteTable(mixed(100), meta); err != nil {
			t.Fatal(err)
		}
		now := get(t, run.Path("mixed.parquet"))
		if i == 0 {
			first = now
		} else if now != first {
			t.Fatal("the files differ")
		}
	}
}

// TestDamagedTables: cut anywhere or with any bit flipped, a table is refused.
func TestDamagedTables(t *testing.T) {
	run := newRun(t)
	if err := run.WriteTable(mixed(6), nil); err != nil {
		t.Fatal(err)
	}
	good := []byte(get(t, run.Path("mixed.parquet")))
	read := func(b []byte) error {
		_, _, err := decodeTable(bytes.NewReader(b), int64(len(b)), true)
		return err
	}
	if err := read(good); err != nil {
		t.Fatal(err)
	}
	for n := range good {
		if err := read(good[:n]); err == nil {
			t.Fatalf("cut to %d of %d bytes: not detected", n, len(good))
		}
	}
	for i := range 8 * len(good) {
		good[i/8] ^= 1 << (i % 8)
		if err := read(good); err == nil {
			t.Errorf("bit %d of byte %d flipped: not detected", i%8, i/8)
		}
		good[i/8] ^= 1 << (i % 8)
	}
	path := filepath.Join(t.TempDir(), "damaged.parquet")
	good[len(good)/2] ^= 1
	put(t, path, string(good))
	want := path + ": checksum of the file does not match: it is damaged"
	if _, err := ReadTable(path); err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

func TestForeignTables(t *testing.T) {
	dir := t.TempDir()
	type row struct {
		X float64 `parquet:"x"`
	}
	write := func(name string, options ...parquet.WriterOption) string {
		var b, sealed bytes.Buffer
		w := parquet.NewGenericWriter[row](&b, options...)
		_, err := w.Write([]row{{1}, {2}})
		if err = errors.Join(err, w.Close(), writeSealed(&sealed, b.Bytes())); err != nil {
			t.Fatal(err)
		}
		path := filepath.Join(dir, name)
		put(t, path, sealed.String())
		put(t, path+" unsealed", b.String())
		return path
	}
	kv := parquet.KeyValueMetadata
	for path, want := range map[string]string{
		write("a"): `not a table of this program: no "schema_version" in its metadata`,
		write("b", kv("schema_version", "2")): "written by a newer version: schema_version 2, " +
			"this program reads up to 1",
		write("c", kv("schema_version", "one")): `schema_version "one", ` +
			"want a whole number",
		write("d", kv("schema_version", "1")): "labels of the columns: ",
		write("e", kv("schema_version", "1"), kv("columns", "[]")): "1 columns, " +
			"but labels for 0",
		write("f", kv("schema_version", "1"), kv("columns", `[{"name":"y"}]`)): `column "x" has ` +
			`the label of "y"`,
	} {
		_, err := ReadTable(path)
		if err == nil || !strings.HasPrefix(err.Error(), path+": "+want) {
			t.Errorf("got %v, want %s", err, want)
		}
	}
	unsealed := write("g") + " unsealed"
	if _, err := ReadTable(unsealed); err == nil || !strings.Contains(err.Error(), "no seal") {
		t.Errorf("without seal: %v", err)
	}
	put(t, filepath.Join(dir, "text"), "x,y\n1,2\n")
	if _, err := ReadTable(filepath.Join(dir, "text")); err == nil {
		t.Error("a text file is read as a table")
	}
	if _, err := ReadTable(filepath.Join(dir, "none")); !os.IsNotExist(err) {
		t.Errorf("missing file: %v", err)
	}
}

// TestTableSurvivesEveryFault: a table that cannot be written leaves the one before it.
func TestTableSurvivesEveryFault(t *testing.T) {
	forEachFault(t, false, func(t *testing.T, fs *faulty) {
		run := newRun(t)
		if err := run.WriteTable(mixed(3), nil); err != nil {
			t.Fatal(err)
		}
		run.fs = fs
		err := run.WriteTable(mixed(5), nil)
		run.fs = memory{}
		if failed := fs.n >= fs.failAt; failed != (err != nil) {
			t.Errorf("fault %v, error %v", failed, err)
		}
		got, readErr := ReadTable(run.Path("mixed.parquet"))
		if readErr != nil {
			t.Fatal(readErr)
		}
		if got.Rows() != 3 && got.Rows() != 5 || err == nil && got.Rows() != 5 {
			t.Errorf("%d rows after %v", got.Rows(), err)
		}
	})
}

func BenchmarkTable(b *testing.B) {
	run, err := Create(filepath.Join(b.TempDir(), "argon"))
	if err != nil {
		b.Fatal(err)
	}
	t := mixed(102_600)
	b.Run("write", func(b *testing.B) {
		for b.Loop() {
			if err := run.WriteTable(t, nil); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("read", func(b *testing.B) {
		for b.Loop() {
			if _, err := ReadTable(run.Path("mixed.parquet")); err != nil {
				b.Fatal(err)
			}
		}
	})
	if err := run.Close(); err != nil {
		b.Fatal(err)
	}
}
