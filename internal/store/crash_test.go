package store

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// forEachFault runs f with a disk that fails at operation 1, 2, 3 ... until f has no fault to
// meet any more, with and without a crash at the fault, and returns the number of operations.
func forEachFault(t *testing.T, noExchange bool, f func(t *testing.T, fs *faulty)) int {
	t.Helper()
	most := 0
	for _, crash := range []bool{false, true} {
		for k := 1; ; k++ {
			fs := newFaulty(k, crash, noExchange)
			t.Run(fmt.Sprintf("crash=%v/op=%d", crash, k), func(t *testing.T) { f(t, fs) })
			if t.Failed() || fs.n < k {
				most = max(most, k-1)
				break
			}
		}
	}
	return most
}

// TestCheckpointSurvivesEveryFault: whichever operation fails while a checkpoint is replaced, the
// old one or the new one is there, whole, and the error names the file and where the results are.
func TestCheckpointSurvivesEveryFault(t *testing.T) {
	most := forEachFault(t, false, func(t *testing.T, fs *faulty) {
		dir := filepath.Join(t.TempDir(), "argon")
		run, err := createOn(memory{}, dir)
		if err != nil {
			t.Fatal(err)
		}
		if err := run.WriteCheckpoint(state("old")); err != nil {
			t.Fatal(err)
		}
		run.fs = fs
		err = run.WriteCheckpoint(state("new"))
		if failed := fs.n >= fs.failAt; failed != (err != nil) {
			t.Fatalf("fault %v, error %v", failed, err)
		}
		if err != nil {
			for _, want := range []string{
				run.Path(CheckpointFile), "no space left",
				"kept in " + dir + ".running",
			} {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("%q is missing from: %v", want, err)
				}
			}
		}
		run.fs = memory{}
		if err := run.Close(); err != nil {
			t.Fatal(err)
		}
		again, err := reopenOn(memory{}, dir)
		if err != nil {
			t.Fatal(err)
		}
		b, err := again.ReadCheckpoint()
		if err != nil {
			t.Fatal(err)
		}
		if _, err := stateName(b); err != nil {
			t.Error(err)
		}
		if err := work(again, "later"); err != nil {
			t.Error(err)
		}
		if got := contents(t, dir); got != "argon" {
			t.Errorf("left behind: %s", got)
		}
	})
	if most < 7 { // create, two writes, sync, close, rename, sync of the folder
		t.Errorf("only %d operations seen", most)
	}
}

// TestFirstRunSurvivesEveryFault: a folder without suffix is whole, whatever happened before.
func TestFirstRunSurvivesEveryFault(t *testing.T) {
	forEachFault(t, false, func(t *testing.T, fs *faulty) {
		dir := filepath.Join(t.TempDir(), "argon")
		run, err := createOn(fs, dir)
		if err == nil {
			err = work(run, "new")
		}
		if failed := fs.n >= fs.failAt; failed && err == nil {
			t.Error("a fault without an error")
		}
		if run != nil {
			_ = run.Close() // it may fail once more: the point is what is left
		}
		die(t, dir)
		if exists(dir) && exists(dir+runningSuffix) {
			t.Error("both folders are there")
		}
		if exists(dir) {
			checkWhole(t, dir, "new")
			return
		}
		if err == nil {
			t.Error("committed, but not there")
		}
		if !exists(dir + runningSuffix) {
			again, err := Create(dir)
			if err != nil {
				t.Fatalf("cannot start again: %v", err)
			}
			_ = again.Close()
		}
		again, err := reopenOn(memory{}, dir)
		if err != nil {
			t.Fatal(err)
		}
		if err := work(again, "later"); err != nil {
			t.Fatal(err)
		}
		checkWhole(t, dir, "later")
	})
}

// checkWhole: the folder holds the results of one name and nothing unfinished.
func checkWhole(t *testing.T, folder, name string) {
	t.Helper()
	got, err := stateName([]byte(get(t, filepath.Join(folder, CheckpointFile))))
	if err != nil {
		t.Error(err)
	}
	if summary := get(t, filepath.Join(folder, SummaryFile)); got != name || summary != name {
		t.Errorf("checkpoint %q, summary %q, want %q", got, summary, name)
	}
}

// TestContinuationSurvivesEveryFault: while a finished folder is continued and replaced, the old
// or the new results can be read whole at every moment, the user's files stay, and the run can be
// taken up again; with exchanging names and without.
func TestContinuationSurvivesEveryFault(t *testing.T) {
	for _, noExchange := range []bool{false, true} {
		t.Run(fmt.Sprintf("noExchange=%v", noExchange), func(t *testing.T) {
			most := forEachFault(t, noExchange, faultWhileContinuing)
			if most < 50 {
				t.Errorf("only %d operations seen", most)
			}
		})
	}
}

func faultWhileContinuing(t *testing.T, fs *faulty) {
	dir := finishedRun(t)
	run, err := reopenOn(fs, dir)
	if err == nil {
		err = work(run, "new")
	}
	if failed := fs.n >= fs.failAt; failed && err == nil && fs.crash {
		t.Error("a crash without an error")
	}
	if run != nil {
		_ = run.Close() // it may fail once more: the point is what is left
	}
	die(t, dir)

	folder, whole, locateErr := Locate(dir)
	if locateErr != nil || !whole {
		t.Fatalf("no whole results: %s, %v", contents(t, dir), locateErr)
	}
	found := get(t, filepath.Join(folder, SummaryFile))
	if found != "old" && (found != "new" || err != nil && !exists(dir)) {
		t.Errorf("found %q after %v", found, err)
	}
	if err == nil && found != "new" {
		t.Errorf("committed, but found %q", found)
	}
	checkWhole(t, folder, found)
	checkUserFiles(t, folder)

	again, err := reopenOn(memory{}, dir)
	if err != nil {
		t.Fatalf("%v, with %s", err, contents(t, dir))
	}
	checkStartFiles(t, again)
	if err := work(again, "later"); err != nil {
		t.Fatal(err)
	}
	checkWhole(t, dir, "later")
	checkUserFiles(t, dir)
	if got := contents(t, dir); got != "argon" {
		t.Errorf("left behind: %s", got)
	}
	if exists(filepath.Join(dir, markerFile)) || exists(filepath.Join(dir, "history.parquet")) {
		t.Error("the marker or a table of the old results is in the new ones")
	}
}

func checkUserFiles(t *testing.T, folder string) {
	t.Helper()
	for name, want := range map[string]string{
		"input.yaml": "gap: 40 mm\n", "notes.txt": "mine",
		"figures/one.svg": "<svg/>",
	} {
		if got := get(t, filepath.Join(folder, name)); got != want {
			t.Errorf("%s: %q, want %q", name, got, want)
		}
	}
}

func checkStartFiles(t *testing.T, run *Run) {
	t.Helper()
	b, err := run.ReadCheckpoint()
	if err != nil {
		t.Fatal(err)
	}
	if _, err := stateName(b); err != nil {
		t.Error(err)
	}
	if got := get(t, run.Path("input.yaml")); got != "gap: 40 mm\n" {
		t.Errorf("input.yaml: %q", got)
	}
}

// TestFinishedFolderIsNotTouched: until Commit nothing of it changes, not even times.
func TestFinishedFolderIsNotTouched(t *testing.T) {
	dir := finishedRun(t)
	before := snapshot(t, dir)
	run, err := Reopen(dir)
	if err != nil {
		t.Fatal(err)
	}
	if run.Path("x") != filepath.Join(dir+".running", "x") {
		t.Errorf("works in %s", run.Path("x"))
	}
	if err := run.WriteCheckpoint(state("new")); err != nil {
		t.Fatal(err)
	}
	put(t, run.Path("input.yaml"), "changed")
	if err := run.Close(); err != nil {
		t.Fatal(err)
	}
	if after := snapshot(t, dir); after != before {
		t.Errorf("before:\n%s\nafter:\n%s", before, after)
	}
	again, err := Reopen(dir + ".running")
	if err != nil {
		t.Fatal(err)
	}
	b, err := again.ReadCheckpoint()
	if err != nil {
		t.Fatal(err)
	}
	if name, err := stateName(b); name != "new" || err != nil {
		t.Errorf("goes on from checkpoint %q, want the newest: %v", name, err)
	}
	if get(t, again.Path("input.yaml")) != "changed" {
		t.Error("what the continuation has written was overwritten")
	}
	if err := again.Close(); err != nil {
		t.Fatal(err)
	}
}

// snapshot lists all files of a folder with size, time and content.
func snapshot(t *testing.T, dir string) string {
	t.Helper()
	var b strings.Builder
	err := filepath.Walk(dir, func(path string, info os.FileInfo, err error) error {
		if err != nil {
			return err
		}
		fmt.Fprintln(&b, path, info.Mode(), info.ModTime().UnixNano())
		if info.Mode().IsRegular() {
			text := get(t, path)
			fmt.Fprintln(&b, len(text), text[:min(40, len(text))])
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// TestOrderOnDisk: nothing is renamed before it is synced, and Commit leaves nothing unsynced but
// the folder in which the claim was removed. A file that the run did not write itself (a log)
// counts too.
func TestOrderOnDisk(t *testing.T) {
	for _, noExchange := range []bool{false, true} {
		dir := finishedRun(t)
		fs := newFaulty(0, false, noExchange)
		run, err := reopenOn(fs, dir)
		if err != nil {
			t.Fatal(err)
		}
		put(t, run.Path("run.log"), "started\n")
		fs.unsynced[run.Path("run.log")] = true
		fs.unsynced[filepath.Dir(run.Path("run.log"))] = true
		if err := work(run, "new"); err != nil {
			t.Fatal(err)
		}
		if len(fs.disorder) > 0 {
			t.Errorf("renamed before synced: %q", fs.disorder)
		}
		for path := range fs.unsynced {
			if path != filepath.Dir(dir) && exists(path) {
				t.Errorf("not synced: %s", path)
			}
		}
		if get(t, filepath.Join(dir, "run.log")) != "started\n" {
			t.Error("the log is lost")
		}
	}
}

// TestUnrelatedFoldersAreRefused: Reopen and Commit delete nothing that is not surely theirs.
func TestUnrelatedFoldersAreRefused(t *testing.T) {
	dir := finishedRun(t)
	if err := os.Mkdir(dir+".running", 0o777); err != nil {
		t.Fatal(err)
	}
	put(t, dir+".running/data", "precious")
	if _, err := Reopen(dir); err == nil || !strings.Contains(err.Error(), "move one of them away") {
		t.Errorf("foreign .running: %v", err)
	}
	if get(t, dir+".running/data") != "precious" {
		t.Error("a foreign file is gone")
	}
	if err := os.RemoveAll(dir + ".running"); err != nil {
		t.Fatal(err)
	}
	run, err := Reopen(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.Mkdir(dir+".replaced", 0o777); err != nil {
		t.Fatal(err)
	}
	if err := work(run, "new"); !errors.Is(err, ErrExists) {
		t.Errorf("foreign .replaced: %v", err)
	}
	if err := os.Remove(dir + ".replaced"); err != nil {
		t.Errorf("a foreign folder is gone: %v", err)
	}
	checkWhole(t, dir, "old")
	if err := run.Commit(); err != nil {
		t.Errorf("second try: %v", err)
	}
	checkWhole(t, dir, "new")
}
