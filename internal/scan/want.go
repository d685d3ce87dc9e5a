package scan

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
)

// Want is a condition on a result: the path of the result, in its own unit, against a bound.
type Want struct {
	Path  string
	Above bool // the result is to be above the bound, else below
	Bound float64
}

// ParseWant reads "ion_mean_energy_eV.grounded.all < 25". The bound is in the unit of the result;
// < and <= mean the same for numbers with an error.
func ParseWant(text string) (Want, error) {
	form := regexp.MustCompile(`^\s*([^\s<>=]+)\s*(<=?|>=?)\s*(\S+)\s*$`)
	parts := form.FindStringSubmatch(text)
	bad := fmt.Errorf("got %q, want a condition such as %q", text,
		"ion_mean_energy_eV.grounded.all < 25")
	if parts == nil {
		return Want{}, bad
	}
	bound, err := strconv.ParseFloat(parts[3], 64)
	if err != nil || math.IsNaN(bound) || math.IsInf(bound, 0) {
		return Want{}, bad
	}
	return Want{Path: parts[1], Above: parts[2][0] == '>', Bound: bound}, nil
}

// String is the condition as it is written.
func (w Want) String() string {
	sign := "<"
	if w.Above {
		sign = ">"
	}
	return fmt.Sprintf("%s %s %g", w.Path, sign, w.Bound)
}

// Met reports whether a value meets the want.
func (w Want) Met(value float64) bool { return value > w.Bound == w.Above }
