package run

import (
	"context"
	"errors"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
	"time"

	"ionfall/internal/progress"
	"ionfall/internal/store"
)

// Goal: a run that is taken up after an interrupt, or after a death before its first checkpoint,
// gives the bits of one that was never disturbed. Method: compare the tables.
func TestTakenUpRunHasTheSameBits(t *testing.T) {
	base := t.TempDir()
	p := plan(t, short)
	straight := filepath.Join(base, "straight")
	if _, _, err := Run(context.Background(), p, Options{Out: straight, Cores: 1}); err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(base, "taken")
	begun, err := store.Take(out) // what a run killed before its first checkpoint leaves
	if err != nil {
		t.Fatal(err)
	}
	if err := begun.Close(); err != nil {
		t.Fatal(err)
	}
	runtime.LockOSThread()
	defer runtime.UnlockOSThread()
	o := Options{Out: out, Cores: 1, OwnThread: true, CheckpointEvery: time.Nanosecond}
	ctx, cancel := context.WithCancel(context.Background())
	o.Progress = func(s progress.Status) {
		if s.Periods == 11 {
			cancel()
		}
	}
	if _, err := TakeUp(ctx, p, o); !errors.Is(err, ErrInterrupted) {
		t.Fatalf("got %v, want an interrupt", err)
	}
	o.Progress = nil
	other := plan(t, strings.Replace(short, "200 V", "210 V", 1))
	if _, err := TakeUp(context.Background(), other, o); err == nil ||
		!strings.Contains(err.Error(), "begun with another input") {
		t.Errorf("another input: %v", err)
	}
	s, err := TakeUp(context.Background(), p, o)
	if err != nil {
		t.Fatal(err)
	}
	if cpu := number(s.Provenance["cpu_s"]); cpu <= 0 || cpu > number(s.Provenance["wall_s"])+0.1 {
		t.Errorf("processor time of the thread: %g s", cpu)
	}
	sameFiles(t, "taken up", files(t, straight), files(t, out))
	if _, err := TakeUp(context.Background(), p, o); !errors.Is(err, store.ErrExists) {
		t.Errorf("a whole run: %v", err)
	}
}
