//go:build unix

package store

import (
	"errors"

	"golang.org/x/sys/unix"
)

// alive reports whether a process of that number exists on this machine.
func alive(pid int) bool {
	err := unix.Kill(pid, 0)
	return err == nil || errors.Is(err, unix.EPERM)
}
