package store

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
	"sync"
)

const (
	runningSuffix  = ".running"
	replacedSuffix = ".replaced"
	tempSuffix     = ".tmp"
	// CheckpointFile holds the whole state of a run.
	CheckpointFile = "checkpoint.bin"
	// SummaryFile holds the scalars, checks and provenance.
	SummaryFile = "summary.json"
	// markerFile is in a folder that continues finished results until it has replaced them.
	markerFile = "continues"
	// writeBuffer joins the small writes of an encoder; larger ones pass it by.
	writeBuffer = 1 << 16
)

// Run is a results folder that this process may write to, from several goroutines at once.
type Run struct {
	mu     sync.Mutex
	fs     fsys
	dir    string // the name of the finished folder
	folder string // where the files are now
	lock   *lock  // nil when closed
}

// Path returns the path of a file of the run, where it is now: Commit renames the folder. A file
// that is written through it must be closed before Commit.
func (r *Run) Path(name string) string {
	r.mu.Lock()
	defer r.mu.Unlock()
	return filepath.Join(r.folder, name)
}

// Dir returns the name that the folder has, or will have, when finished.
func (r *Run) Dir() string { return r.dir }

// WriteFile writes a file, replacing one of that name in a single step.
func (r *Run) WriteFile(name string, data []byte) error {
	return r.write(name, func(w io.Writer) error {
		_, err := w.Write(data)
		return err
	})
}

// WriteCheckpoint writes the state of the run. Whatever fails, the previous one is still there.
func (r *Run) WriteCheckpoint(enc io.WriterTo) error {
	return r.write(CheckpointFile, func(w io.Writer) error {
		_, err := enc.WriteTo(w)
		return err
	})
}

// ReadCheckpoint returns the last state that was written.
func (r *Run) ReadCheckpoint() ([]byte, error) { return os.ReadFile(r.Path(CheckpointFile)) }

// Remove deletes a file of the run; one that is not there is no error.
func (r *Run) Remove(name string) error {
	r.mu.Lock()
	defer r.mu.Unlock()
	if err := r.ready(name); err != nil {
		return err
	}
	return discard(r.fs, filepath.Join(r.folder, name))
}

// write replaces one file of the folder in a single step.
func (r *Run) write(name string, content func(io.Writer) error) error {
	r.mu.Lock()
	defer r.mu.Unlock()
	if err := r.ready(name); err != nil {
		return err
	}
	path := filepath.Join(r.folder, name)
	if err := replace(r.fs, path, content); err != nil {
		return fmt.Errorf("writing %s: %w (results so far are kept in %s)", path, err, r.folder)
	}
	return nil
}

// ready reports why a file of that name cannot be written now.
func (r *Run) ready(name string) error {
	if r.lock == nil {
		return fmt.Errorf("writing %s: %w: %s", name, ErrClosed, r.folder)
	}
	reserved := name == markerFile || strings.HasSuffix(name, tempSuffix)
	if name == "" || name == "." || !filepath.IsLocal(name) || filepath.Base(name) != name ||
		reserved {
		return fmt.Errorf("writing %q: want a plain file name that is not reserved", name)
	}
	if err := r.lock.check(); err != nil {
		return fmt.Errorf("writing %s: %w", name, err)
	}
	return nil
}

// Close gives the folder up without finishing it, for Reopen. After Commit it does nothing.
func (r *Run) Close() error {
	r.mu.Lock()
	defer r.mu.Unlock()
	return r.release()
}

func (r *Run) release() error {
	if r.lock == nil {
		return nil
	}
	l := r.lock
	r.lock = nil
	return l.release(r.fs)
}

// WriteFile writes a file outside a run, or into a finished folder (a report), replacing one of
// that name in a single step.
func WriteFile(path string, data []byte) error {
	err := replace(disk{}, path, func(w io.Writer) error {
		_, err := w.Write(data)
		return err
	})
	if err != nil {
		return fmt.Errorf("writing %s: %w", path, err)
	}
	return nil
}

// replace writes beside path, syncs, renames, and syncs the folder: a crash at any moment leaves
// the old file or the new one.
func replace(fs fsys, path string, content func(io.Writer) error) error {
	temp := path + tempSuffix
	f, err := fs.create(temp)
	if err != nil {
		return err
	}
	buffer := bufio.NewWriterSize(f, writeBuffer)
	err = content(buffer)
	if err == nil {
		err = buffer.Flush()
	}
	if err == nil {
		err = f.Sync()
	}
	if closeErr := f.Close(); err == nil {
		err = closeErr
	}
	if err == nil {
		err = fs.rename(temp, path)
	}
	if err != nil {
		return errors.Join(err, discard(fs, temp))
	}
	return fs.syncDir(filepath.Dir(path))
}
