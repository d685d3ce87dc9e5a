package store

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"time"

	"ionfall/internal/table"
)

// Take starts a run in dir.running, or takes up the interrupted one that is there. Where the
// results are whole already it returns an error that is ErrExists, where another process works at
// them one that is ErrLocked: processes that share out many runs need no other agreement.
func Take(dir string) (*Run, error) { return takeOn(disk{}, dir) }

func takeOn(fs fsys, dir string) (*Run, error) {
	dir = strings.TrimSuffix(filepath.Clean(dir), runningSuffix)
	if exists(dir) {
		return nil, finished(dir)
	}
	if err := os.MkdirAll(filepath.Dir(dir), 0o777); err != nil {
		return nil, fmt.Errorf("results folder %s: %w", dir, err)
	}
	l, err := acquire(fs, dir)
	if err != nil {
		return nil, err
	}
	run := &Run{fs: fs, dir: dir, folder: dir + runningSuffix, lock: l}
	if err := run.take(); err != nil {
		return nil, errors.Join(fmt.Errorf("results folder: %w", err), run.release())
	}
	return run, nil
}

// take makes or tidies the folder of a claimed run.
func (r *Run) take() error {
	if err := r.repair(); err != nil {
		return err
	}
	if exists(r.dir) { // finished since, by another process
		return finished(r.dir)
	}
	if exists(r.folder) {
		return removeTemps(r.fs, r.folder)
	}
	if err := r.fs.mkdir(r.folder); err != nil {
		return err
	}
	return r.fs.syncDir(filepath.Dir(r.dir))
}

// Claimed reports whether a process that lives, as far as can be told, works at the results of dir.
func Claimed(dir string) bool {
	path := strings.TrimSuffix(filepath.Clean(dir), runningSuffix) + lockSuffix
	info, err := os.Stat(path)
	if err != nil {
		return false
	}
	c, _, err := readClaim(path, path)
	// The clocks of machines that share a disk may differ by some seconds, which is good enough for
	// telling people.
	return err == nil && !c.void(time.Since(info.ModTime()))
}

// Claim takes the exclusive name path.lock, or returns an error that is ErrLocked. release gives it
// up. It is for files that several processes write.
func Claim(path string) (release func() error, err error) {
	l, err := acquire(disk{}, filepath.Clean(path))
	if err != nil {
		return nil, err
	}
	return func() error { return l.release(disk{}) }, nil
}

// WriteTable writes a table as <name>.parquet into a folder that is no run, in a single step. Its
// writers must not do so at the same time: see Claim.
func WriteTable(folder string, t *table.Table, meta map[string]string) error {
	content, err := tableContent(t, meta)
	if err != nil {
		return err
	}
	path := filepath.Join(folder, t.Name+tableSuffix)
	if err := replace(disk{}, path, content); err != nil {
		return fmt.Errorf("writing %s: %w", path, err)
	}
	return nil
}

// tableContent returns what writes the file of a table.
func tableContent(t *table.Table, meta map[string]string) (func(io.Writer) error, error) {
	if err := t.Validate(); err != nil {
		return nil, err
	}
	own, err := metadata(t)
	if err != nil {
		return nil, err
	}
	for key, value := range meta {
		if _, taken := own[key]; taken {
			return nil, fmt.Errorf("table %q: the metadata key %q is reserved", t.Name, key)
		}
		own[key] = value
	}
	return func(w io.Writer) error { return writeWhole(w, t, own) }, nil
}
