//go:build unix

package main

import (
	"bufio"
	"bytes"
	"io"
	"os"
	"path/filepath"
	"syscall"
	"testing"
	"time"
)

// Goal: Ctrl-C ends swarms soon with its status, prints the fields that are done and leaves no
// folder behind. Method: a quick field, then one to an error that takes hours.
func TestInterruptedSwarm(t *testing.T) {
	slow(t)
	dir := folderWithExchange(t)
	good(t, dir, "gas", "import", "xx.txt", "--as", "Xx")
	c := command(t, dir, "gas", "swarm", "Xx", "--library", "gases", "--field", "300,1 Td",
		"--accuracy", "1%", "--cores", "1", "--out", "sw")
	var out bytes.Buffer
	c.Stdout = &out
	pipe, err := c.StderrPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	lines := bufio.NewReader(pipe)
	first, err := lines.ReadString('\n')
	if err != nil {
		t.Fatal(err)
	}
	contains(t, first, "300 Td: mean energy ", "(1 of 2)")
	sent := time.Now()
	if err := c.Process.Signal(syscall.SIGINT); err != nil {
		t.Fatal(err)
	}
	rest, err := io.ReadAll(lines)
	if err != nil {
		t.Fatal(err)
	}
	status, took := exitStatus(t, c.Wait()), time.Since(sent)
	if status != 130 || took > 3*time.Second {
		t.Errorf("got status %d after %v, want 130 at once", status, took)
	}
	contains(t, string(rest), "ionfall: interrupted: 1 of 2 fields are done\n")
	contains(t, out.String(), "e in Xx, set default", "300 Td")
	left, err := filepath.Glob(filepath.Join(dir, "sw*"))
	if err != nil || left != nil {
		t.Errorf("left %q, %v", left, err)
	}
	if _, err := os.Stat(filepath.Join(dir, "gases", "Xx")); err != nil {
		t.Error(err)
	}
}
