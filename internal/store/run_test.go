package store

import (
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"
)

func TestCreateRefusesToOverwrite(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "deep", "er", "argon")
	run, err := Create(dir + "/")
	if err != nil {
		t.Fatal(err)
	}
	_, err = Create(dir)
	want := dir + ".running exists: a run there is unfinished; " +
		"continue it with: ionfall resume " + dir
	if !errors.Is(err, ErrExists) || !errors.Is(err, fs.ErrExist) || !strings.HasSuffix(
		err.Error(), want) {
		t.Errorf("got %v, want %s", err, want)
	}
	if err := work(run, "first"); err != nil {
		t.Fatal(err)
	}
	_, err = Create(dir)
	want = dir + " exists: name another folder, or continue it with: ionfall resume " + dir
	if !errors.Is(err, ErrExists) || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
	checkWhole(t, dir, "first")
	for _, suffix := range []string{".running", ".lock", ".replaced"} {
		if _, err := Create(dir + "-x" + suffix); err == nil {
			t.Errorf("a name that ends in %s is accepted", suffix)
		}
	}
	if got := contents(t, dir); got != "argon" {
		t.Errorf("left behind: %s", got)
	}
}

// TestCommitRefusesToOverwrite: a folder that appears while the run works is not replaced.
func TestCommitRefusesToOverwrite(t *testing.T) {
	for name, make := range map[string]func(dir string) error{
		"full":  func(dir string) error { return os.MkdirAll(filepath.Join(dir, "x"), 0o777) },
		"empty": func(dir string) error { return os.Mkdir(dir, 0o777) },
	} {
		dir := filepath.Join(t.TempDir(), "argon")
		run, err := Create(dir)
		if err != nil {
			t.Fatal(err)
		}
		if err := make(dir); err != nil {
			t.Fatal(err)
		}
		err = work(run, "new")
		if !errors.Is(err, ErrExists) || !strings.Contains(err.Error(), "kept in "+dir+".running") {
			t.Errorf("%s: %v", name, err)
		}
		checkWhole(t, dir+".running", "new")
		if err := run.Close(); err != nil {
			t.Error(err)
		}
	}
}

// TestRenameNew: the last look before the rename is the system's own, or at least there.
func TestRenameNew(t *testing.T) {
	dir := t.TempDir()
	from, to := filepath.Join(dir, "from"), filepath.Join(dir, "to")
	for _, d := range []string{from, to} {
		if err := os.Mkdir(d, 0o777); err != nil {
			t.Fatal(err)
		}
	}
	if err := (disk{}).renameNew(from, to); !errors.Is(err, fs.ErrExist) {
		t.Errorf("an empty folder was replaced: %v", err)
	}
	if err := os.Remove(to); err != nil {
		t.Fatal(err)
	}
	if err := (disk{}).renameNew(from, to); err != nil || !exists(to) || exists(from) {
		t.Errorf("not renamed: %v", err)
	}
}

func TestNextName(t *testing.T) {
	base := filepath.Join(t.TempDir(), "results", "argon")
	for i, want := range []string{base, base + "-2", base + "-3", base + "-4"} {
		if got := NextName(base); got != want {
			t.Fatalf("got %s, want %s", got, want)
		}
		run, err := CreateNext(base)
		if err != nil {
			t.Fatal(err)
		}
		if run.Dir() != want {
			t.Errorf("created %s, want %s", run.Dir(), want)
		}
		end := run.Commit
		if i%2 == 1 {
			end = run.Close // an interrupted run keeps its name too
		}
		if err := end(); err != nil {
			t.Fatal(err)
		}
	}
}

// TestCreateNextRace: runs that start at the same moment all get a folder, each its own.
func TestCreateNextRace(t *testing.T) {
	base := filepath.Join(t.TempDir(), "argon")
	const n = 12
	names := make([]string, n)
	var all sync.WaitGroup
	for i := range n {
		all.Go(func() {
			run, err := CreateNext(base)
			if err != nil {
				t.Error(err)
				return
			}
			names[i] = run.Dir()
			if err := work(run, "new"); err != nil {
				t.Error(err)
			}
		})
	}
	all.Wait()
	seen := map[string]bool{}
	for _, name := range names {
		if seen[name] {
			t.Errorf("%s given twice", name)
		}
		seen[name] = true
		checkWhole(t, name, "new")
	}
}

func TestReopenNothing(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "gone", "argon")
	want := "no results: neither " + dir + " nor " + dir + ".running is there"
	_, err := Reopen(dir)
	if !errors.Is(err, fs.ErrNotExist) || !strings.HasPrefix(err.Error(), want) {
		t.Errorf("got %v, want %s", err, want)
	}
	if _, _, err := Locate(dir); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("Locate: %v", err)
	}
}

func TestInterruptedRunGoesOn(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "argon")
	run, err := Create(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := run.WriteCheckpoint(state("first")); err != nil {
		t.Fatal(err)
	}
	put(t, run.Path("profiles.parquet.tmp"), "half")
	if err := run.Close(); err != nil {
		t.Fatal(err)
	}
	if folder, whole, err := Locate(dir); folder != dir+".running" || whole || err != nil {
		t.Errorf("located %s, %v, %v", folder, whole, err)
	}
	again, err := Reopen(dir)
	if err != nil {
		t.Fatal(err)
	}
	if exists(again.Path("profiles.parquet.tmp")) {
		t.Error("a part of a file is still there")
	}
	if b, err := again.ReadCheckpoint(); err != nil || !strings.HasPrefix(string(b), "first ") {
		t.Errorf("checkpoint: %v", err)
	}
	if err := work(again, "second"); err != nil {
		t.Fatal(err)
	}
	checkWhole(t, dir, "second")
	if exists(filepath.Join(dir, markerFile)) {
		t.Error("marker in a folder that continued nothing")
	}
}

// TestExistingCheckpointSurvivesItsEncoder: an error of the encoder itself changes nothing.
func TestExistingCheckpointSurvivesItsEncoder(t *testing.T) {
	run, err := Create(filepath.Join(t.TempDir(), "argon"))
	if err != nil {
		t.Fatal(err)
	}
	if err := run.WriteCheckpoint(state("old")); err != nil {
		t.Fatal(err)
	}
	full := errors.New("state out of bounds")
	err = run.write(CheckpointFile, func(w io.Writer) error {
		if _, err := w.Write([]byte("half a state")); err != nil {
			return err
		}
		return full
	})
	if !errors.Is(err, full) {
		t.Errorf("got %v", err)
	}
	b, err := run.ReadCheckpoint()
	if err != nil {
		t.Fatal(err)
	}
	if name, err := stateName(b); name != "old" || err != nil {
		t.Errorf("checkpoint %q, %v", name, err)
	}
	if exists(run.Path(CheckpointFile + tempSuffix)) {
		t.Error("the half is left behind")
	}
	if err := run.Close(); err != nil {
		t.Error(err)
	}
}

func TestNamesAndClosing(t *testing.T) {
	run, err := Create(filepath.Join(t.TempDir(), "argon"))
	if err != nil {
		t.Fatal(err)
	}
	for _, name := range []string{"", ".", "..", "../x", "a/b", "/x", "continues", "x.tmp"} {
		if err := run.WriteFile(name, nil); err == nil {
			t.Errorf("file name %q is accepted", name)
		}
	}
	if err := run.WriteFile("state.json", []byte("{}")); err != nil {
		t.Fatal(err)
	}
	for range 2 { // the second time it is gone already
		if err := run.Remove("state.json"); err != nil || exists(run.Path("state.json")) {
			t.Errorf("Remove: %v", err)
		}
	}
	if err := run.Commit(); err != nil {
		t.Fatal(err)
	}
	if err := run.Close(); err != nil {
		t.Errorf("Close after Commit: %v", err)
	}
	if err := run.WriteFile("late", nil); !errors.Is(err, ErrClosed) {
		t.Errorf("WriteFile after Commit: %v", err)
	}
	if err := run.Commit(); !errors.Is(err, ErrClosed) {
		t.Errorf("Commit after Commit: %v", err)
	}
	if run.Path("x") != filepath.Join(run.Dir(), "x") {
		t.Errorf("after Commit the files are in %s", run.Path(""))
	}
	if err := WriteFile(run.Path("report.html"), []byte("page")); err != nil {
		t.Fatal(err)
	}
	if get(t, run.Path("report.html")) != "page" || exists(run.Path("report.html.tmp")) {
		t.Error("report.html is not written")
	}
}
