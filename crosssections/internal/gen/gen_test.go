package main

import (
	"bytes"
	"os"
	"path/filepath"
	"testing"
)

// Goal: the committed tables are those of the formulas. Method: byte for byte.
func TestCommittedTables(t *testing.T) {
	const dir = "../../data"
	files, err := tables(os.DirFS(dir))
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range files {
		committed, err := os.ReadFile(filepath.Join(dir, f.name))
		if err != nil {
			t.Error(err)
		} else if !bytes.Equal(committed, f.bytes()) {
			t.Errorf("%s is not what the generator writes: run `go generate ./crosssections`",
				f.name)
		}
	}
}

// Goal: rows are dense where the curve bends. Method: a parabola, whose chord errs by step^2/4.
func TestTabulate(t *testing.T) {
	f := func(e float64) float64 { return e * e }
	rows := tabulate(f, 0, 1, 100)
	for i := 1; i < len(rows); i++ {
		a, b := rows[i-1].energy, rows[i].energy
		chord := (f(a) + f(b)) / 2
		if exact := f((a + b) / 2); chord-exact > 1.01*tolerance*exact {
			t.Errorf("between %g and %g eV: %g off", a, b, chord/exact-1)
		}
	}
	if n := len(rows); n < 70 || n > 200 {
		// ln(100)/(2 sqrt(tolerance)) = 73 rows are needed; halving wastes up to half of them.
		t.Errorf("%d rows", n)
	}
}
