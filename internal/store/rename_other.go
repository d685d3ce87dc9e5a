//go:build !linux && !darwin

package store

import "errors"

// exchange is not known here: Commit takes two renames instead.
func exchange(_, _ string) error { return errors.ErrUnsupported }

// renameNew is not known here: its caller looks first.
func renameNew(_, _ string) error { return errors.ErrUnsupported }
