package scan

import (
	"context"
	"errors"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
)

// Goal: a full disk ends the scan, loses nothing and blames no point; with room it goes on to the
// same table. Method: a small file system in memory that is enlarged. Needs the right to mount.
func TestFullDisk(t *testing.T) {
	small := t.TempDir()
	if err := syscall.Mount("tmpfs", small, "tmpfs", 0, "size=3m"); err != nil {
		t.Skipf("no right to mount a file system: %v", err)
	}
	defer func() {
		if err := syscall.Unmount(small, 0); err != nil {
			t.Error(err)
		}
	}()
	p := goodPlan(t, six)
	f, err := Open(context.Background(), p, filepath.Join(small, "scan"))
	if err != nil {
		t.Fatal(err)
	}
	r, err := f.Run(context.Background(), Options{Cores: 1})
	if !errors.Is(err, syscall.ENOSPC) || r == nil || !strings.Contains(err.Error(), "point ") {
		t.Fatalf("got %+v and %v, want a full disk", r, err)
	}
	if r.Done == 0 || r.Done == 6 || r.Failed != 0 {
		t.Fatalf("%d points done, %d failed: the disk is not of the size that this test needs",
			r.Done, r.Failed)
	}
	for i := range p.Points {
		if f.State(i+1) == Failed {
			t.Errorf("point %d is blamed for the disk", i+1)
		}
	}
	if err := syscall.Mount("tmpfs", small, "tmpfs", syscall.MS_REMOUNT, "size=64m"); err != nil {
		t.Fatal(err)
	}
	done := r.Done
	if r := work(t, f, Options{Cores: 2}); r.Done != 6 || r.Computed != 6-done {
		t.Errorf("with room again: %+v, %d were done before", r, done)
	}
	whole := open(t, p, "whole")
	work(t, whole, Options{Cores: 2})
	if tableText(t, f) != tableText(t, whole) {
		t.Error("the full disk changed the table")
	}
}
