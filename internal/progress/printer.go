package progress

import (
	"io"
	"sync"
	"time"
)

// Printer shows the states of one run. What is written to it are log lines: they are passed on
// between the reports, and never end up in the middle of one.
type Printer interface {
	io.Writer
	// Show takes the newest status, and prints it if a report is due.
	Show(s Status)
	// Now prints the newest status at once.
	Now()
	// Close prints the newest status if it has not been printed; after it nothing is.
	Close()
}

// Pace is when a printer reports of its own accord.
type Pace struct {
	// Every is the least time between two reports; 0 is never.
	Every time.Duration
	// Stages asks for a report at every change of the stage.
	Stages bool
	// Last asks for the newest status at the end.
	Last bool
}

// Minutely is the pace where nobody watches: a report a minute, one a stage, and the last.
func Minutely() Pace { return Pace{Every: time.Minute, Stages: true, Last: true} }

// OnDemand is the pace of a printer that reports only when told to by Now.
func OnDemand() Pace { return Pace{} }

// form is how reports look.
type form interface {
	// report is the text that shows s.
	report(s Status) string
	// clear is the text that makes room for a log line, restore what is to follow it.
	clear() string
	restore() string
	// end is the text after the last report.
	end() string
}

// paced is a Printer of any form.
type paced struct {
	mu   sync.Mutex
	out  io.Writer
	form form
	pace Pace
	// hold is how long an event stays in the reports; it is in one at least.
	hold time.Duration

	newest  Status
	any     bool      // newest holds a status
	pending bool      // newest has not been printed
	last    time.Time // of the last report
	stage   string    // in the last report
	event   time.Time // when newest.Event happened
	told    bool      // newest.Event has been printed
	stopped bool      // closed, or the output is broken
}

// Show implements Printer.
func (p *paced) Show(s Status) {
	p.mu.Lock()
	defer p.mu.Unlock()
	now := time.Now()
	switch {
	case s.Event != "":
		p.event, p.told = now, false
	case p.newest.Event != "" && (!p.told || now.Sub(p.event) < p.hold):
		s.Event = p.newest.Event // a report between two statuses must not lose it
	}
	p.newest, p.any, p.pending = s, true, true
	due := p.pace.Every > 0 && (p.last.IsZero() || now.Sub(p.last) >= p.pace.Every)
	if due || p.pace.Stages && s.Stage != p.stage {
		p.print(now)
	}
}

// Now implements Printer.
func (p *paced) Now() {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.any {
		p.print(time.Now())
	}
}

// Write implements Printer.
func (p *paced) Write(log []byte) (int, error) {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.stopped {
		return p.out.Write(log)
	}
	p.send(p.form.clear())
	n, err := p.out.Write(log)
	p.send(p.form.restore())
	return n, err
}

// Close implements Printer.
func (p *paced) Close() {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.any && p.pending && p.pace.Last {
		p.print(time.Now())
	}
	p.send(p.form.end())
	p.stopped = true
}

func (p *paced) print(now time.Time) {
	p.send(p.form.report(p.newest))
	p.last, p.stage, p.pending, p.told = now, p.newest.Stage, false, true
}

// send writes to the output until that fails: a reader that went away is no reason to stop a run.
func (p *paced) send(text string) {
	if p.stopped || text == "" {
		return
	}
	if _, err := io.WriteString(p.out, text); err != nil {
		p.stopped = true
	}
}
