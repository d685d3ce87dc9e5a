package config

import (
	"math"
	"math/big"
	"strconv"
	"strings"
)

// splitNumber cuts a decimal number (sign, digits, point, exponent) off the front of text. The
// number is empty if text does not start with one; hexadecimal, "inf" and "nan" are none.
func splitNumber(text string) (number, rest string) {
	i := 0
	if i < len(text) && (text[i] == '+' || text[i] == '-') {
		i++
	}
	whole := countDigits(text[i:])
	i += whole
	fraction := 0
	if i < len(text) && text[i] == '.' {
		if fraction = countDigits(text[i+1:]); whole+fraction > 0 {
			i += 1 + fraction
		}
	}
	if whole+fraction == 0 {
		return "", text
	}
	return text[:i+exponentLength(text[i:])], text[i+exponentLength(text[i:]):]
}

// exponentLength is the length of an exponent at the front of text: none in "eV".
func exponentLength(text string) int {
	if text == "" || (text[0] != 'e' && text[0] != 'E') {
		return 0
	}
	i := 1
	if i < len(text) && (text[i] == '+' || text[i] == '-') {
		i++
	}
	digits := countDigits(text[i:])
	if digits == 0 {
		return 0
	}
	return i + digits
}

func countDigits(text string) int {
	for i := range len(text) {
		if text[i] < '0' || text[i] > '9' {
			return i
		}
	}
	return len(text)
}

// exact is the value of a number that splitNumber returned, or what is wrong with it. Numbers are
// kept exact until the unit is applied, so that "13.56 MHz" is 13560000 Hz and not the nearest
// double to 13.56, times 1e6.
func exact(number string) (*big.Rat, string) {
	if len(number) > maxQuantity {
		return nil, "a number of at most 64 characters"
	}
	// The double comes first: it bounds the exponent, and so the work of the exact conversion.
	f, err := strconv.ParseFloat(number, 64)
	if err != nil {
		return nil, "a number below 1e308"
	}
	mantissa, _, _ := strings.Cut(strings.ToLower(number), "e")
	if !strings.ContainsAny(mantissa, "123456789") {
		return new(big.Rat), ""
	}
	if f == 0 {
		return nil, "0 or a number above 1e-308"
	}
	r, ok := new(big.Rat).SetString(number)
	if !ok {
		return nil, "a decimal number"
	}
	return r, ""
}

// toFloat is the double nearest to r, or what is wrong with it.
func toFloat(r *big.Rat) (float64, string) {
	f, _ := r.Float64()
	if math.IsInf(f, 0) {
		return 0, "a number below 1e308"
	}
	if f == 0 && r.Sign() != 0 {
		return 0, "0 or a number above 1e-308"
	}
	return f, ""
}

// asWritten is the shortest decimal that reads as f, as an exact number: 0.1 is one tenth. It is
// nil if f is not finite.
func asWritten(f float64) *big.Rat {
	r, ok := new(big.Rat).SetString(strconv.FormatFloat(f, 'e', -1, 64))
	if !ok {
		return nil
	}
	return r
}

// formatFloat is the shortest decimal that reads as f, without exponent where that is readable.
func formatFloat(f float64) string {
	if a := math.Abs(f); a == 0 || (a >= 1e-4 && a < 1e9) {
		return strconv.FormatFloat(f, 'f', -1, 64)
	}
	return strconv.FormatFloat(f, 'e', -1, 64)
}
