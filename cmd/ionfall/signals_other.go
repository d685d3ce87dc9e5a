//go:build !unix

package main

import (
	"errors"
	"os"
	"syscall"
)

// stopSignals are those that end a run with a checkpoint.
func stopSignals() []os.Signal { return []os.Signal{os.Interrupt, syscall.SIGTERM} }

// signalStatus is the exit status after the signal.
func signalStatus(s os.Signal) int {
	if n, ok := s.(syscall.Signal); ok {
		return 128 + int(n)
	}
	return exitFailed
}

// onStatusSignal does nothing: there is no such signal.
func onStatusSignal(func()) (stop func()) { return func() {} }

func ignoreBrokenPipes() {}

func isBrokenPipe(err error) bool { return errors.Is(err, syscall.EPIPE) }
