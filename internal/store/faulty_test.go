package store

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var errInjected = errors.New("no space left")

// memory is a disk that does not wait for its syncs: those of the tests count, but survive nothing.
type memory struct{ disk }

func (memory) syncFile(string) error { return nil }
func (memory) syncDir(string) error  { return nil }

func (m memory) create(path string) (file, error) {
	f, err := m.disk.create(path)
	return memoryFile{f}, err
}

type memoryFile struct{ file }

func (memoryFile) Sync() error { return nil }

// faulty is a disk whose operation number failAt fails. When crash is set so does every later one:
// then nothing more reaches the disk, as after the end of the process.
type faulty struct {
	disk       fsys
	n, failAt  int
	crash      bool
	noExchange bool
	unsynced   map[string]bool // files and folders with changes that are not on the disk
	disorder   []string        // renames of what was not synced
}

func newFaulty(failAt int, crash, noExchange bool) *faulty {
	return &faulty{
		disk: memory{}, failAt: failAt, crash: crash, noExchange: noExchange,
		unsynced: map[string]bool{},
	}
}

func (f *faulty) step() error {
	f.n++
	if f.n == f.failAt || f.crash && f.failAt > 0 && f.n > f.failAt {
		return errInjected
	}
	return nil
}

// do runs an operation that changes the folders of the given paths.
func (f *faulty) do(op func() error, paths ...string) error {
	if err := f.step(); err != nil {
		return err
	}
	for _, path := range paths {
		f.unsynced[filepath.Dir(path)] = true
	}
	return op()
}

func (f *faulty) create(path string) (file, error) {
	var opened file
	err := f.do(func() (err error) { opened, err = f.disk.create(path); return err }, path)
	if err != nil {
		return nil, err
	}
	f.unsynced[path] = true
	return &faultyFile{f, opened, path}, nil
}

func (f *faulty) mkdir(path string) error {
	return f.do(func() error { return f.disk.mkdir(path) }, path)
}

func (f *faulty) link(from, to string) error {
	return f.do(func() error { return f.disk.link(from, to) }, to)
}

func (f *faulty) symlink(target, path string) error {
	return f.do(func() error { return f.disk.symlink(target, path) }, path)
}

func (f *faulty) remove(path string) error {
	return f.do(func() error { return f.disk.remove(path) }, path)
}

func (f *faulty) rename(from, to string) error {
	f.inOrder(from)
	return f.do(func() error { return f.disk.rename(from, to) }, from, to)
}

func (f *faulty) renameNew(from, to string) error {
	f.inOrder(from)
	return f.do(func() error { return f.disk.renameNew(from, to) }, from, to)
}

func (f *faulty) exchange(a, b string) error {
	if f.noExchange {
		return errors.ErrUnsupported
	}
	f.inOrder(a)
	return f.do(func() error { return f.disk.exchange(a, b) }, a, b)
}

// inOrder notes when what is renamed, or anything in it, is not on the disk yet.
func (f *faulty) inOrder(path string) {
	for p, dirty := range f.unsynced {
		if dirty && (p == path || strings.HasPrefix(p, path+string(filepath.Separator))) {
			f.disorder = append(f.disorder, p)
		}
	}
}

func (f *faulty) syncFile(path string) error {
	return f.synced(path, f.do(func() error { return f.disk.syncFile(path) }))
}

func (f *faulty) syncDir(path string) error {
	return f.synced(path, f.do(func() error { return f.disk.syncDir(path) }))
}

func (f *faulty) synced(path string, err error) error {
	if err == nil {
		delete(f.unsynced, path)
	}
	return err
}

type faultyFile struct {
	fs   *faulty
	file file
	path string
}

// Write fails halfway: a full disk takes a part.
func (f *faultyFile) Write(b []byte) (int, error) {
	if err := f.fs.step(); err != nil {
		n, _ := f.file.Write(b[:len(b)/2])
		return n, err
	}
	f.fs.unsynced[f.path] = true
	return f.file.Write(b)
}

func (f *faultyFile) Sync() error {
	return f.fs.synced(f.path, f.fs.do(f.file.Sync))
}

func (f *faultyFile) Close() error {
	err := f.fs.step()
	return errors.Join(err, f.file.Close())
}

// die removes the claims on dir: the process that this test stands for has ended.
func die(t *testing.T, dir string) {
	t.Helper()
	entries, err := os.ReadDir(filepath.Dir(dir))
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if strings.HasPrefix(e.Name(), filepath.Base(dir)+lockSuffix) {
			if err := os.Remove(filepath.Join(filepath.Dir(dir), e.Name())); err != nil {
				t.Fatal(err)
			}
		}
	}
}

func put(t *testing.T, path, text string) {
	t.Helper()
	if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
}

func get(t *testing.T, path string) string {
	t.Helper()
	b, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return string(b)
}

// state is a checkpoint whose every part says which one it is, longer than any buffer.
func state(name string) *strings.Reader {
	return strings.NewReader(strings.Repeat(name+" ", (writeBuffer+writeBuffer/2)/(len(name)+1)))
}

// stateName returns which checkpoint the bytes are, or an error when they are not a whole one.
func stateName(b []byte) (string, error) {
	name, _, _ := strings.Cut(string(b), " ")
	whole := make([]byte, state(name).Len())
	if _, err := state(name).Read(whole); err != nil {
		return "", err
	}
	if string(b) != string(whole) {
		return "", fmt.Errorf("checkpoint of %d bytes is not whole", len(b))
	}
	return name, nil
}

// work writes what a run writes, all of it under one name.
func work(run *Run, name string) error {
	if err := run.WriteCheckpoint(state(name)); err != nil {
		return err
	}
	if err := run.WriteFile(SummaryFile, []byte(name)); err != nil {
		return err
	}
	return run.Commit()
}

// finishedRun makes a whole folder that also holds what a user has put there.
func finishedRun(t *testing.T) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "results", "argon")
	run, err := createOn(memory{}, dir)
	if err != nil {
		t.Fatal(err)
	}
	put(t, run.Path("input.yaml"), "gap: 40 mm\n")
	put(t, run.Path("notes.txt"), "mine")
	if err := os.Mkdir(run.Path("figures"), 0o777); err != nil {
		t.Fatal(err)
	}
	put(t, run.Path("figures/one.svg"), "<svg/>")
	put(t, run.Path("history.parquet"), "old")
	if err := work(run, "old"); err != nil {
		t.Fatal(err)
	}
	return dir
}

// contents returns the names in the folder above dir.
func contents(t *testing.T, dir string) string {
	t.Helper()
	entries, err := os.ReadDir(filepath.Dir(dir))
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	return strings.Join(names, " ")
}
