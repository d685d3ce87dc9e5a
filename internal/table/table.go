package table

import (
	"fmt"
	"strings"
)

// seSuffix ends the name of a standard error.
const seSuffix = "_se"

// Column is one variable. Exactly one of Float, Int and Text is not nil.
type Column struct {
	Name  string    // with the unit as its last part
	Unit  string    // as people write it: "1/(m2 s)"; empty for a pure number or a text
	Doc   string    // what it is, in a few words
	Float []float64 // NaN is "no value"
	Int   []int64
	Text  []string
}

// Len returns the number of rows.
func (c Column) Len() int { return max(len(c.Float), len(c.Int), len(c.Text)) }

// Table is a set of equally long columns.
type Table struct {
	Name    string // that of its file: letters, digits and _
	Doc     string // its title
	Columns []Column
}

// New returns a table without columns.
func New(name, doc string) *Table { return &Table{Name: name, Doc: doc} }

// AddFloat adds a column of numbers; it keeps v.
func (t *Table) AddFloat(name, unit, doc string, v []float64) {
	t.Columns = append(t.Columns, Column{Name: name, Unit: unit, Doc: doc, Float: present(v)})
}

// AddInt adds a column of whole numbers; it keeps v.
func (t *Table) AddInt(name, unit, doc string, v []int64) {
	t.Columns = append(t.Columns, Column{Name: name, Unit: unit, Doc: doc, Int: present(v)})
}

// AddText adds a column of texts; it keeps v.
func (t *Table) AddText(name, doc string, v []string) {
	t.Columns = append(t.Columns, Column{Name: name, Doc: doc, Text: present(v)})
}

// AddEstimate adds a column of values and, named after it, the column of their standard errors.
func (t *Table) AddEstimate(name, unit, doc string, value, se []float64) {
	t.AddFloat(name, unit, doc, value)
	t.AddFloat(name+seSuffix, unit, "standard error of "+name, se)
}

// present makes an absent array an empty one, so that the column still says what it holds.
func present[T any](v []T) []T {
	if v == nil {
		return []T{}
	}
	return v
}

// Rows returns the number of rows.
func (t *Table) Rows() int {
	if len(t.Columns) == 0 {
		return 0
	}
	return t.Columns[0].Len()
}

// Column returns the column of that name and whether there is one.
func (t *Table) Column(name string) (Column, bool) {
	for _, c := range t.Columns {
		if c.Name == name {
			return c, true
		}
	}
	return Column{}, false
}

// Floats returns the numbers of a column, or an error that says what there is instead.
func (t *Table) Floats(name string) ([]float64, error) {
	c, err := t.need(name)
	if err == nil && c.Float == nil {
		err = fmt.Errorf("%s: column %q holds %s, want numbers", t.Name, name, c.holds())
	}
	return c.Float, err
}

// Ints returns the whole numbers of a column, or an error that says what there is instead.
func (t *Table) Ints(name string) ([]int64, error) {
	c, err := t.need(name)
	if err == nil && c.Int == nil {
		err = fmt.Errorf("%s: column %q holds %s, want whole numbers", t.Name, name, c.holds())
	}
	return c.Int, err
}

// Texts returns the texts of a column, or an error that says what there is instead.
func (t *Table) Texts(name string) ([]string, error) {
	c, err := t.need(name)
	if err == nil && c.Text == nil {
		err = fmt.Errorf("%s: column %q holds %s, want texts", t.Name, name, c.holds())
	}
	return c.Text, err
}

func (t *Table) need(name string) (Column, error) {
	if c, ok := t.Column(name); ok {
		return c, nil
	}
	names := make([]string, len(t.Columns))
	for i, c := range t.Columns {
		names[i] = c.Name
	}
	return Column{}, fmt.Errorf("%s: no column %q, there are: %s",
		t.Name, name, strings.Join(names, ", "))
}

// holds names the content of a column as messages do.
func (c Column) holds() string {
	var held []string
	if c.Float != nil {
		held = append(held, "numbers")
	}
	if c.Int != nil {
		held = append(held, "whole numbers")
	}
	if c.Text != nil {
		held = append(held, "texts")
	}
	if len(held) == 0 {
		return "nothing"
	}
	return strings.Join(held, " and ")
}
