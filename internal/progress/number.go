package progress

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

const (
	// errorDigits is how many digits of an error are shown.
	errorDigits = 2
	// plainDigits is how many digits a value without an error has.
	plainDigits = 4
	// allDigits tell a float64 from its neighbours.
	allDigits = 17
	// Outside of these powers of ten a number is written with an exponent.
	plainBelow, plainFrom = 5, -3
)

// WithError is "value +- error" with two digits of the error and as many places of the value:
// 23.42 +- 0.12, (1.234 +- 0.056)e18. A value whose error is not known says so: 23.42, no error.
func WithError(value, se float64) string {
	switch {
	case math.IsNaN(value):
		return "not known"
	case math.IsInf(value, 0):
		return fmt.Sprint(value)
	case math.IsNaN(se) || math.IsInf(se, 0):
		return Digits(value, plainDigits) + ", no error"
	}
	se = math.Abs(se)
	if se == 0 {
		return Digits(value, plainDigits) + " +- 0"
	}
	// The last place that is shown is that of the error's second digit, after rounding.
	last := power(se, errorDigits) - errorDigits + 1
	shift := 0
	larger := math.Max(math.Abs(value), se)
	top := power(larger, max(1, power(larger, allDigits)-last+1))
	if top >= plainBelow || top < plainFrom || last > 0 {
		shift = top
	}
	places := max(0, shift-last)
	v, e := fixed(value, shift, places), fixed(se, shift, places)
	if shift == 0 {
		return v + " +- " + e
	}
	return fmt.Sprintf("(%s +- %s)e%d", v, e, shift)
}

// Digits is a value with n significant digits, with an exponent where it is very large or small.
func Digits(value float64, n int) string {
	if value == 0 || math.IsNaN(value) || math.IsInf(value, 0) {
		return fmt.Sprint(math.Abs(value) * sign(value))
	}
	top := power(value, n)
	if top >= plainBelow || top < plainFrom {
		return fixed(value, top, n-1) + "e" + strconv.Itoa(top)
	}
	return fixed(value, 0, max(0, n-1-top))
}

// sign is -1 or 1; a zero has none, so that it never prints as -0.
func sign(v float64) float64 {
	if v < 0 {
		return -1
	}
	return 1
}

// power is the power of ten of the leading digit of v, rounded to n digits.
func power(v float64, n int) int {
	if v == 0 {
		return 0
	}
	_, exponent, _ := strings.Cut(strconv.FormatFloat(v, 'e', n-1, 64), "e")
	p, err := strconv.Atoi(exponent)
	if err != nil {
		panic("progress: no exponent in a formatted number: " + err.Error())
	}
	return p
}

// fixed is v / 10^shift with that many decimal places. The shift is made in the decimal text: a
// division would round once more.
func fixed(v float64, shift, places int) string {
	if shift != 0 && v != 0 {
		mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(v, 'e', -1, 64), "e")
		p, err := strconv.Atoi(exponent)
		if err != nil {
			panic("progress: no exponent in a formatted number: " + err.Error())
		}
		shifted, err := strconv.ParseFloat(fmt.Sprintf("%se%d", mantissa, p-shift), 64)
		if err != nil {
			panic("progress: a number does not read back: " + err.Error())
		}
		v = shifted
	}
	text := strconv.FormatFloat(v, 'f', places, 64)
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-")
	}
	return text
}
