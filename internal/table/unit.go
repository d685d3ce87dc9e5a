package table

import "strings"

// units pairs the suffix that a unit has in names with the way people write it.
func units() map[string]string {
	return map[string]string{
		"m": "m", "s": "s", "kg": "kg", "K": "K", "Pa": "Pa", "Hz": "Hz",
		"V": "V", "A": "A", "W": "W", "J": "J", "C": "C", "F": "F", "Ohm": "Ohm", "H": "H",
		"eV": "eV", "deg": "deg", "rad": "rad",
		"Vpm": "V/m", "mps": "m/s", "ps": "1/s",
		"pm2": "1/m2", "m3": "1/m3", "Cpm2": "C/m2", "Cpm3": "C/m3",
		"Apm2": "A/m2", "Wpm2": "W/m2", "Wpm3": "W/m3", "Jpm2": "J/m2",
		"m2ps": "1/(m2 s)", "m3ps": "1/(m3 s)",
		"m2pseV": "1/(m2 s eV)", "m2pseVdeg": "1/(m2 s eV deg)",
		"eVm32": "eV^-3/2",
		"Ohmm2": "Ohm m2", "Td": "Td", "m2": "m2", "pmps": "1/(m s)", "cm2pVps": "cm2/(V s)",
	}
}

// rateCoefficient is what the suffix m3ps means where it is no rate in a volume; the unit of the
// column tells which.
const rateCoefficient = "m3/s"

// means reports whether a name that states the one unit may belong to a column with the other.
func means(stated, unit string) bool {
	return stated == unit || stated == units()["m3ps"] && unit == rateCoefficient
}

// UnitOf returns the unit that the name of a column or a result states, "" when it states none.
func UnitOf(name string) string {
	found := statedUnits(name)
	if len(found) == 0 {
		return ""
	}
	return found[0]
}

// statedUnits returns the units that end the dotted parts of a name.
func statedUnits(name string) []string {
	known := units()
	var found []string
	for part := range strings.SplitSeq(strings.TrimSuffix(name, seSuffix), ".") {
		i := strings.LastIndexByte(part, '_')
		if i <= 0 {
			continue
		}
		if unit, ok := known[part[i+1:]]; ok {
			found = append(found, unit)
		}
	}
	return found
}

// knownUnit reports whether unit is on the list, as people write it.
func knownUnit(unit string) bool {
	for _, u := range units() {
		if u == unit {
			return true
		}
	}
	return unit == rateCoefficient
}
