package run

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

// Goal: a full disk loses nothing. Method: a small file system in memory, too small for the
// results; the error is compared whole, and after making room the run goes on to its end. Needs the
// right to mount; the store's tests inject the same fault at every write without it.
func TestFullDisk(t *testing.T) {
	base := t.TempDir()
	if err := syscall.Mount("tmpfs", base, "tmpfs", 0, "size=1320k"); err != nil {
		t.Skipf("no right to mount a file system: %v", err)
	}
	defer func() {
		if err := syscall.Unmount(base, 0); err != nil {
			t.Error(err)
		}
	}()
	dir := filepath.Join(base, "out")
	_, _, err := Run(context.Background(), plan(t, short), Options{Out: dir, Cores: 1})
	if !errors.Is(err, syscall.ENOSPC) {
		t.Fatalf("got %v, want a full disk", err)
	}
	got := strings.ReplaceAll(err.Error(), base, "BASE")
	const want = "writing BASE/out.running/phases.parquet: " +
		"write BASE/out.running/phases.parquet.tmp: no space left on device " +
		"(results so far are kept in BASE/out.running) " +
		"(the run is kept in BASE/out.running: make room and continue with: ionfall resume BASE/out)"
	if got != want {
		t.Errorf("got  %s\nwant %s", got, want)
	}
	if _, err := os.Stat(dir); err == nil {
		t.Error("an incomplete folder has the name of a whole one")
	}
	if err := syscall.Mount("tmpfs", base, "tmpfs", syscall.MS_REMOUNT, "size=64m"); err != nil {
		t.Fatal(err)
	}
	if _, _, err := Resume(context.Background(), dir, Options{Cores: 1}); err != nil {
		t.Fatalf("with room again: %v", err)
	}
	whole := filepath.Join(t.TempDir(), "whole")
	if _, _, err := Run(context.Background(), plan(t, short), Options{Out: whole, Cores: 1}); err != nil {
		t.Fatal(err)
	}
	sameFiles(t, "after a full disk", files(t, whole), files(t, dir))
}
