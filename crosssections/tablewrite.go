package crosssections

import (
	"strconv"
	"strings"
)

// tableText is a table in the form that ReadTable reads, its numbers to the last bit. Notes stand
// on lines of their own, after that of the source.
func tableText(t *TableFile, notes ...string) []byte {
	var b strings.Builder
	head := func(key, value string) {
		if value = oneLine(value); value != "" {
			b.WriteString("# " + key + ": " + value + "\n")
		}
	}
	s := &t.Source
	head("what", t.What)
	head("reference", s.Citation)
	head("database", s.Database)
	head("date", s.Date)
	head("status", s.Status)
	head("frame", t.Frame.String())
	head("bib", s.Bib)
	if t.Table.ValidTo > 0 {
		head("valid_to_eV", digits(t.Table.ValidTo))
	}
	head("note", s.Note)
	for _, note := range notes {
		head("note", note)
	}
	b.WriteString(columnLine + "\n")
	for i, energy := range t.Table.Energy {
		b.WriteString(digits(energy) + "," + digits(t.Table.CrossSection[i]) + "\n")
	}
	return []byte(b.String())
}

// oneLine is the text with each run of blanks and line ends as one blank.
func oneLine(text string) string { return strings.Join(strings.Fields(text), " ") }

// digits is the number with as many digits as it takes to read back the same.
func digits(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// from is the table without what lies below the threshold: where the rows start lower, with a row
// at the threshold in their place. It says the same above, and is empty if nothing is left.
func (t *Table) from(threshold float64) Table {
	above := Table{ValidTo: t.ValidTo}
	plain := Table{Energy: t.Energy, CrossSection: t.CrossSection}
	if threshold > t.Max() {
		return above
	}
	if t.Energy[0] < threshold {
		above.Energy = []float64{threshold}
		above.CrossSection = []float64{plain.At(threshold)}
	}
	for i, energy := range t.Energy {
		if energy > threshold || energy == threshold && len(above.Energy) == 0 {
			above.Energy = append(above.Energy, energy)
			above.CrossSection = append(above.CrossSection, t.CrossSection[i])
		}
	}
	return above
}
