package store

import (
	"errors"
	"os"

	"golang.org/x/sys/unix"
)

// exchange swaps two names in one step, or returns errors.ErrUnsupported.
func exchange(a, b string) error { return renamex("exchange", a, b, unix.RENAME_SWAP) }

// renameNew renames unless to exists, or returns errors.ErrUnsupported.
func renameNew(from, to string) error { return renamex("rename", from, to, unix.RENAME_EXCL) }

func renamex(op, from, to string, flag uint32) error {
	err := unix.RenamexNp(from, to, flag)
	switch {
	case err == nil:
		return nil
	case errors.Is(err, unix.EINVAL), errors.Is(err, unix.ENOTSUP):
		return errors.ErrUnsupported // a network disk
	}
	return &os.LinkError{Op: op, Old: from, New: to, Err: err}
}
