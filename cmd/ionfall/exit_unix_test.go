//go:build unix

package main

import (
	"bufio"
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

// Goal: a signal ends a run within two seconds with its own status and a checkpoint, and resume
// goes on to the end. Method: a run of several seconds, told to stop in its first periods.
func TestInterruptAndResume(t *testing.T) {
	slow(t)
	for _, c := range []struct {
		signal syscall.Signal
		status int
	}{
		{syscall.SIGINT, 130},
		{syscall.SIGTERM, 143},
		{syscall.SIGHUP, 129},
	} {
		dir := folderWith(t, small(300, 150))
		run := command(t, dir, "run", "he.yaml")
		errOut, err := run.StderrPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := run.Start(); err != nil {
			t.Fatal(err)
		}
		lines := bufio.NewReader(errOut)
		if first, err := lines.ReadString('\n'); !strings.HasPrefix(first, "settling: period 1,") {
			t.Fatalf("got %q, %v, want the first period", first, err)
		}
		sent := time.Now()
		if err := run.Process.Signal(c.signal); err != nil {
			t.Fatal(err)
		}
		var rest bytes.Buffer
		if _, err := lines.WriteTo(&rest); err != nil {
			t.Fatal(err)
		}
		status, took := exitStatus(t, run.Wait()), time.Since(sent)
		if status != c.status || took > 2*time.Second {
			t.Errorf("%v: got status %d after %v, want %d within 2 s", c.signal, status, took, c.status)
		}
		contains(t, rest.String(), "ionfall: interrupted in the settling stage, after ",
			" continue with: ionfall resume "+filepath.Join("results", "he")+"\n")
		folder := filepath.Join(dir, "results", "he")
		if _, err := os.Stat(filepath.Join(folder+".running", "checkpoint.bin")); err != nil {
			t.Error(err)
		}
		again := call(t, dir, "resume", folder+".running", "--quiet")
		if again.status != 0 || again.errOut != "" {
			t.Errorf("%v: resume: got status %d, stderr %q", c.signal, again.status, again.errOut)
		}
		contains(t, again.out, "helium, small and quick\n", "results: "+folder+"\n")
		if _, err := os.Stat(filepath.Join(folder, "summary.json")); err != nil {
			t.Error(err)
		}
	}
}

// Goal: SIGUSR1 tells how far the run is, also with --quiet. Method: signals until a line comes.
func TestStatusSignal(t *testing.T) {
	for _, args := range [][]string{{"--quiet"}, {"--json"}} {
		dir := folderWith(t, small(5000, 300))
		run := command(t, dir, append([]string{"run", "he.yaml"}, args...)...)
		errOut, err := run.StderrPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := run.Start(); err != nil {
			t.Fatal(err)
		}
		line := make(chan string)
		go func() {
			text, err := bufio.NewReader(errOut).ReadString('\n')
			if err != nil {
				text += err.Error()
			}
			line <- text
		}()
		running := filepath.Join(dir, "results", "he.running")
		tick := time.NewTicker(20 * time.Millisecond)
		defer tick.Stop()
		got := ""
		for got == "" {
			select {
			case got = <-line:
			case <-tick.C:
				// Before the folder is there, the signal would still end the process.
				if _, err := os.Stat(running); err == nil {
					_ = run.Process.Signal(syscall.SIGUSR1) // an ended process shows in the line
				}
			}
		}
		want := map[string]string{"--quiet": "settling: period ", "--json": `{"stage":"settling",`}
		contains(t, got, want[args[0]])
		if err := run.Process.Signal(syscall.SIGTERM); err != nil {
			t.Error(err)
		}
		if status := exitStatus(t, run.Wait()); status != 143 {
			t.Errorf("got status %d, want 143", status)
		}
	}
}

// Goal: readers that go away do not cost the results. Method: pipes without a reader for stdout
// and stderr.
func TestBrokenPipes(t *testing.T) {
	slow(t)
	dir := folderWith(t, small(200, 100))
	reader, writer, err := os.Pipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := reader.Close(); err != nil {
		t.Fatal(err)
	}
	run := command(t, dir, "run", "he.yaml")
	run.Stdout, run.Stderr = writer, writer
	if status := exitStatus(t, run.Run()); status != 0 {
		t.Errorf("got status %d, want 0", status)
	}
	if err := writer.Close(); err != nil {
		t.Error(err)
	}
	if _, err := os.Stat(filepath.Join(dir, "results", "he", "summary.json")); err != nil {
		t.Error(err)
	}
}

// Goal: answers that cannot be written are an error. Method: the device that is always full.
func TestFullOutput(t *testing.T) {
	full, err := os.OpenFile("/dev/full", os.O_WRONLY, 0)
	if err != nil {
		t.Skip("no such device")
	}
	c := command(t, t.TempDir(), "schema")
	var errOut bytes.Buffer
	c.Stdout, c.Stderr = full, &errOut
	status := exitStatus(t, c.Run())
	want := "ionfall: writing to stdout: no space left on device\n"
	if status != 1 || errOut.String() != want {
		t.Errorf("got status %d, %q, want 1, %q", status, errOut.String(), want)
	}
	if err := full.Close(); err != nil {
		t.Error(err)
	}
}
