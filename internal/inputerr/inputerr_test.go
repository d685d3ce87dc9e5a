package inputerr

import (
	"errors"
	"fmt"
	"strings"
	"testing"
)

// Goal: every combination of parts reads as a sentence. Method: whole texts written by hand.
func TestErrorText(t *testing.T) {
	pressure := Error{"argon.yaml", 14, 15, "gas.pressure", "-3 Pa", "more than 0 Pa", ""}
	for _, c := range []struct {
		err  Error
		want string
	}{
		{pressure, "argon.yaml:14:15: gas.pressure: got -3 Pa, want more than 0 Pa"},
		{
			Error{File: "a", Line: 2, Key: "k", Got: "x", Hint: `did you mean "y"?`},
			`a:2: k: got x; did you mean "y"?`,
		},
		{
			Error{File: "ar.txt", Line: 212, Col: 3, Got: "15.8 eV after 16 eV", Want: "increasing"},
			"ar.txt:212:3: got 15.8 eV after 16 eV, want increasing",
		},
		{Error{File: "a.yaml", Hint: "no such file"}, "a.yaml: no such file"},
		{Error{Line: 3, Col: 4, Want: "a number"}, "line 3:4: want a number"},
		{Error{Key: "gap", Got: "x"}, "gap: got x"},
		{Error{File: "a", Col: 4, Key: "k"}, "a: k"},
		{Error{}, ""},
	} {
		if got := c.err.Error(); got != c.want {
			t.Errorf("%#v: got %q, want %q", c.err, got, c.want)
		}
	}
}

// Goal: file order, with files in the order met and ties left alone. Method: a shuffled list.
func TestListOrder(t *testing.T) {
	l := List{
		{File: "b", Line: 9, Hint: "third"},
		{File: "a", Line: 1, Hint: "last"},
		{File: "b", Line: 2, Col: 5, Hint: "second"},
		{File: "b", Line: 2, Col: 3, Hint: "first"},
		{File: "b", Line: 9, Hint: "third, found later"},
	}
	want := "b:2:3: first\nb:2:5: second\nb:9: third\nb:9: third, found later\na:1: last"
	if got := l.Error(); got != want {
		t.Errorf("got %q, want %q", got, want)
	}
	if l[0].Line != 9 {
		t.Error("printing changed the list")
	}
}

// Goal: 20 errors are printed and the rest counted. Method: the lengths around the limit.
func TestListLimit(t *testing.T) {
	for _, n := range []int{1, 19, 20, 21, 50} {
		var l List
		for i := range n {
			l = append(l, &Error{File: "f", Line: n - i, Hint: "x"})
		}
		lines := strings.Split(l.Error(), "\n")
		want := n
		if n > 20 {
			want = 21
			if last := fmt.Sprintf("and %d more", n-20); lines[20] != last {
				t.Errorf("%d errors: last line %q, want %q", n, lines[20], last)
			}
		}
		if len(lines) != want || lines[0] != "f:1: x" {
			t.Errorf("%d errors: %d lines from %q, want %d", n, len(lines), lines[0], want)
		}
	}
}

// Goal: an empty list is no error, a full one can be taken apart. Method: errors.As.
func TestListErr(t *testing.T) {
	if err := List(nil).Err(); err != nil {
		t.Errorf("empty list: got %v, want nil", err)
	}
	err := fmt.Errorf("reading: %w", List{{File: "f", Line: 7}}.Err())
	var one *Error
	if !errors.As(err, &one) || one.Line != 7 {
		t.Errorf("got %v, want the error of line 7", one)
	}
}

// Goal: slips are found and strangers are not. Method: slips of each kind, and near misses.
func TestNearest(t *testing.T) {
	keys := []string{"gap", "gas", "drive", "pressure", "temperature", "ion_secondary_yield"}
	for word, want := range map[string]string{
		"presure":            "pressure",    // a letter left out
		"ppressure":          "pressure",    // one too many
		"prassure":           "pressure",    // a wrong one
		"rpessure":           "pressure",    // two swapped
		"PRESSURE":           "pressure",    // case
		"temprature":         "temperature", //
		"gpa":                "gap",         // a swap costs one, so it is not "gas"
		"gab":                "gap",         // as close to "gas": the first
		"ion_secundary_yild": "ion_secondary_yield",
		"voltage":            "",
		"gxx":                "", // two of three letters wrong
		"":                   "",
		"dr":                 "",
	} {
		if got := Nearest(word, keys); got != want {
			t.Errorf("Nearest(%q): got %q, want %q", word, got, want)
		}
	}
	if got := Nearest("µm", []string{"", "m", "μm"}); got != "m" {
		t.Errorf("got %q, want m: letters are characters, not bytes", got)
	}
	if got := Nearest(strings.Repeat("a", 1<<20), []string{strings.Repeat("a", 1<<20)}); got != "" {
		t.Error("a word of a million letters was compared")
	}
}

// Goal: the distance is right. Method: values worked out by hand, and its symmetry.
func TestDistance(t *testing.T) {
	for _, c := range []struct {
		a, b string
		want int
	}{
		{"", "", 0},
		{"", "abc", 3},
		{"kitten", "sitting", 3},
		{"ab", "ba", 1},
		{"abcd", "acbd", 1},
		{"ca", "abc", 3},
		{"flaw", "lawn", 2},
	} {
		for _, p := range [][2]string{{c.a, c.b}, {c.b, c.a}} {
			if got := distance([]rune(p[0]), []rune(p[1])); got != c.want {
				t.Errorf("distance(%q, %q): got %d, want %d", p[0], p[1], got, c.want)
			}
		}
	}
}

func ExampleList() {
	keys := []string{"pressure", "temperature", "mixture"}
	errs := List{
		{
			File: "argon.yaml", Line: 6, Col: 3, Key: "gas.presure",
			Hint: fmt.Sprintf("unknown key; did you mean %q?", Nearest("presure", keys)),
		},
		{File: "argon.yaml", Line: 2, Col: 6, Key: "gap", Got: "0 mm", Want: "1 mm to 1 m"},
	}
	fmt.Println(errs.Err())
	// Output:
	// argon.yaml:2:6: gap: got 0 mm, want 1 mm to 1 m
	// argon.yaml:6:3: gas.presure: unknown key; did you mean "pressure"?
}
