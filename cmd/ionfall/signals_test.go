package main

import (
	"bytes"
	"os"
	"syscall"
	"testing"
	"testing/synctest"
	"time"
)

// followed drives follow in fake time: signals at the given moments after the first, which comes
// at 0. It returns when the process would have been killed, or -1, and with which status.
func followed(t *testing.T, later []time.Duration) (killed time.Duration, status int, notice string) {
	t.Helper()
	synctest.Test(t, func(t *testing.T) {
		p := newProgram(nil, nil)
		signals, finished := make(chan os.Signal, 8), make(chan struct{})
		var told bytes.Buffer
		interrupts := 0
		start := time.Now()
		go p.follow(signals, finished, &told, func(s os.Signal) {
			if s != syscall.SIGTERM {
				t.Errorf("interrupted by %v, want the first signal", s)
			}
			interrupts++
		})
		signals <- syscall.SIGTERM
		for _, at := range later {
			time.Sleep(at - time.Since(start))
			signals <- syscall.SIGINT
		}
		killed = -1
		select {
		case status = <-p.killed:
			killed = time.Since(start)
		case <-time.After(time.Hour):
			close(finished)
		}
		synctest.Wait()
		if interrupts != 1 {
			t.Errorf("interrupted %d times, want once", interrupts)
		}
		notice = told.String()
	})
	return killed, status, notice
}

// Goal: one signal waits for the checkpoint as long as it takes, a second for some seconds, a
// third not at all. Method: fake time.
func TestFollow(t *testing.T) {
	const text = "ionfall: the checkpoint is being written; a third signal ends the run without it\n"
	for _, c := range []struct {
		name   string
		later  []time.Duration
		killed time.Duration
		notice string
	}{
		{"one", nil, -1, ""},
		{"two", []time.Duration{time.Second}, time.Second + patience, text},
		{"three", []time.Duration{time.Second, 3 * time.Second}, 3 * time.Second, text},
		{"at once", []time.Duration{0, 0}, 0, text},
	} {
		killed, status, notice := followed(t, c.later)
		if killed != c.killed || notice != c.notice {
			t.Errorf("%s: killed after %v saying %q, want %v and %q",
				c.name, killed, notice, c.killed, c.notice)
		}
		if killed >= 0 && status != 143 {
			t.Errorf("%s: status %d, want that of the first signal, 143", c.name, status)
		}
	}
}
