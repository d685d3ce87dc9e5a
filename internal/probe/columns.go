package probe

import (
	"fmt"
	"strconv"
	"strings"
	"unicode"

	"ionfall/internal/inputerr"
)

// kindOfColumn is what a header may say.
type kindOfColumn struct {
	words []string           // in small letters
	units map[string]float64 // and their size in SI units
	list  string             // the units for a message
}

func voltageColumn() kindOfColumn {
	return kindOfColumn{
		[]string{
			"voltage", "v", "u", "bias", "potential", "probe_voltage", "probe voltage", "volt", "volts",
			"retarding_voltage", "retarding voltage", "tip_voltage", "tip voltage", "probe_bias",
			"probe bias",
		},
		map[string]float64{"V": 1, "mV": 1e-3, "kV": 1e3},
		"V, mV, kV",
	}
}

func currentColumn() kindOfColumn {
	return kindOfColumn{
		[]string{
			"current", "i", "probe_current", "probe current", "collector_current",
			"collector current", "tip_current", "tip current",
		},
		map[string]float64{
			"A": 1, "mA": 1e-3, "uA": 1e-6, "\u00b5A": 1e-6, "\u03bcA": 1e-6, "nA": 1e-9,
		},
		"A, mA, uA, nA",
	}
}

// chosenColumn is a column with its unit.
type chosenColumn struct {
	index int
	unit  string
	scale float64
}

// splitUnit takes "voltage_V", "voltage (V)", "voltage [V]" and "voltage/V" apart.
func splitUnit(header string) (word, unit string) {
	header = strings.TrimSpace(header)
	if i := strings.LastIndexAny(header, "_(["); i > 0 {
		unit = strings.TrimRightFunc(header[i+1:], func(r rune) bool {
			return strings.ContainsRune(")]", r) || unicode.IsSpace(r)
		})
		known := voltageColumn().units[unit]+currentColumn().units[unit] > 0
		if known || header[i] != '_' {
			return strings.TrimSpace(header[:i]), strings.TrimSpace(unit)
		}
	}
	if i := strings.LastIndexByte(header, '/'); i > 0 {
		return strings.TrimSpace(header[:i]), strings.TrimSpace(header[i+1:])
	}
	return header, ""
}

// named is the index of a column that the user named.
func (r *reader) named(key, name string) int {
	for i, h := range r.header {
		if h == name {
			return i
		}
	}
	hint := ""
	if near := inputerr.Nearest(name, r.header); near != "" {
		hint = fmt.Sprintf("did you mean %q?", near)
	}
	r.fail(r.headerLine, 1, key, "no column "+strconv.Quote(name),
		"one of "+quoteAll(r.header), hint)
	return -1
}

// column finds a column by the name that was given, or by the words of its kind.
func (r *reader) column(key, name, unit string, kind kindOfColumn) chosenColumn {
	var c chosenColumn
	if name != "" {
		if c.index = r.named(key, name); c.index < 0 {
			return c
		}
	} else {
		var found []int
		for i, h := range r.header {
			word, _ := splitUnit(h)
			for _, w := range kind.words {
				if strings.EqualFold(word, w) {
					found = append(found, i)
				}
			}
		}
		if len(found) != 1 {
			r.columnUnclear(key, found, kind)
			return c
		}
		c.index = found[0]
	}
	stated := unit
	if stated == "" {
		_, stated = splitUnit(r.header[c.index])
	}
	scale, ok := kind.units[stated]
	if !ok {
		got := "no unit"
		if stated != "" {
			got = "the unit " + strconv.Quote(stated)
		}
		r.fail(r.headerLine, c.index+1, key, got+" in "+strconv.Quote(r.header[c.index]),
			"one of "+kind.list, fmt.Sprintf("write the header as %s_%s, or give the unit", key,
				strings.SplitN(kind.list, ",", 2)[0]))
	}
	c.unit, c.scale = stated, scale
	return c
}

func (r *reader) columnUnclear(key string, found []int, kind kindOfColumn) {
	want := fmt.Sprintf("one column of the %s, such as %s_%s", key, key,
		strings.SplitN(kind.list, ",", 2)[0])
	got := "columns " + quoteAll(r.header)
	hint := "name the column if it is called otherwise"
	if r.numeric() {
		got, hint = "numbers, no header", "the first line names the columns and their units"
	}
	if len(found) > 1 {
		hint = "name the column that is meant"
	}
	r.fail(r.headerLine, 1, key, got, want, hint)
}

// numeric reports whether the header consists of numbers.
func (r *reader) numeric() bool {
	for _, h := range r.header {
		if _, err := strconv.ParseFloat(h, 64); err != nil {
			return false
		}
	}
	return len(r.header) > 0
}

func quoteAll(words []string) string {
	list := make([]string, len(words))
	for i, w := range words {
		list[i] = strconv.Quote(w)
	}
	return strings.Join(list, ", ")
}
