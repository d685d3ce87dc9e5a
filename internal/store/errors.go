package store

import (
	"errors"
	"fmt"
	"io/fs"
)

// failure is a kind of error, for errors.Is.
type failure string

// Error returns what failed.
func (f failure) Error() string { return string(f) }

const (
	// ErrExists says that a folder would have to be overwritten.
	ErrExists failure = "results folder exists"
	// ErrLocked says that another process works in the folder.
	ErrLocked failure = "results folder is in use"
	// ErrLostClaim says that another process has taken the folder over in the meantime.
	ErrLostClaim failure = "results folder was taken over by another process"
	// ErrClosed says that the run is committed or closed and takes no more files.
	ErrClosed failure = "results folder is closed"
)

// existsError names the folder in the way and what to do about it.
type existsError struct {
	path, advice string
}

func (e *existsError) Error() string { return fmt.Sprintf("%s exists: %s", e.path, e.advice) }

func (e *existsError) Is(target error) bool { return target == ErrExists || target == fs.ErrExist }

// finished is the refusal to overwrite whole results.
func finished(dir string) error {
	return &existsError{dir, fmt.Sprintf(
		"name another folder, or continue it with: ionfall resume %s", dir)}
}

// unfinished is the refusal to overwrite an interrupted run.
func unfinished(dir string) error {
	return &existsError{dir + runningSuffix, fmt.Sprintf(
		"a run there is unfinished; continue it with: ionfall resume %s", dir)}
}

// inUse tells who holds the folder.
func inUse(dir string, c claim) error {
	if c.PID == 0 {
		return fmt.Errorf("%w: %s: the claim %s says not by whom; "+
			"it is void two minutes after it was last renewed", ErrLocked, dir, dir+lockSuffix)
	}
	return fmt.Errorf("%w: %s: process %d on %s works in it (claim %s); "+
		"wait for it or end it", ErrLocked, dir, c.PID, c.Host, dir+lockSuffix)
}

// isMissing reports whether err says that something is not there.
func isMissing(err error) bool { return errors.Is(err, fs.ErrNotExist) }
