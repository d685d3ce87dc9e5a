package store

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// Reopen takes up an interrupted run (dir.running is there), or starts to continue a finished one
// in a dir.running of its own, leaving dir as it is until Commit. dir may be given with the suffix.
// What a crash left half done is put right first.
func Reopen(dir string) (*Run, error) { return reopenOn(disk{}, dir) }

// Locate returns the folder to read the results of dir from, and whether it is whole. It changes
// nothing.
func Locate(dir string) (folder string, whole bool, err error) {
	dir = strings.TrimSuffix(filepath.Clean(dir), runningSuffix)
	switch {
	case exists(dir):
		return dir, true, nil
	case exists(dir+replacedSuffix) && exists(marker(dir+runningSuffix)):
		return dir + replacedSuffix, true, nil
	case exists(dir + runningSuffix):
		return dir + runningSuffix, false, nil
	}
	return "", false, nothingThere(dir)
}

func nothingThere(dir string) error {
	return fmt.Errorf("no results: neither %s nor %s is there: %w",
		dir, dir+runningSuffix, fs.ErrNotExist)
}

func reopenOn(fs fsys, dir string) (*Run, error) {
	dir = strings.TrimSuffix(filepath.Clean(dir), runningSuffix)
	if _, _, err := Locate(dir); err != nil {
		return nil, err
	}
	l, err := acquire(fs, dir)
	if err != nil {
		return nil, err
	}
	run := &Run{fs: fs, dir: dir, folder: dir + runningSuffix, lock: l}
	if err := run.prepare(); err != nil {
		return nil, errors.Join(fmt.Errorf("reopening %s: %w", dir, err), run.release())
	}
	return run, nil
}

// prepare brings the folders of a claimed run into the state in which it can be written.
func (r *Run) prepare() error {
	if err := r.repair(); err != nil {
		return err
	}
	continuing := exists(r.dir)
	if !exists(r.folder) {
		if !continuing {
			return nothingThere(r.dir) // it was there before the claim: another run has moved it
		}
		if err := r.fs.mkdir(r.folder); err != nil {
			return err
		}
	}
	if err := removeTemps(r.fs, r.folder); err != nil {
		return err
	}
	if !continuing {
		return nil
	}
	return r.continueFrom(r.dir)
}

// repair finishes a Commit that a crash cut short; doc.go lists the states.
func (r *Run) repair() error {
	replaced := r.dir + replacedSuffix
	if !exists(r.dir) && exists(replaced) && exists(marker(r.folder)) {
		if err := r.fs.renameNew(r.folder, r.dir); err != nil {
			return err
		}
	}
	if exists(r.dir) && exists(marker(r.dir)) {
		return r.clearReplaced()
	}
	return nil
}

// continueFrom fills the folder with what a run starts from: the checkpoint, the input and the log
// of the results in old. What is there already stays.
func (r *Run) continueFrom(old string) error {
	if !exists(marker(r.folder)) {
		entries, err := os.ReadDir(r.folder)
		if err != nil {
			return err
		}
		if len(entries) > 0 {
			return fmt.Errorf("%s is there beside %s, but was not made to continue it: "+
				"move one of them away", r.folder, old)
		}
		if err := r.copyText(marker(r.folder), "continues "+old+"\n"); err != nil {
			return err
		}
	}
	from, to := filepath.Join(old, CheckpointFile), filepath.Join(r.folder, CheckpointFile)
	if exists(from) && !exists(to) {
		// a link is enough: checkpoints are replaced, never written into
		if err := r.fs.link(from, to); err != nil {
			if err := copyFile(r.fs, from, to); err != nil {
				return err
			}
		}
	}
	return carryOver(r.fs, old, r.folder, needed)
}

func marker(folder string) string { return filepath.Join(folder, markerFile) }
