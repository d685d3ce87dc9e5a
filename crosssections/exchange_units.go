package crosssections

import (
	"errors"
	"regexp"
	"strconv"
	"strings"

	"ionfall/internal/phys"
)

// units are the factors from the columns of a file to eV and m2.
type units struct{ energy, area float64 }

// unitInBrackets is a unit as it stands in a list of columns: "Energy (eV)".
var unitInBrackets = regexp.MustCompile(`\(([^()]*)\)`)

// parseUnits reads a list of columns such as "Energy (eV) | Cross section (m2)". A list without
// brackets means eV and m2.
func parseUnits(columns string) (units, error) {
	found := unitInBrackets.FindAllStringSubmatch(columns, -1)
	if len(found) == 0 {
		return units{1, 1}, nil
	}
	if len(found) != 2 {
		return units{}, errors.New("two columns with a unit each, as in " +
			"\"Energy (eV) | Cross section (m2)\"")
	}
	var u units
	switch strings.TrimSpace(found[0][1]) {
	case "eV":
		u.energy = 1
	case "keV":
		u.energy = 1e3
	case "J":
		u.energy = 1 / phys.ElementaryCharge
	default:
		return units{}, errors.New("energies in eV, keV or J")
	}
	area, ok := areaUnit(found[1][1])
	if !ok {
		return units{}, errors.New("cross sections in m2 or cm2, with or without a power of ten " +
			"as in 1e-20 m2")
	}
	u.area = area
	return u, nil
}

// areaUnit is the area in m2 of a unit such as "m2", "cm^2", "10^-20 m2" or "1e-16cm2".
func areaUnit(text string) (float64, bool) {
	text = strings.NewReplacer(" ", "", "^", "", "*", "").Replace(text)
	scale := 1.0
	for _, unit := range []struct {
		name string
		area float64
	}{{"cm2", 1e-4}, {"m2", 1}} {
		factor, found := strings.CutSuffix(text, unit.name)
		if !found {
			continue
		}
		if power, ten := strings.CutPrefix(factor, "10-"); ten {
			factor = "1e-" + power
		}
		if factor != "" {
			v, err := strconv.ParseFloat(factor, 64)
			if err != nil || !(v > 0 && v <= 1) {
				return 0, false
			}
			scale = v
		}
		return scale * unit.area, true
	}
	return 0, false
}

// rowNumbers are the two numbers of a line of a table, if it holds nothing else.
func rowNumbers(text string) ([]float64, bool) {
	values, ok := numbers(text, 2)
	return values, ok && len(fields(text)) == 2
}

func fields(text string) []string {
	return strings.FieldsFunc(text, func(r rune) bool {
		return r == ' ' || r == '\t' || r == ',' || r == ';'
	})
}

// numbers are the first n fields of a line, if they are numbers; words may follow.
func numbers(text string, n int) ([]float64, bool) {
	list := fields(text)
	if len(list) < n {
		return nil, false
	}
	values := make([]float64, n)
	for i := range values {
		v, err := strconv.ParseFloat(list[i], 64)
		if err != nil {
			return nil, false
		}
		values[i] = v
	}
	return values, true
}

// isDashes tells whether a line opens or closes a table.
func isDashes(text string) bool {
	return len(text) >= 5 && strings.Trim(text, "-") == ""
}
