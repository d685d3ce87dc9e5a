package config

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"

	"ionfall/internal/inputerr"
)

// gapChars may stand between number and unit: blank, tab and the fixed blanks of typesetting
// (U+00A0, U+2009, U+202F).
const gapChars = " \t\u00a0\u2009\u202f"

// fault is what is wrong with a text: what was wanted instead, and a hint.
type fault struct{ want, hint string }

// parse reads a number with a unit of the dimension; the value is in the dimension's first unit
// (for a ratio: 1).
func (d dimension) parse(text string) (float64, *fault) {
	number, rest := splitNumber(text)
	if number == "" {
		return 0, &fault{want: d.wanted(), hint: numberHint(text)}
	}
	name := strings.TrimLeft(rest, gapChars)
	if name == "" {
		return 0, &fault{want: d.wanted()}
	}
	u, known := d.find(name)
	if !known {
		return 0, &fault{d.wanted(), d.unitHint(name)}
	}
	r, want := exact(number)
	if r == nil {
		return 0, &fault{want: want}
	}
	f, want := toFloat(u.apply(r))
	if want != "" {
		return 0, &fault{want: want}
	}
	return f, nil
}

// wanted is "a pressure such as 5 Pa (units: Pa, ...)".
func (d dimension) wanted() string {
	return fmt.Sprintf("%s such as %s (units: %s)", d.name, d.example, d.names())
}

// apply is r * scale / per + offset, exactly.
func (u unit) apply(r *big.Rat) *big.Rat {
	r = new(big.Rat).Mul(r, constant(u.scale, 1))
	r.Quo(r, constant(u.per, 1))
	return r.Add(r, constant(u.offset, 0))
}

// constant is a number of the unit tables, or its default if it is left out.
func constant(text string, absent int64) *big.Rat {
	if text == "" {
		return big.NewRat(absent, 1)
	}
	r, ok := new(big.Rat).SetString(text)
	if !ok {
		panic("config: bad number in the unit table: " + text)
	}
	return r
}

// numberHint names the usual reasons why a text does not start with a number.
func numberHint(text string) string {
	lower := strings.ToLower(strings.TrimLeft(text, "+-."))
	if strings.HasPrefix(lower, "nan") || strings.HasPrefix(lower, "inf") {
		return "the number must be finite"
	}
	return ""
}

// unitHint says which unit was probably meant.
func (d dimension) unitHint(name string) string {
	if strings.HasPrefix(name, ",") {
		return "the decimal mark is a point"
	}
	if name[0] == 'x' || name[0] == 'X' || name[0] == '_' {
		return "numbers are decimal digits, such as 1500 or 1.5e3"
	}
	if alike := d.alike(name); len(alike) > 0 {
		return "did you mean " + strings.Join(alike, " or ") + "?"
	}
	for _, other := range dimensions() {
		if _, ok := other.find(name); ok {
			return fmt.Sprintf("%s measures %s", name, other.name)
		}
	}
	if near := inputerr.Nearest(name, d.spellings()); near != "" {
		return fmt.Sprintf("did you mean %q?", near)
	}
	return ""
}

// alike are the units, quoted, that differ from name only in case, or whose full name it is.
func (d dimension) alike(name string) []string {
	var alike []string
	for _, u := range d.units {
		for _, s := range append(append([]string{u.name}, u.also...), u.words...) {
			if strings.EqualFold(s, name) {
				alike = append(alike, strconv.Quote(u.name))
				break
			}
		}
	}
	return alike
}

// format writes a value so that parse gives the same bits back.
func (d dimension) format(f float64) string {
	base := d.units[0]
	if base.scale == "" {
		return formatFloat(f) + " " + base.name
	}
	return percent(f) + " " + base.name
}

// percent is 100 f, such that a hundredth of it is f to the last bit.
func percent(f float64) string {
	if g := f * 100; !math.IsInf(g, 0) {
		short := strconv.FormatFloat(g, 'g', 15, 64)
		if v, bad := ratio().parse(short + "%"); bad == nil && v == f {
			return short
		}
	}
	mantissa, exponent, found := strings.Cut(strconv.FormatFloat(f, 'e', -1, 64), "e")
	e, err := strconv.Atoi(exponent)
	if !found || err != nil {
		return mantissa // not finite: parse will refuse it
	}
	return fmt.Sprintf("%se%d", mantissa, e+2)
}
