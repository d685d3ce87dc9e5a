package main

import (
	"context"
	"io"
	"os"
	"os/signal"
	"time"
)

// patience is how long a checkpoint may take after the user has asked twice for the end.
const patience = 10 * time.Second

// interruptible returns a context that ends at the first signal to stop. stop must be called when
// the work is done: it notes that signal, and signals have their usual effect again.
func (p *program) interruptible(notice io.Writer) (ctx context.Context, stop func()) {
	ctx, cancel := context.WithCancel(context.Background())
	signals, first := make(chan os.Signal, 8), make(chan os.Signal, 1)
	finished := make(chan struct{})
	signal.Notify(signals, stopSignals()...)
	go p.follow(signals, finished, notice, func(s os.Signal) {
		first <- s
		cancel()
	})
	return ctx, func() {
		signal.Stop(signals)
		close(finished)
		cancel()
		select {
		case s := <-first:
			p.signal = signalStatus(s)
		default:
		}
	}
}

// follow acts on signals to stop. The first asks for the end, for which a checkpoint is written.
// The second, perhaps from an impatient finger or from a scheduler that signals twice, must not
// lose it: it starts a limit on the time. The third ends the process at once.
func (p *program) follow(signals <-chan os.Signal, finished <-chan struct{},
	notice io.Writer, interrupt func(os.Signal),
) {
	var first os.Signal
	var limit <-chan time.Time
	for count := 1; ; count++ {
		select {
		case <-finished:
			return
		case s := <-signals:
			switch count {
			case 1:
				first = s
				interrupt(s)
				continue
			case 2:
				limit = time.After(patience)
				tell(notice, "ionfall: the checkpoint is being written; a third signal ends "+
					"the run without it")
				continue
			}
		case <-limit:
		}
		p.killed <- signalStatus(first)
		return
	}
}
