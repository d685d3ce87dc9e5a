package progress

import (
	"math"
	"strconv"
	"strings"
	"testing"
	"time"
)

// Goal: two digits of the error, and the value to the same place. Method: texts written by hand,
// with the roundings that carry into another digit.
func TestWithError(t *testing.T) {
	nan := math.NaN()
	for _, c := range []struct {
		value, se float64
		want      string
	}{
		{23.4187, 0.1234, "23.42 +- 0.12"},
		{23.4187, 0.0996, "23.42 +- 0.10"},
		{23.4187, 0.00996, "23.419 +- 0.010"},
		{-23.4187, 1.5, "-23.4 +- 1.5"},
		{23.4, 12.3, "23 +- 12"},
		{0.3, 12.3, "0 +- 12"},
		{-0.3, 12.3, "0 +- 12"},
		{99.96, 0.31, "99.96 +- 0.31"},
		{0, 0.02, "0.000 +- 0.020"},
		{1234, 56, "1234 +- 56"},
		{1234, 560, "(1.23 +- 0.56)e3"},
		{1.2345e18, 2.34e15, "(1.2345 +- 0.0023)e18"},
		{99960, 30, "99960 +- 30"},
		{99999.7, 30, "(1.00000 +- 0.00030)e5"},
		{9.9999e17, 3e14, "(9.9999 +- 0.0030)e17"},
		{9.99999e17, 3e14, "(1.00000 +- 0.00030)e18"},
		{3.4e-5, 2e-6, "(3.40 +- 0.20)e-5"},
		{2e14, 3e15, "(0.2 +- 3.0)e15"},
		{23.4187, nan, "23.42, no error"},
		{1.2345e18, nan, "1.234e18, no error"},
		{23.4187, math.Inf(1), "23.42, no error"},
		{0, 0, "0 +- 0"},
		{5, 0, "5.000 +- 0"},
		{nan, nan, "not known"},
		{nan, 1, "not known"},
		{math.Inf(1), 1, "+Inf"},
	} {
		if got := WithError(c.value, c.se); got != c.want {
			t.Errorf("%g, %g: got %q, want %q", c.value, c.se, got, c.want)
		}
	}
}

// Goal: what is shown is the value, to half a unit of the last place shown. Method: many sizes of
// value and error, read back.
func TestWithErrorReadsBack(t *testing.T) {
	for value := 1.2345678e-30; value < 1e30; value *= 7.7 {
		for _, relative := range []float64{1e-9, 1e-4, 0.0123, 0.096, 0.0999, 1, 9.99, 130} {
			se := value * relative
			text := WithError(value, se)
			v, e := parse(t, text)
			unit := math.Pow(10, math.Floor(math.Log10(se))-1) // of the second digit
			if math.Abs(v-value) > 0.51*10*unit || math.Abs(e-se) > 0.051*se {
				t.Fatalf("%g +- %g: got %s, read back as %g +- %g", value, se, text, v, e)
			}
		}
	}
}

func parse(t *testing.T, text string) (value, se float64) {
	t.Helper()
	exponent := ""
	if inner, ok := strings.CutPrefix(text, "("); ok {
		text, exponent, _ = strings.Cut(inner, ")")
	}
	left, right, _ := strings.Cut(text, " +- ")
	value, err := strconv.ParseFloat(left+exponent, 64)
	if err != nil {
		t.Fatal(err)
	}
	se, err = strconv.ParseFloat(right+exponent, 64)
	if err != nil {
		t.Fatal(err)
	}
	return value, se
}

// Goal: short numbers and times. Method: texts written by hand around every change of unit.
func TestShortForms(t *testing.T) {
	for n, want := range map[int64]string{
		0: "0", 999: "999", 1000: "1.00k", 12345: "12.3k", 999499: "999k", 999999: "1.00M",
		58_600_000: "58.6M", 3_000_000_000: "3.00G", 5_000_000_000_000: "5000G", -5: "-5",
	} {
		if got := Count(n); got != want {
			t.Errorf("Count(%d): got %q, want %q", n, got, want)
		}
	}
	for d, want := range map[time.Duration]string{
		0: "0 s", 230 * time.Millisecond: "0.2 s", 40 * time.Second: "40 s",
		59*time.Second + 700*time.Millisecond: "1 min", 200 * time.Second: "3 min 20 s",
		time.Hour - time.Second: "59 min 59 s", time.Hour + 20*time.Second: "1 h",
		5*time.Hour + 12*time.Minute + 10*time.Second: "5 h 12 min",
		51 * time.Hour: "2 d 3 h", -time.Second: "0 s",
	} {
		if got := Duration(d); got != want {
			t.Errorf("Duration(%v): got %q, want %q", d, got, want)
		}
	}
	for v, want := range map[float64]string{
		0: "0", 1234.6: "1235", 12345: "12345", 99999.6: "1.000e5", 0.0012345: "0.001234",
		0.00012345: "1.234e-4", -2.5: "-2.500",
	} {
		if got := Digits(v, 4); got != want {
			t.Errorf("Digits(%g): got %q, want %q", v, got, want)
		}
	}
}
