package progress

import (
	"io"
	"strings"
	"time"
	"unicode/utf8"
)

const (
	// redraw is the least time between two redraws: faster than this nobody reads.
	redraw = 200 * time.Millisecond
	// eventHold is how long an event can be read on the terminal.
	eventHold = 5 * time.Second
	// usualWidth stands in for a width that is not known [columns].
	usualWidth = 80
)

// NewTerminal returns a printer that redraws one line in place. width gives the columns of the
// terminal, which may change; 0 or less is unknown.
func NewTerminal(out io.Writer, width func() int) Printer {
	return &paced{
		out: out, form: &redrawn{width: width}, hold: eventHold,
		pace: Pace{Every: redraw, Stages: true, Last: true},
	}
}

// redrawn is the form for a terminal. It erases with blanks, because not every console knows the
// control sequence for it.
type redrawn struct {
	width func() int
	shown string // what is on the line now
}

func (r *redrawn) report(s Status) string {
	width := r.width()
	if width <= 0 {
		width = usualWidth
	}
	before := utf8.RuneCountInString(r.shown)
	// The last column stays free: writing there makes some terminals start a new line.
	r.shown = cut(sentence(s), width-1)
	rest := min(before, width-1) - utf8.RuneCountInString(r.shown)
	return "\r" + r.shown + strings.Repeat(" ", max(0, rest))
}

func (r *redrawn) clear() string {
	if r.shown == "" {
		return ""
	}
	return "\r" + strings.Repeat(" ", utf8.RuneCountInString(r.shown)) + "\r"
}

func (r *redrawn) restore() string { return r.shown }

func (r *redrawn) end() string {
	if r.shown == "" {
		return ""
	}
	return "\n"
}

// cut shortens text to n columns at most.
func cut(text string, n int) string {
	runes := []rune(text)
	return string(runes[:max(0, min(n, len(runes)))])
}
