package main

import (
	"bytes"
	"fmt"
	"io"
	"os"
	"os/exec"
	"strings"

	"ionfall/diagnostics"
	"ionfall/internal/codec"
	"ionfall/internal/kernels"
)

// memory has a process of its own report its peak.
func memory(b *bytes.Buffer) error {
	exe, err := os.Executable()
	if err != nil {
		return err
	}
	out, err := exec.Command(exe, "-peak").CombinedOutput()
	if err != nil {
		return fmt.Errorf("%w: %s", err, out)
	}
	fmt.Fprintf(b, "Peak memory of a process with 1e6 particles, two workers, diagnostics on: %s.\n\n",
		strings.TrimSpace(string(out)))
	return nil
}

// peakMemory moves half a million electrons and as many ions for two periods and a checkpoint.
func peakMemory() ([]byte, error) {
	s, err := helium().build(500_000, kernels.Best())
	if err != nil {
		return nil, err
	}
	s.SetWorkers(2)
	rec := diagnostics.New(s, nil, 0)
	s.SetObservers(rec)
	rec.Start(1)
	for range 2 {
		if err := s.Advance(400); err != nil {
			return nil, err
		}
		rec.EndPeriod(s.TakeLedger().Weight)
	}
	enc := codec.NewEncoder("speed", 1)
	s.Save(enc, "sim.")
	rec.Save(enc, "rec.")
	if _, err := enc.WriteTo(io.Discard); err != nil {
		return nil, err
	}
	status, err := os.ReadFile("/proc/self/status")
	if err != nil {
		return nil, fmt.Errorf("peak memory is read from /proc: %w", err)
	}
	for line := range strings.Lines(string(status)) {
		if rest, ok := strings.CutPrefix(line, "VmHWM:"); ok {
			return []byte(strings.TrimSpace(rest) + "\n"), nil
		}
	}
	return nil, fmt.Errorf("no VmHWM in /proc/self/status")
}

// cpuName returns the processor's name, or "unknown".
func cpuName() string {
	info, err := os.ReadFile("/proc/cpuinfo")
	if err != nil {
		return "unknown processor"
	}
	for line := range strings.Lines(string(info)) {
		if name, ok := strings.CutPrefix(line, "model name"); ok {
			return strings.TrimSpace(strings.TrimLeft(name, "\t :"))
		}
	}
	return "unknown processor"
}
