package store

import (
	"errors"
	"path/filepath"
	"testing"

	"ionfall/internal/table"
)

// Goal: taking a run begins it, continues it, and refuses it when it is whole or in use. Method: each
// state in turn.
func TestTake(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "points", "point=0001")
	run, err := Take(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := run.WriteFile("input.yaml", []byte("a")); err != nil {
		t.Fatal(err)
	}
	if !Claimed(dir) {
		t.Error("a run that is held is not claimed")
	}
	if _, err := Take(dir); !errors.Is(err, ErrLocked) {
		t.Errorf("in use: %v", err)
	}
	if err := run.Close(); err != nil {
		t.Fatal(err)
	}
	if Claimed(dir) {
		t.Error("a run that was closed is claimed")
	}
	again, err := Take(dir + runningSuffix)
	if err != nil {
		t.Fatal(err)
	}
	if get(t, again.Path("input.yaml")) != "a" {
		t.Error("what was there is lost")
	}
	if err := again.Commit(); err != nil {
		t.Fatal(err)
	}
	if _, err := Take(dir); !errors.Is(err, ErrExists) {
		t.Errorf("whole: %v", err)
	}
	if exists(dir + runningSuffix) {
		t.Error("whole results are being continued")
	}
}

// Goal: whatever fails, the next attempt gets the run. Method: every operation fails in turn.
func TestTakeSurvivesEveryFault(t *testing.T) {
	forEachFault(t, false, func(t *testing.T, fs *faulty) {
		dir := filepath.Join(t.TempDir(), "argon")
		run, err := takeOn(fs, dir)
		if err == nil {
			_ = run.Close() // it may fail once more: the point is what is left
		}
		die(t, dir)
		run, err = Take(dir)
		if err != nil {
			t.Fatalf("after a fault: %v", err)
		}
		if err := run.Close(); err != nil {
			t.Fatal(err)
		}
	})
}

func TestClaimIsExclusive(t *testing.T) {
	dir := t.TempDir()
	release, err := Claim(filepath.Join(dir, "points"))
	if err != nil {
		t.Fatal(err)
	}
	if _, err := Claim(filepath.Join(dir, "points")); !errors.Is(err, ErrLocked) {
		t.Errorf("got %v", err)
	}
	if err := release(); err != nil {
		t.Fatal(err)
	}
	s := table.New("points", "one row a point")
	s.AddInt("point", "", "its number", []int64{1})
	if err := WriteTable(dir, s, map[string]string{"plan": "x"}); err != nil {
		t.Fatal(err)
	}
	got, err := ReadTable(filepath.Join(dir, "points.parquet"))
	if err != nil || got.Rows() != 1 {
		t.Errorf("got %v, %v", got, err)
	}
}
