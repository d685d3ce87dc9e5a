package store

import (
	"errors"
	"os"

	"golang.org/x/sys/unix"
)

// exchange swaps two names in one step, or returns errors.ErrUnsupported.
func exchange(a, b string) error { return renameat2("exchange", a, b, unix.RENAME_EXCHANGE) }

// renameNew renames unless to exists, or returns errors.ErrUnsupported.
func renameNew(from, to string) error {
	return renameat2("rename", from, to, unix.RENAME_NOREPLACE)
}

func renameat2(op, from, to string, flags uint) error {
	err := unix.Renameat2(unix.AT_FDCWD, from, unix.AT_FDCWD, to, flags)
	switch {
	case err == nil:
		return nil
	case errors.Is(err, unix.EINVAL), errors.Is(err, unix.ENOSYS), errors.Is(err, unix.ENOTSUP):
		return errors.ErrUnsupported // an old kernel, or a network disk
	}
	return &os.LinkError{Op: op, Old: from, New: to, Err: err}
}
