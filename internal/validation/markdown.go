package validation

import (
	"bytes"
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Text is the row in one line.
func (r Row) Text() string {
	verdict := "pass"
	if !r.Pass {
		verdict = "FAIL"
	}
	return fmt.Sprintf("%s: %s, %s: %s, want %s %s (%s; %+.1f sigma, %+.2f %%; limit %s)", verdict,
		r.Section, r.Quantity, withError(r.Ours, r.OursError),
		withError(r.Reference, r.ReferenceError), r.Unit, r.Status, r.Deviation, 100*r.Relative,
		r.limit())
}

// Markdown renders the rows as one table a section, sections and quantities sorted. A summary
// line opens the page, and the rows that failed are named first.
func Markdown(rows []Row) []byte {
	var b bytes.Buffer
	passed := 0
	var failed []Row
	rows = sorted(rows)
	for _, r := range rows {
		if r.Pass {
			passed++
		} else {
			failed = append(failed, r)
		}
	}
	fmt.Fprintf(&b, "%d of %d comparisons pass.\n", passed, len(rows))
	if len(failed) > 0 {
		b.WriteString("\nFailing:\n\n")
		for _, r := range failed {
			fmt.Fprintf(&b, "* %s, %s\n", cell(r.Section), cell(r.Quantity))
		}
	}
	section := ""
	for _, r := range rows {
		if r.Section != section {
			section = r.Section
			fmt.Fprintf(&b, "\n## %s\n\n", cell(section))
			b.WriteString("| quantity | unit | reference | source | ours | deviation | limit " +
				"| pass | seed | note |\n|---|---|---|---|---|---|---|---|---|---|\n")
		}
		b.WriteString(r.markdown())
	}
	return b.Bytes()
}

func (r Row) markdown() string {
	verdict := "yes"
	if !r.Pass {
		verdict = "**no**"
	}
	deviation := fmt.Sprintf("%+.2g %%", 100*r.Relative)
	if r.OursError > 0 || r.ReferenceError > 0 {
		deviation = fmt.Sprintf("%+.1f sigma, %s", r.Deviation, deviation)
	}
	cells := []string{
		r.Quantity, r.Unit, withError(r.Reference, r.ReferenceError),
		r.Source + " (" + r.Status + ")", withError(r.Ours, r.OursError), deviation, r.limit(),
		verdict, strconv.FormatUint(r.Seed, 10), r.Note,
	}
	for i := range cells {
		cells[i] = cell(cells[i])
	}
	return "| " + strings.Join(cells, " | ") + " |\n"
}

func (r Row) limit() string {
	switch r.LimitKind {
	case Sigma:
		return fmt.Sprintf("%g sigma", r.Limit)
	case Relative:
		return fmt.Sprintf("%g %%", 100*r.Limit)
	default:
		return strings.TrimSpace(fmt.Sprintf("%g %s", r.Limit, r.Unit))
	}
}

// cell keeps text from ending a cell or a row of a table.
func cell(text string) string {
	return strings.NewReplacer("|", `\|`, "\n", " ").Replace(text)
}

// withError prints a value with its standard error, to the second digit of the error.
func withError(value, stdErr float64) string {
	if stdErr == 0 || math.IsNaN(stdErr) || math.IsInf(stdErr, 0) || value == 0 {
		return fmt.Sprintf("%.5g", value)
	}
	lead := math.Floor(math.Log10(math.Abs(value)))
	digits := int(lead-math.Floor(math.Log10(stdErr))) + 1
	digits = min(max(digits, 0), 9)
	if lead < -3 || lead > 5 {
		scale := math.Pow(10, lead)
		return fmt.Sprintf("(%.*f ± %.*f)e%+d", digits, value/scale, digits, stdErr/scale, int(lead))
	}
	digits = max(digits-int(lead), 0)
	return fmt.Sprintf("%.*f ± %.*f", digits, value, digits, stdErr)
}
