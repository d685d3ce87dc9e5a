package table

import (
	"slices"
	"strconv"
	"strings"
)

// ShortNames are names of columns or input paths for figures, where the unit stands beside them:
// the fewest last parts that tell them apart, gas.pressure_Pa being "pressure".
func ShortNames(names []string) []string {
	short := make([]string, len(names))
	for i, name := range names {
		parts := strings.Split(withoutUnits(name), ".")
		for count := 1; count <= len(parts); count++ {
			short[i] = strings.ReplaceAll(strings.Join(parts[len(parts)-count:], " "), "_", " ")
			_, err := strconv.Atoi(parts[len(parts)-count])
			if err != nil && !slices.ContainsFunc(names, func(other string) bool {
				return other != name && strings.HasSuffix("."+withoutUnits(other),
					"."+strings.Join(parts[len(parts)-count:], "."))
			}) {
				break
			}
		}
	}
	return short
}

// ResultName is the name of a result for figures: ion_flux_m2ps.grounded.all is "ion flux,
// grounded".
func ResultName(name string) string {
	parts := strings.Split(withoutUnits(name), ".")
	if n := len(parts); n > 1 && (parts[n-1] == "all" || parts[n-1] == "total") {
		parts = parts[:n-1]
	}
	for i := range parts {
		parts[i] = strings.ReplaceAll(parts[i], "_", " ")
	}
	return strings.Join(parts, ", ")
}

// withoutUnits takes the units off the parts of a name.
func withoutUnits(name string) string {
	known := units()
	parts := strings.Split(strings.TrimSuffix(name, seSuffix), ".")
	for i, part := range parts {
		if k := strings.LastIndexByte(part, '_'); k > 0 {
			if _, ok := known[part[k+1:]]; ok {
				parts[i] = part[:k]
			}
		}
	}
	return strings.Join(parts, ".")
}
