//go:build unix

package main

import (
	"os/exec"
	"syscall"
)

// detach lets a process live on when this one is ended from the keyboard.
func detach(c *exec.Cmd) { c.SysProcAttr = &syscall.SysProcAttr{Setsid: true} }
