package main

import (
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"strings"

	"ionfall/internal/inputerr"
	"ionfall/internal/run"
	"ionfall/internal/scan"
	"ionfall/internal/store"
)

// The exit statuses. After an interrupt it is 128 + the number of the signal.
const (
	exitDone    = 0
	exitFailed  = 1
	exitUsage   = 2
	exitVerdict = 3
)

// errVerdict says that a run is done and its verdict is fail. The table has told why.
var errVerdict = errors.New("the verdict is fail")

// usageError says that the command line is wrong.
type usageError struct{ text string }

// Error returns the text.
func (e *usageError) Error() string { return e.text }

func usagef(format string, args ...any) error {
	return &usageError{fmt.Sprintf(format, args...)}
}

// status is the exit status for an error.
func (p *program) status(err error) int {
	var usage *usageError
	var input *inputerr.Error
	var other *scan.OtherPlanError
	switch {
	case err == nil:
		return exitDone
	case errors.Is(err, run.ErrInterrupted) && p.signal != 0:
		return p.signal
	case errors.Is(err, errVerdict):
		return exitVerdict
	case errors.As(err, &usage), errors.As(err, &input), errors.Is(err, store.ErrExists),
		errors.As(err, &other):
		return exitUsage
	}
	return exitFailed
}

// complain prints an error on stderr. One that stands in a file starts with its place, so that
// editors find it.
func (p *program) complain(err error) {
	if p.asJSON {
		p.complainJSON(err)
		return
	}
	var list inputerr.List
	text := err.Error()
	if !errors.As(err, &list) {
		text = "ionfall: " + text
	}
	p.say(text)
}

// say prints a line on stderr. When that is gone, there is nobody to tell.
func (p *program) say(text string) { tell(p.stderr, text) }

func tell(w io.Writer, text string) {
	_, _ = io.WriteString(w, strings.TrimRight(text, "\n")+"\n")
}

// errorItem is one error in JSON. Unknown parts are "" and 0.
type errorItem struct {
	File    string `json:"file"`
	Line    int    `json:"line"`
	Col     int    `json:"col"`
	Key     string `json:"key"`
	Got     string `json:"got"`
	Want    string `json:"want"`
	Hint    string `json:"hint"`
	Message string `json:"message"`
}

func (p *program) complainJSON(err error) {
	var list inputerr.List
	var items []errorItem
	if errors.As(err, &list) {
		for _, e := range list.Sorted() {
			items = append(items,
				errorItem{e.File, e.Line, e.Col, e.Key, e.Got, e.Want, e.Hint, e.Error()})
		}
	} else {
		items = []errorItem{{Message: err.Error()}}
	}
	text, jsonErr := encodeJSON(map[string]any{"error": items}, false)
	if jsonErr != nil {
		text = []byte(err.Error())
	}
	p.say(string(text))
}

// encodeJSON is v in JSON with a line end, leaving <, > and & as they are.
func encodeJSON(v any, indent bool) ([]byte, error) {
	var b strings.Builder
	enc := json.NewEncoder(&b)
	enc.SetEscapeHTML(false)
	if indent {
		enc.SetIndent("", "  ")
	}
	if err := enc.Encode(v); err != nil {
		return nil, fmt.Errorf("writing JSON: %w", err)
	}
	return []byte(b.String()), nil
}

// print writes to stdout. A reader that has seen enough and closed it is no error.
func (p *program) print(text []byte) error {
	_, err := p.stdout.Write(text)
	if err == nil || isBrokenPipe(err) {
		return nil
	}
	var cause *fs.PathError
	if errors.As(err, &cause) {
		err = cause.Err
	}
	return fmt.Errorf("writing to stdout: %w", err)
}
