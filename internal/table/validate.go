package table

import (
	"errors"
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Validate checks the labels and the shape of the table and returns all that is wrong, at once.
func (t *Table) Validate() error {
	var errs []error
	report := func(format string, args ...any) {
		errs = append(errs, fmt.Errorf("table %q: "+format, append([]any{t.Name}, args...)...))
	}
	if !fileName(t.Name) {
		report("name: want letters, digits and _")
	}
	if len(t.Columns) == 0 {
		report("no columns, want at least one")
	}
	seen := map[string]bool{}
	for _, c := range t.Columns {
		if seen[c.Name] {
			report("column %q stands twice", c.Name)
		}
		seen[c.Name] = true
		if c.Len() != t.Rows() {
			report("column %q has %d rows, %q has %d: want equal lengths",
				c.Name, c.Len(), t.Columns[0].Name, t.Rows())
		}
		for _, err := range c.check() {
			report("column %q: %w", c.Name, err)
		}
		if err := t.checkError(c); err != nil {
			report("column %q: %w", c.Name, err)
		}
	}
	return errors.Join(errs...)
}

// check returns what is wrong with a column by itself.
func (c Column) check() []error {
	var errs []error
	if !columnName(c.Name) {
		errs = append(errs, errors.New("name is empty or holds spaces or control characters"))
	}
	if held := c.holds(); held == "nothing" || strings.Contains(held, " and ") {
		errs = append(errs, fmt.Errorf("holds %s, want one of numbers, whole numbers, texts", held))
	}
	if c.Doc == "" {
		errs = append(errs, errors.New("no doc: say what it is"))
	}
	if err := c.checkUnit(); err != nil {
		errs = append(errs, err)
	}
	for i, s := range c.Text {
		if !utf8.ValidString(s) {
			errs = append(errs, fmt.Errorf("row %d: %q is not UTF-8", i, s))
			break
		}
	}
	return errs
}

// checkUnit compares the unit with the one that the name states.
func (c Column) checkUnit() error {
	stated := statedUnits(c.Name)
	switch {
	case c.Unit != "" && c.Text != nil:
		return fmt.Errorf("texts with the unit %q, want none", c.Unit)
	case c.Unit != "" && !knownUnit(c.Unit):
		return fmt.Errorf("unit %q is not on the list of units", c.Unit)
	case len(stated) > 1:
		return fmt.Errorf("name states the units %q, want one", stated)
	case c.Unit == "" && len(stated) == 1 && c.Text == nil:
		return fmt.Errorf("name states the unit %q, the column has none", stated[0])
	case c.Unit != "" && len(stated) == 0:
		return fmt.Errorf("name does not end in a unit, the column has %q", c.Unit)
	case c.Unit != "" && !means(stated[0], c.Unit):
		return fmt.Errorf("name states the unit %q, the column has %q", stated[0], c.Unit)
	}
	return nil
}

// checkError compares a standard error with the column it belongs to.
func (t *Table) checkError(c Column) error {
	base, isError := strings.CutSuffix(c.Name, seSuffix)
	if !isError || base == "" {
		return nil
	}
	of, ok := t.Column(base)
	switch {
	case !ok:
		return fmt.Errorf("standard error without its column %q", base)
	case c.Float == nil || of.Float == nil && of.Int == nil:
		return fmt.Errorf("a standard error and %q must be numbers", base)
	case of.Unit != c.Unit:
		return fmt.Errorf("unit %q, but %q has %q", c.Unit, base, of.Unit)
	}
	return nil
}

func fileName(s string) bool {
	for _, r := range s {
		if r != '_' && (r > unicode.MaxASCII || !unicode.IsLetter(r) && !unicode.IsDigit(r)) {
			return false
		}
	}
	return s != ""
}

func columnName(s string) bool {
	for _, r := range s {
		if unicode.IsSpace(r) || !unicode.IsPrint(r) {
			return false
		}
	}
	return s != ""
}
