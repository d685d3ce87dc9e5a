// Package inputerr is the one form of an error about something the user wrote: an input file,
// a table of data. It says where (file, line, column), what (the key), what was found and what
// was expected, and carries all errors of a file at once.
//
//	var errs inputerr.List
//	errs = append(errs, &inputerr.Error{
//		File: "argon.yaml", Line: 14, Col: 15, Key: "gas.pressure",
//		Got: "-3 Pa", Want: "more than 0 Pa and at most 1e5 Pa",
//	})
//	return errs.Err()
package inputerr

import (
	"strconv"
	"strings"
)

// Error is one mistake in an input. Every field may be empty, and is then left out of the text.
type Error struct {
	// File names the file as the user named it.
	File string
	// Line and Col count from 1, Col in characters; 0 is unknown.
	Line, Col int
	// Key is the path of the value, such as "gas.pressure".
	Key string
	// Got is what was found, Want what was expected.
	Got, Want string
	// Hint is a remark that helps to mend it, or the whole message if Got and Want are empty.
	Hint string
}

// Error is "file:line:col: key: got A, want B; hint", without the parts that are empty.
func (e *Error) Error() string {
	var parts []string
	if e.Got != "" {
		parts = append(parts, "got "+e.Got)
	}
	if e.Want != "" {
		parts = append(parts, "want "+e.Want)
	}
	text := strings.Join(parts, ", ")
	if e.Hint != "" {
		text = join(text, "; ", e.Hint)
	}
	return join(join(e.place(), ": ", e.Key), ": ", text)
}

// place is "file:line:col", "line 3" where there is no file, or "".
func (e *Error) place() string {
	if e.Line <= 0 {
		return e.File
	}
	place := e.File + ":" + strconv.Itoa(e.Line)
	if e.File == "" {
		place = "line " + strconv.Itoa(e.Line)
	}
	if e.Col > 0 {
		place += ":" + strconv.Itoa(e.Col)
	}
	return place
}

// join puts sep between a and b if neither is empty.
func join(a, sep, b string) string {
	if a == "" || b == "" {
		return a + b
	}
	return a + sep + b
}
