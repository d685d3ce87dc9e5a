package crosssections

import (
	"fmt"

	"ionfall/internal/inputerr"
)

// complaints collects the errors of one file.
type complaints struct {
	file string
	list inputerr.List
}

// add notes an error at a place; want says what was expected.
func (c *complaints) add(line, col int, key, got, want string) {
	c.addHint(line, col, key, got, want, "")
}

// addHint notes an error with a hint how to mend it.
func (c *complaints) addHint(line, col int, key, got, want, hint string) {
	if !c.full() {
		c.list = append(c.list, &inputerr.Error{
			File: c.file, Line: line, Col: col, Key: key, Got: got, Want: want, Hint: hint,
		})
	}
}

// full tells that nobody will read further errors of the file.
func (c *complaints) full() bool { return len(c.list) >= maxErrors }

// err is the list as an error, nil if it is empty.
func (c *complaints) err() error { return c.list.Err() }

// quoted is a text from a file, shortened for a message.
func quoted(text string) string {
	const most = 60
	if len(text) > most {
		text = text[:most] + "..."
	}
	return fmt.Sprintf("%q", text)
}

// didYouMean is a hint with the nearest known word, or nothing.
func didYouMean(word string, known []string) string {
	if nearest := inputerr.Nearest(word, known); nearest != "" {
		return fmt.Sprintf("did you mean %q?", nearest)
	}
	return ""
}
