package scan

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"ionfall/internal/store"
)

// folderVersion is that of scan.json. A reader refuses a newer one.
const folderVersion = 1

const (
	stateFile  = "scan.json"
	pointsName = "points"
	failedTail = ".failed.json"
)

// Folder is that of a scan, for any number of processes at once.
type Folder struct {
	Dir  string
	Plan *Plan
}

// identity is the content of scan.json.
type identity struct {
	Version int    `json:"version"`
	Points  int    `json:"points"`
	SHA256  string `json:"points_sha256"`
}

// Open makes the folder of a plan, or finds it: with the same points, or it is refused.
func Open(ctx context.Context, p *Plan, dir string) (*Folder, error) {
	f := &Folder{Dir: filepath.Clean(dir), Plan: p}
	if err := os.MkdirAll(filepath.Join(f.Dir, pointsName), 0o777); err != nil {
		return nil, fmt.Errorf("scan folder: %w", err)
	}
	release, err := claim(ctx, filepath.Join(f.Dir, "scan"))
	if err != nil {
		return nil, fmt.Errorf("scan folder: %w", err)
	}
	return f, errors.Join(f.identify(), release())
}

// Find returns the folder of a scan that was begun.
func Find(p *Plan, dir string) (*Folder, error) {
	f := &Folder{Dir: filepath.Clean(dir), Plan: p}
	if _, err := os.Stat(filepath.Join(f.Dir, stateFile)); err != nil {
		return nil, fmt.Errorf("no scan was begun in %s: %w", f.Dir, err)
	}
	return f, f.identify()
}

// Unopened returns the folder of a plan without looking at it or making it.
func Unopened(p *Plan, dir string) *Folder { return &Folder{Dir: filepath.Clean(dir), Plan: p} }

// identify compares the points with those of the folder, which a new one takes over.
func (f *Folder) identify() error {
	path := filepath.Join(f.Dir, stateFile)
	var is identity
	err := store.ReadJSON(path, &is)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return f.begin(path)
	case err != nil:
		return err
	case is.Version > folderVersion:
		return fmt.Errorf("%s: written by a newer version: version %d, this program reads up to %d",
			path, is.Version, folderVersion)
	case is.SHA256 != f.Plan.Fingerprint():
		return &OtherPlanError{f.Dir, f.Plan.file}
	}
	return f.readAdded()
}

// OtherPlanError says that a folder belongs to another plan.
type OtherPlanError struct{ dir, file string }

// Error tells what to do.
func (e *OtherPlanError) Error() string {
	return fmt.Sprintf("%s holds a scan of other points than %s now has: name another folder, or "+
		"undo the change of the plan or its base", e.dir, e.file)
}

// begin writes the files that say what the scan is; scan.json last, which makes it one.
func (f *Folder) begin(path string) error {
	p := f.Plan
	files := map[string][]byte{planFile: p.text, baseFile: p.base, listFile: p.list}
	for _, name := range []string{planFile, baseFile, listFile} {
		if files[name] == nil {
			continue
		}
		target := filepath.Join(f.Dir, name)
		if old, err := os.ReadFile(target); err == nil && bytes.Equal(old, files[name]) {
			continue // also that from which the plan was read
		}
		if err := store.WriteFile(target, files[name]); err != nil {
			return err
		}
	}
	text, err := json.MarshalIndent(identity{folderVersion, p.planned, p.Fingerprint()}, "", "  ")
	if err != nil {
		return err
	}
	return store.WriteFile(path, append(text, '\n'))
}

// claim waits for an exclusive name that others hold for moments only.
func claim(ctx context.Context, path string) (release func() error, err error) {
	for {
		release, err = store.Claim(path)
		if !errors.Is(err, store.ErrLocked) {
			return release, err
		}
		select {
		case <-ctx.Done():
			return nil, err
		case <-time.After(200 * time.Millisecond):
		}
	}
}

// PointDir is the results folder of a point.
func (f *Folder) PointDir(number int) string {
	return filepath.Join(f.Dir, pointsName, pointName(number))
}

// The states of a point.
const (
	Waiting     = "waiting"
	Running     = "running"
	Interrupted = "interrupted"
	Done        = "done"
	Failed      = "failed"
)

// State tells how far a point is, from its folder alone.
func (f *Folder) State(number int) string {
	dir := f.PointDir(number)
	_, whole, err := store.Locate(dir)
	switch {
	case err == nil && whole:
		return Done
	case f.failure(number) != "":
		return Failed
	case store.Claimed(dir):
		return Running
	case err == nil:
		return Interrupted
	}
	return Waiting
}

// failure is the reason why a point cannot be computed, or "".
func (f *Folder) failure(number int) string {
	var reason failure
	err := store.ReadJSON(f.PointDir(number)+failedTail, &reason)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return ""
	case err != nil:
		return err.Error()
	}
	return reason.Reason
}

// failure is the content of a file that says why a point cannot be computed.
type failure struct {
	Reason  string `json:"reason"`
	Version string `json:"version"`
	Time    string `json:"time"`
}

// recordFailure keeps the reason. The point is not tried again until that file is gone.
func (f *Folder) recordFailure(number int, reason error, version string) error {
	text, err := json.MarshalIndent(failure{
		reason.Error(), version, time.Now().UTC().Format(time.RFC3339),
	}, "", "  ")
	if err != nil {
		return err
	}
	return store.WriteFile(f.PointDir(number)+failedTail, append(text, '\n'))
}

// Retry forgets the failures, and returns how many there were.
func (f *Folder) Retry() (int, error) {
	n := 0
	for _, p := range f.Plan.Points {
		err := os.Remove(f.PointDir(p.Number) + failedTail)
		switch {
		case err == nil:
			n++
		case !errors.Is(err, fs.ErrNotExist):
			return n, err
		}
	}
	return n, nil
}
