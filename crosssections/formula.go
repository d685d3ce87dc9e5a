package crosssections

import (
	"maps"
	"slices"
	"strconv"
	"strings"

	"ionfall/internal/phys"
)

// composition is the atoms of a particle by name, "SiH3+" being one Si and three H. Excited
// states in brackets and a star do not count. A name that is no formula is an atom of its own
// kind, so that a gas under a name of fancy balances with its own ions.
func composition(name string) map[string]int {
	plain := plainName(name)
	if name == ElectronName || plain == "" {
		return map[string]int{}
	}
	atoms := map[string]int{}
	for rest := plain; rest != ""; {
		n := elementLength(rest)
		if n == 0 {
			return map[string]int{plain: 1}
		}
		element := rest[:n]
		rest = rest[n:]
		count := 0
		for rest != "" && rest[0] >= '0' && rest[0] <= '9' && count < 1000 {
			count = 10*count + int(rest[0]-'0')
			rest = rest[1:]
		}
		atoms[element] += max(1, count)
	}
	return atoms
}

// plainName is the name without charge, state and star.
func plainName(name string) string {
	name = strings.TrimRight(name, "+-")
	if i := strings.IndexByte(name, '('); i > 0 && strings.HasSuffix(name, ")") {
		name = name[:i]
	}
	return strings.TrimRight(name, "*")
}

// elementLength is the length of the symbol of an element at the start, 0 if there is none.
func elementLength(text string) int {
	switch {
	case text[0] < 'A' || text[0] > 'Z':
		return 0
	case len(text) > 1 && text[1] >= 'a' && text[1] <= 'z':
		return 2
	}
	return 1
}

// formulaMass is the mass of a particle from standard atomic weights [kg]; false for a name that
// is no formula of the elements listed.
//
// Ref: abridged standard atomic weights, T. Prohaska et al., Pure Appl. Chem. 94, 573 (2022) (from
// memory).
func formulaMass(name string) (float64, bool) {
	if name == ElectronName {
		return phys.ElectronMass, true
	}
	sum := 0.0
	atoms := composition(name)
	for _, element := range slices.Sorted(maps.Keys(atoms)) {
		weight, known := atomicWeight(element)
		if !known {
			return 0, false
		}
		sum += float64(atoms[element]) * weight
	}
	return sum*phys.AtomicMass - float64(chargeOf(name))*phys.ElectronMass, sum > 0
}

// atomicWeight is the weight of an element [u].
func atomicWeight(element string) (float64, bool) {
	switch element {
	case "H":
		return 1.008, true
	case "D":
		return 2.0141, true
	case "He":
		return 4.0026, true
	case "B":
		return 10.81, true
	case "C":
		return 12.011, true
	case "N":
		return 14.007, true
	case "O":
		return 15.999, true
	case "F":
		return 18.998, true
	case "Ne":
		return 20.180, true
	case "Al":
		return 26.982, true
	case "Si":
		return 28.085, true
	case "P":
		return 30.974, true
	case "S":
		return 32.06, true
	case "Cl":
		return 35.45, true
	case "Ar":
		return 39.948, true
	case "Ti":
		return 47.867, true
	case "Ge":
		return 72.630, true
	case "As":
		return 74.922, true
	case "Kr":
		return 83.798, true
	case "Xe":
		return 131.29, true
	}
	return 0, false
}

// imbalance compares the atoms on both sides of a process: what is too much or missing among the
// products, "" if nothing is. It judges formulas of known elements only, not names of fancy.
func imbalance(reactants, products []string) string {
	for _, name := range slices.Concat(reactants, products) {
		if _, known := formulaMass(name); !known {
			return ""
		}
	}
	sum := map[string]int{}
	for _, name := range products {
		for element, n := range composition(name) {
			sum[element] += n
		}
	}
	for _, name := range reactants {
		for element, n := range composition(name) {
			sum[element] -= n
		}
	}
	var tooMany, missing []string
	for _, element := range slices.Sorted(maps.Keys(sum)) {
		switch n := sum[element]; {
		case n > 0:
			tooMany = append(tooMany, atomsText(n, element))
		case n < 0:
			missing = append(missing, atomsText(-n, element))
		}
	}
	var parts []string
	if len(tooMany) > 0 {
		parts = append(parts, strings.Join(tooMany, ", ")+" too many")
	}
	if len(missing) > 0 {
		parts = append(parts, strings.Join(missing, ", ")+" missing")
	}
	return strings.Join(parts, ", ")
}

// restOf is a particle of the atoms that are missing among the products, "" if there are others
// too many.
func restOf(reactants, products []string) string {
	left := map[string]int{}
	for _, name := range reactants {
		for element, n := range composition(name) {
			left[element] += n
		}
	}
	for _, name := range products {
		for element, n := range composition(name) {
			left[element] -= n
		}
	}
	rest := ""
	for _, element := range slices.Sorted(maps.Keys(left)) {
		switch n := left[element]; {
		case n < 0:
			return ""
		case n == 1:
			rest += element
		case n > 1:
			rest += element + strconv.Itoa(n)
		}
	}
	return rest
}

func atomsText(n int, element string) string {
	return strings.TrimPrefix(strconv.Itoa(n)+" "+element, "1 ")
}
