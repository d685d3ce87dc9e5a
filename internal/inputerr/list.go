package inputerr

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// maxPrinted is how many errors a List prints: more than a screen of them helps nobody.
const maxPrinted = 20

// List is every error of an input. It is an error itself; use Err to return one.
type List []*Error

// Err is the list as an error, or nil if it is empty.
func (l List) Err() error {
	if len(l) == 0 {
		return nil
	}
	return l
}

// Error prints one error a line in file order, the first 20 and then "and N more".
func (l List) Error() string {
	sorted := l.Sorted()
	var lines []string
	for _, e := range sorted[:min(len(sorted), maxPrinted)] {
		lines = append(lines, e.Error())
	}
	if more := len(sorted) - maxPrinted; more > 0 {
		lines = append(lines, fmt.Sprintf("and %d more", more))
	}
	return strings.Join(lines, "\n")
}

// Unwrap gives the single errors to errors.As and errors.Is.
func (l List) Unwrap() []error {
	errs := make([]error, len(l))
	for i, e := range l {
		errs[i] = e
	}
	return errs
}

// Sorted is a copy in file order: files in the order of their first error, then line and column.
// Errors at one place keep the order in which they were found.
func (l List) Sorted() List {
	rank := map[string]int{}
	for _, e := range l {
		if _, seen := rank[e.File]; !seen {
			rank[e.File] = len(rank)
		}
	}
	sorted := slices.Clone(l)
	slices.SortStableFunc(sorted, func(a, b *Error) int {
		return cmp.Or(
			cmp.Compare(rank[a.File], rank[b.File]),
			cmp.Compare(a.Line, b.Line),
			cmp.Compare(a.Col, b.Col),
		)
	})
	return sorted
}
