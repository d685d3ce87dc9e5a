package validation

import (
	"cmp"
	"math"
	"slices"
	"strings"
)

// LimitKind says what a row's limit bounds.
type LimitKind string

const (
	// Sigma bounds the deviation in joint standard errors of both values.
	Sigma LimitKind = "sigma"
	// Relative bounds the deviation as a part of the reference.
	Relative LimitKind = "relative"
	// Absolute bounds the deviation in the unit of the row.
	Absolute LimitKind = "absolute"
)

// Row is one comparison.
type Row struct {
	Section        string    `json:"section"`         // what was compared: a model, a gas
	Quantity       string    `json:"quantity"`        // unique within the section
	Unit           string    `json:"unit"`            // of the values; empty for a pure number
	Reference      float64   `json:"reference"`       // value to compare with
	ReferenceError float64   `json:"reference_error"` // its standard error; 0 if exact
	Source         string    `json:"source"`          // of the reference
	Status         string    `json:"status"`          // exact, computed, read or memory
	Ours           float64   `json:"ours"`            // value of this program
	OursError      float64   `json:"ours_error"`      // its standard error
	Limit          float64   `json:"limit"`           // largest deviation that passes
	LimitKind      LimitKind `json:"limit_kind"`      // what Limit bounds
	Deviation      float64   `json:"deviation"`       // in joint standard errors, with its sign
	Relative       float64   `json:"relative"`        // (ours - reference)/reference
	Pass           bool      `json:"pass"`            // the deviation is within the limit
	Seed           uint64    `json:"seed"`            // of the random numbers
	Note           string    `json:"note,omitempty"`  // what else the reader should know
}

// Judged returns the row with its deviations and the verdict. A value that is no number, or
// lacks the error that its limit needs, does not pass.
func (r Row) Judged() Row {
	difference := r.Ours - r.Reference
	r.Deviation = difference / math.Hypot(r.OursError, r.ReferenceError)
	r.Relative = difference / math.Abs(r.Reference)
	var measure float64
	switch r.LimitKind {
	case Sigma:
		measure = r.Deviation
	case Relative:
		measure = r.Relative
	case Absolute:
		measure = difference
	default:
		measure = math.NaN()
	}
	r.Pass = math.Abs(measure) <= r.Limit
	// JSON knows no such numbers: a deviation without errors or reference is left out as zero.
	r.Deviation, r.Relative = finite(r.Deviation), finite(r.Relative)
	return r
}

func finite(x float64) float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return 0
	}
	return x
}

// sorted orders rows by section and quantity, numbers within them by their value.
func sorted(rows []Row) []Row {
	rows = slices.Clone(rows)
	slices.SortStableFunc(rows, func(a, b Row) int {
		return cmp.Or(natural(a.Section, b.Section), natural(a.Quantity, b.Quantity))
	})
	return rows
}

// natural compares texts so that "5 Td" comes before "10 Td".
func natural(a, b string) int {
	for a != "" && b != "" {
		na, nb := digits(a), digits(b)
		if na > 0 && nb > 0 {
			x, y := strings.TrimLeft(a[:na], "0"), strings.TrimLeft(b[:nb], "0")
			if c := cmp.Or(cmp.Compare(len(x), len(y)), cmp.Compare(x, y)); c != 0 {
				return c
			}
			a, b = a[na:], b[nb:]
			continue
		}
		if a[0] != b[0] {
			return cmp.Compare(a[0], b[0])
		}
		a, b = a[1:], b[1:]
	}
	return cmp.Compare(len(a), len(b))
}

// digits counts the digits at the start of a text.
func digits(s string) int {
	n := 0
	for n < len(s) && s[n] >= '0' && s[n] <= '9' {
		n++
	}
	return n
}
