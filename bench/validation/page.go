package main

import (
	"bytes"
	"fmt"
	"strings"

	"ionfall/internal/validation"
)

const intro = `# Validation

Written by !go run ./bench/validation -write! from the rows in !testdata/validation!, which the
named tests make. Rows that fail stay, with the cause in their note where it is known.

* **reference** and **ours** are value ± standard error; a value without ± has no statistical
  error.
* The status of a source is in brackets after it: *exact* (follows from theory or a definition),
  *computed* (by an independent program, or by this one with other numerics, as the source says),
  *read* (taken from the publication) or *memory* (recalled, not yet checked against it).
* **deviation** is in joint standard errors (sigma) and as a part of the reference; **limit** says
  which of them decides.
`

// tally counts rows.
type tally struct{ rows, failing, sources int }

func count(rows []validation.Row) tally {
	t := tally{rows: len(rows)}
	sources := map[string]bool{}
	for _, r := range rows {
		sources[r.Source] = true
		if !r.Pass {
			t.failing++
		}
	}
	t.sources = len(sources)
	return t
}

// render makes the page: an overview, then every part with its tables.
func render(list []part) []byte {
	var b bytes.Buffer
	var all []validation.Row
	for _, p := range list {
		all = append(all, p.rows...)
	}
	total := count(all)
	fmt.Fprintf(&b, "%s\n%d rows from %d sources, %d failing.\n\n",
		strings.ReplaceAll(intro, "!", "`"), total.rows,
		total.sources, total.failing)
	b.WriteString("| part | rows | sources | failing | takes |\n|---|---|---|---|---|\n")
	for _, p := range list {
		t := count(p.rows)
		fmt.Fprintf(&b, "| [%s](#%s) | %d | %d | %d | %s |\n", p.title, anchor(p.title), t.rows,
			t.sources, t.failing, p.takes)
	}
	for _, p := range list {
		t := count(p.rows)
		fmt.Fprintf(&b, "\n## %s\n\n%s\n\nRows: %d, sources: %d, failing: %d. To repeat (%s):\n\n"+
			"    %s\n\n", p.title, p.about, t.rows, t.sources, t.failing, p.takes, p.repeat())
		// Its sections go one level down.
		b.Write(bytes.ReplaceAll(validation.Markdown(p.rows), []byte("\n## "), []byte("\n### ")))
	}
	return b.Bytes()
}

// anchor is what renderers make of a heading: lower case, hyphens for spaces, only letters and
// digits besides.
func anchor(title string) string {
	return strings.Map(func(c rune) rune {
		switch {
		case c == ' ' || c == '-':
			return '-'
		case c >= 'a' && c <= 'z' || c >= '0' && c <= '9':
			return c
		}
		return -1
	}, strings.ToLower(title))
}
