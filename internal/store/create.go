package store

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
)

// maxNames bounds the search for a free name: nobody keeps that many runs of one case.
const maxNames = 100_000

// Create starts a run in dir.running, making its parents. It returns an error that is ErrExists
// when the results or an unfinished run are there already.
func Create(dir string) (*Run, error) { return createOn(disk{}, dir) }

// NextName returns the first of base, base-2, base-3 ... that no run has. Another process may take
// it before Create does; CreateNext goes on to the next name then.
func NextName(base string) string {
	base = filepath.Clean(base)
	name := base
	for i := 2; taken(name) != nil && i < maxNames; i++ {
		name = fmt.Sprintf("%s-%d", base, i)
	}
	return name
}

// CreateNext starts a run under the first free name of base, base-2, base-3 ...
func CreateNext(base string) (*Run, error) {
	for range maxNames {
		name := NextName(base)
		run, err := Create(name)
		switch {
		case err == nil:
			return run, nil
		case errors.Is(err, ErrLocked) && taken(name) == nil:
			continue // another process is between its claim and its folder
		case !errors.Is(err, ErrExists) && !errors.Is(err, ErrLocked):
			return nil, err
		}
	}
	return nil, fmt.Errorf("%w: no free name after %s", ErrExists, base)
}

func createOn(fs fsys, dir string) (*Run, error) {
	dir = filepath.Clean(dir)
	for _, suffix := range []string{runningSuffix, replacedSuffix, lockSuffix} {
		if strings.HasSuffix(dir, suffix) {
			return nil, fmt.Errorf("results folder %s: a name must not end in %s", dir, suffix)
		}
	}
	if err := taken(dir); err != nil {
		return nil, err
	}
	if err := os.MkdirAll(filepath.Dir(dir), 0o777); err != nil {
		return nil, fmt.Errorf("results folder %s: %w", dir, err)
	}
	l, err := acquire(fs, dir)
	if err != nil {
		return nil, err
	}
	run := &Run{fs: fs, dir: dir, folder: dir + runningSuffix, lock: l}
	// again, under the claim: a run may have finished since
	if err = taken(dir); err == nil {
		err = fs.mkdir(run.folder)
	}
	if err == nil {
		err = fs.syncDir(filepath.Dir(dir))
	}
	if err != nil {
		return nil, errors.Join(fmt.Errorf("results folder: %w", err), run.release())
	}
	return run, nil
}

// taken returns what is in the way of a new run, nil if nothing is.
func taken(dir string) error {
	switch {
	case exists(dir + runningSuffix):
		return unfinished(dir)
	case exists(dir):
		return finished(dir)
	case exists(dir + replacedSuffix):
		return &existsError{dir + replacedSuffix, "earlier results were moved there; " +
			"name another folder, or rename it"}
	}
	return nil
}
