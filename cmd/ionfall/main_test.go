package main

import (
	"bytes"
	"context"
	"errors"
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// update writes the golden files anew: go test ./cmd/ionfall -update.
func update() bool {
	f := flag.Lookup("update")
	return f != nil && f.Value.String() == "true"
}

// TestMain builds the program once: exit statuses and signals can only be seen from outside.
func TestMain(m *testing.M) {
	flag.Bool("update", false, "write the golden files anew")
	flag.Parse()
	status, err := buildAndRun(m)
	if err != nil {
		fmt.Fprintln(os.Stderr, err)
		status = 1
	}
	os.Exit(status)
}

const binaryVariable = "IONFALL_TEST_BINARY"

func buildAndRun(m *testing.M) (status int, err error) {
	dir, err := os.MkdirTemp("", "ionfall-test")
	if err != nil {
		return 1, err
	}
	defer func() { err = errors.Join(err, os.RemoveAll(dir)) }()
	binary := filepath.Join(dir, "ionfall.exe")
	flags := "-X main.version=1.2.3 -X main.commit=abc"
	out, err := exec.Command("go", "build", "-ldflags", flags, "-o", binary, ".").CombinedOutput()
	if err != nil {
		return 1, fmt.Errorf("building the program: %w\n%s", err, out)
	}
	if err := os.Setenv(binaryVariable, binary); err != nil {
		return 1, err
	}
	return m.Run(), nil
}

// outcome is what a call of the program did.
type outcome struct {
	status      int
	out, errOut string
}

// slow marks a test that simulates for seconds.
func slow(t *testing.T) {
	t.Helper()
	if testing.Short() {
		t.Skip("it simulates for some seconds")
	}
}

// command prepares a call in the folder dir, which ends after a minute at the latest.
func command(t *testing.T, dir string, args ...string) *exec.Cmd {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), time.Minute)
	t.Cleanup(cancel)
	c := exec.CommandContext(ctx, os.Getenv(binaryVariable), args...)
	c.Dir = dir
	return c
}

// call runs the program to its end.
func call(t *testing.T, dir string, args ...string) outcome {
	t.Helper()
	c := command(t, dir, args...)
	var out, errOut bytes.Buffer
	c.Stdout, c.Stderr = &out, &errOut
	return outcome{exitStatus(t, c.Run()), out.String(), errOut.String()}
}

func exitStatus(t *testing.T, err error) int {
	t.Helper()
	var exit *exec.ExitError
	if err == nil {
		return 0
	}
	if !errors.As(err, &exit) {
		t.Fatal(err)
	}
	return exit.ExitCode()
}

// small is a discharge of about a second, near its steady state from the start; with fewer
// periods it is not believable.
func small(periods, average int) string {
	return fmt.Sprintf(`title: helium, small and quick
gap: 20 mm
gas: {pressure: 50 Pa, mixture: {He: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 160 V}]}
accuracy: {ion_energy: 10 %%, ion_flux: 10 %%}
initial: {density: 4.5e14 /m3, electron_temperature: 4 eV}
numerics: {cells: 40, steps_per_period: 400, particles_per_cell: 60, ion_substeps: 2,
  periods: %d, average_periods: %d}
`, periods, average)
}

// folderWith is a new folder with the input he.yaml in it.
func folderWith(t *testing.T, text string) string {
	t.Helper()
	dir := t.TempDir()
	write(t, filepath.Join(dir, "he.yaml"), text)
	return dir
}

func write(t *testing.T, path, text string) {
	t.Helper()
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

func read(t *testing.T, path string) string {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// golden compares a text with testdata/golden/name.
func golden(t *testing.T, name, got string) {
	t.Helper()
	path := filepath.Join("testdata", "golden", name)
	if update() {
		write(t, path, got)
	}
	if want := read(t, path); got != want {
		t.Errorf("%s: got\n%s\nwant\n%s", path, got, want)
	}
}

func contains(t *testing.T, text string, parts ...string) {
	t.Helper()
	for _, part := range parts {
		if !strings.Contains(text, part) {
			t.Errorf("got %q, want it to contain %q", text, part)
		}
	}
}
