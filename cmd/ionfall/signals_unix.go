//go:build unix

package main

import (
	"errors"
	"os"
	"os/signal"
	"syscall"
)

// stopSignals are those that end a run with a checkpoint. A hang-up that whoever started the
// process told it to ignore stays ignored.
func stopSignals() []os.Signal {
	list := []os.Signal{syscall.SIGINT, syscall.SIGTERM}
	if !signal.Ignored(syscall.SIGHUP) {
		list = append(list, syscall.SIGHUP)
	}
	return list
}

// signalStatus is the exit status that shells give to a process ended by the signal.
func signalStatus(s os.Signal) int {
	if n, ok := s.(syscall.Signal); ok {
		return 128 + int(n)
	}
	return exitFailed
}

// onStatusSignal calls show at every SIGUSR1 until stop is called.
func onStatusSignal(show func()) (stop func()) {
	signals, finished := make(chan os.Signal, 1), make(chan struct{})
	signal.Notify(signals, syscall.SIGUSR1)
	go func() {
		for {
			select {
			case <-signals:
				show()
			case <-finished:
				return
			}
		}
	}()
	return func() {
		// Not signal.Stop: a late SIGUSR1 would kill the process, which is its usual effect.
		signal.Ignore(syscall.SIGUSR1)
		close(finished)
	}
}

// ignoreBrokenPipes makes writes to a pipe that nobody reads fail, in place of ending the process:
// a run must not die because the reader of its progress did.
func ignoreBrokenPipes() { signal.Ignore(syscall.SIGPIPE) }

func isBrokenPipe(err error) bool { return errors.Is(err, syscall.EPIPE) }
