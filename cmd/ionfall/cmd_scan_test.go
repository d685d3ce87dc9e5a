package main

import (
	"bytes"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"
)

// ionfall runs the program and returns what it prints.
func ionfall(t *testing.T, dir string, args ...string) string {
	t.Helper()
	c := exec.Command(os.Getenv(binaryVariable), args...)
	c.Dir = dir
	var stderr bytes.Buffer
	c.Stderr = &stderr
	out, err := c.Output()
	if err != nil {
		var exit *exec.ExitError
		if !errors.As(err, &exit) {
			t.Fatal(err)
		}
		t.Fatalf("ionfall %s: %v\n%s%s", strings.Join(args, " "), err, out, stderr.Bytes())
	}
	return string(out)
}

// scanInputs writes a base of small cost, and a plan.
func scanInputs(t *testing.T, plan string) string {
	t.Helper()
	dir := t.TempDir()
	base := `gap: 20 mm
gas: {pressure: 60 Pa, mixture: {He: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 200 V}]}
initial: {density: 8e14 /m3, electron_temperature: 5 eV}
numerics: {cells: 32, steps_per_period: 480, particles_per_cell: 40, ion_substeps: 4, periods: 24}
`
	for name, text := range map[string]string{"base.yaml": base, "p.yaml": plan} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return dir
}

// Goal: a scan from the command line: what it would take, the runs, how far it is, the table in both
// forms, a picture; and the same command again does nothing more. Method: the smallest plan.
func TestScanFromTheCommandLine(t *testing.T) {
	dir := scanInputs(t, "base: base.yaml\nvary: {gas.pressure: [50 Pa, 60 Pa]}\n")
	contains(t, ionfall(t, dir, "scan", "check", "p.yaml"), "2 points, no errors")
	contains(t, ionfall(t, dir, "scan", "run", "p.yaml", "--quiet"), "2 of 2 points done, 0 could not")
	contains(t, ionfall(t, dir, "scan", "status", "p.yaml"), "done         2")
	table := ionfall(t, dir, "scan", "table", "p.yaml", "--columns", "self_bias_V")
	contains(t, table, "gas.pressure", "50 Pa", "self_bias_V", "points.parquet")
	csv := ionfall(t, dir, "scan", "table", filepath.Join("scans", "p"), "--csv")
	contains(t, csv, "point,gas.pressure_Pa,status,verdict,", "\n1,50,done,")
	if n := strings.Count(csv, "\n"); n != 3 {
		t.Errorf("%d lines, want 3", n)
	}
	ionfall(t, dir, "scan", "map", "p.yaml", "--of", "ion_mean_energy_eV.grounded.all", "--svg", "m.svg")
	if _, err := os.Stat(filepath.Join(dir, "m.svg")); err != nil {
		t.Error(err)
	}
	contains(t, ionfall(t, dir, "scan", "run", "p.yaml", "--quiet"), "0 computed now")
}

// Goal: what is wrong on the command line is told with exit status 2. Method: one of each.
func TestScanUsage(t *testing.T) {
	dir := scanInputs(t, "base: base.yaml\nvary: {gas.pressure: [50 Pa, 60]}\n")
	for want, args := range map[string][]string{
		"p.yaml:2:30: gas.pressure: got 60, want":       {"check", "p.yaml"},
		"scan: no command given":                        {},
		"--until: got \"noon\", want a time":            {"run", "p.yaml", "--until", "noon"},
		"--shard: got \"3/2\", want I/N":                {"run", "p.yaml", "--shard", "3/2"},
		"window: no --want given":                       {"window", "p.yaml"},
		"--want: got \"flux\", want a condition":        {"window", "p.yaml", "--want", "flux"},
		"--probability: got \"120%\", want a part":      {"window", "p.yaml", "--want", "a<1", "--probability", "120%"},
		"none.yaml: no such file":                       {"run", "none.yaml"},
		"submit: no --time given":                       {"submit", "p.yaml"},
		"unknown command \"scan stauts\"; did you mean": {"stauts", "p.yaml"},
	} {
		got := call(t, dir, append([]string{"scan"}, args...)...)
		if got.status != 2 || !strings.Contains(got.errOut, want) {
			t.Errorf("%v: got status %d and %s, want %s", args, got.status, got.errOut, want)
		}
	}
	good := scanInputs(t, "base: base.yaml\nvary: {gas.pressure: [50 Pa]}\n")
	got := call(t, good, "scan", "table", "p.yaml")
	if got.status != 2 || !strings.Contains(got.errOut, "no scan was begun in scans/p") {
		t.Errorf("got status %d and %s", got.status, got.errOut)
	}
}

// Goal: a time of day is the next one. Method: times before and after now.
func TestUntil(t *testing.T) {
	now := time.Date(2031, 5, 6, 22, 30, 0, 0, time.UTC)
	for text, want := range map[string]string{
		"07:00": "2031-05-07T07:00:00Z", "23:00": "2031-05-06T23:00:00Z",
		"2031-05-08T01:02:03Z": "2031-05-08T01:02:03Z",
	} {
		got, err := nextClock(text, now)
		if err != nil || got.Format(time.RFC3339) != want {
			t.Errorf("%s: got %v, %v, want %s", text, got, err, want)
		}
	}
	for _, text := range []string{"7", "25:00", "2030-01-01T00:00:00Z", ""} {
		if _, err := nextClock(text, now); err == nil {
			t.Errorf("%q is accepted", text)
		}
	}
}
