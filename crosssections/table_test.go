package crosssections

import (
	"math"
	"testing"
)

// Goal: the policy between and outside the rows. Method: values worked out by hand.
func TestTableAt(t *testing.T) {
	elastic := Table{Energy: []float64{1, 2, 10, 100}, CrossSection: []float64{4, 8, 4, 1}}
	inelastic := Table{Onset: 1.5, Energy: elastic.Energy, CrossSection: elastic.CrossSection}
	rising := Table{Energy: []float64{1, 2}, CrossSection: []float64{1, 3}}
	gone := Table{Energy: []float64{1, 2}, CrossSection: []float64{1, 0}}
	single := Table{Energy: []float64{1}, CrossSection: []float64{5}}
	for _, c := range []struct {
		name    string
		table   *Table
		e, want float64
	}{
		{"below the first row", &elastic, 0, 4},
		{"first row", &elastic, 1, 4},
		{"between", &elastic, 1.25, 5},
		{"row", &elastic, 2, 8},
		{"falling", &elastic, 6, 6},
		{"last row", &elastic, 100, 1},
		{"power law -log10(4)", &elastic, 1000, 0.25},
		{"below the onset", &inelastic, 1.4999, 0},
		{"at the onset", &inelastic, 1.5, 6},
		{"never rising", &rising, 50, 3},
		{"ended at zero", &gone, 3, 0},
		{"one row", &single, 7, 5},
		{"no row", &Table{}, 7, 0},
	} {
		if got := c.table.At(c.e); math.Abs(got-c.want) > 1e-14*c.want {
			t.Errorf("%s: at %g eV got %g, want %g", c.name, c.e, got, c.want)
		}
	}
	if got := elastic.At(math.NaN()); !math.IsNaN(got) {
		t.Errorf("at no number: got %g, want no number", got)
	}
}

// Goal: reading past the source is told. Method: both sides of the limit, with and without one.
func TestTableBeyond(t *testing.T) {
	whole := Table{Energy: []float64{1, 100}, CrossSection: []float64{1, 1}}
	part := whole
	part.ValidTo = 50
	if whole.Max() != 100 || part.Max() != 100 || part.Limit() != 50 {
		t.Errorf("got %g, %g, %g", whole.Max(), part.Max(), part.Limit())
	}
	if whole.Beyond(100) || !whole.Beyond(100.1) || part.Beyond(50) || !part.Beyond(50.1) {
		t.Error("Beyond is on the wrong side of the limit")
	}
}

// Goal: effective = elastic + inelastic everywhere, not only at rows, also across a step.
// Method: sums at energies on a fine grid that shares no row with the tables.
func TestElasticFromEffective(t *testing.T) {
	effective := Table{
		Energy: []float64{0, 10, 30, 100}, CrossSection: []float64{9, 8, 7, 2}, ValidTo: 60,
	}
	inelastic := []Process{
		{Table: Table{Onset: 12, Energy: []float64{12, 40}, CrossSection: []float64{0.5, 1}}},
		{Table: Table{Onset: 20, Energy: []float64{20, 50}, CrossSection: []float64{0, 1}}},
	}
	elastic, warnings := ElasticFromEffective(&effective, inelastic)
	if len(warnings) > 0 || elastic.ValidTo != 60 {
		t.Errorf("got warnings %q, valid to %g", warnings, elastic.ValidTo)
	}
	for e := 0.0123; e < 50; e += 0.0617 {
		sum := elastic.At(e) + inelastic[0].Table.At(e) + inelastic[1].Table.At(e)
		// Above its rows the first process falls back to a constant: still exact here.
		if want := effective.At(e); math.Abs(sum-want) > 1e-9 {
			t.Fatalf("at %g eV: got %.12g, want %.12g", e, sum, want)
		}
	}
}
