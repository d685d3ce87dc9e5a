package store

import (
	"errors"
	"fmt"
	"path/filepath"
)

// Commit makes the results whole under their name: it syncs every file, whoever wrote it, and
// renames the folder, in the place of the one that was continued. It refuses to replace any other
// folder. When it fails the results are still in one of the two; the error says where.
func (r *Run) Commit() error {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.lock == nil {
		return fmt.Errorf("commit: %w: %s", ErrClosed, r.folder)
	}
	if err := r.lock.check(); err != nil {
		return fmt.Errorf("commit: %w", err)
	}
	if err := r.finish(); err != nil {
		return fmt.Errorf("commit of %s: %w (results are kept in %s)", r.dir, err, r.folder)
	}
	r.folder = r.dir // from here on there is nothing to take back
	err := r.fs.syncDir(filepath.Dir(r.dir))
	if err == nil {
		err = r.clearReplaced()
	}
	if err != nil {
		err = fmt.Errorf("results are whole in %s, but cleaning up after them failed: %w",
			r.dir, err)
	}
	return errors.Join(err, r.release())
}

// finish syncs the folder and gives it its name.
func (r *Run) finish() error {
	if err := removeTemps(r.fs, r.folder); err != nil {
		return err
	}
	continuing := exists(r.dir)
	switch {
	case continuing && !exists(marker(r.folder)):
		return finished(r.dir)
	case exists(r.dir + replacedSuffix):
		return &existsError{r.dir + replacedSuffix, "its name is needed; rename it"}
	}
	if continuing {
		if err := carryOver(r.fs, r.dir, r.folder, kept); err != nil {
			return err
		}
	}
	if err := syncTree(r.fs, r.folder); err != nil {
		return err
	}
	if err := r.lock.check(); err != nil { // syncing may have taken long
		return err
	}
	rename := r.fs.renameNew
	if continuing {
		rename = r.swap
	}
	return rename(r.folder, r.dir)
}

// swap puts the continuation in the place of what it continues, which then bears the name of the
// continuation or, where the system cannot exchange names, the one with replacedSuffix.
func (r *Run) swap(from, to string) error {
	err := r.fs.exchange(from, to)
	if !errors.Is(err, errors.ErrUnsupported) {
		return err
	}
	aside := to + replacedSuffix
	if err := r.fs.renameNew(to, aside); err != nil {
		return err
	}
	if err := r.fs.renameNew(from, to); err != nil {
		return errors.Join(err, r.fs.renameNew(aside, to))
	}
	return nil
}

// clearReplaced deletes what the results in dir have replaced, and last the marker that says so.
func (r *Run) clearReplaced() error {
	if !exists(marker(r.dir)) {
		return nil
	}
	for _, old := range []string{r.dir + runningSuffix, r.dir + replacedSuffix} {
		if err := removeTree(r.fs, old); err != nil {
			return err
		}
	}
	if err := r.fs.syncDir(filepath.Dir(r.dir)); err != nil {
		return err
	}
	if err := r.fs.remove(marker(r.dir)); err != nil {
		return err
	}
	return r.fs.syncDir(r.dir)
}
