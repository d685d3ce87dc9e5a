package store

import (
	"errors"
	"io"
	"os"
	"runtime"
)

// file is one that is being written.
type file interface {
	io.WriteCloser
	Sync() error
}

// fsys is every way in which this package changes a disk, so that tests can make each one fail.
type fsys interface {
	create(path string) (file, error)  // a new file, or an empty one in its place
	mkdir(path string) error           // fails when path exists
	link(from, to string) error        // a second name, fails when to exists
	rename(from, to string) error      // replaces a file
	renameNew(from, to string) error   // fails when to exists
	exchange(a, b string) error        // both at once, or errors.ErrUnsupported
	remove(path string) error          // a file or an empty folder
	symlink(target, path string) error // fails when path exists
	syncFile(path string) error        // its content is on the disk
	syncDir(path string) error         // the names in it are on the disk
}

// disk is the real one.
type disk struct{}

func (disk) create(path string) (file, error) {
	f, err := os.OpenFile(path, os.O_WRONLY|os.O_CREATE|os.O_TRUNC, 0o666)
	if err != nil {
		return nil, err
	}
	return f, nil
}

func (disk) mkdir(path string) error           { return os.Mkdir(path, 0o777) }
func (disk) link(from, to string) error        { return os.Link(from, to) }
func (disk) rename(from, to string) error      { return os.Rename(from, to) }
func (disk) exchange(a, b string) error        { return exchange(a, b) }
func (disk) remove(path string) error          { return os.Remove(path) }
func (disk) symlink(target, path string) error { return os.Symlink(target, path) }

// renameNew asks the system to refuse an existing name; where it cannot, it looks first: the claim
// keeps other runs away.
func (disk) renameNew(from, to string) error {
	err := renameNew(from, to)
	if !errors.Is(err, errors.ErrUnsupported) {
		return err
	}
	if _, err := os.Lstat(to); !isMissing(err) {
		return &os.LinkError{Op: "rename", Old: from, New: to, Err: os.ErrExist}
	}
	return os.Rename(from, to)
}

func (disk) syncFile(path string) error {
	flag := os.O_RDONLY
	if runtime.GOOS == "windows" {
		flag = os.O_RDWR // it flushes only what may be written
	}
	return syncPath(path, flag)
}

func (disk) syncDir(path string) error {
	if runtime.GOOS == "windows" {
		return nil // it has no such call, its journal keeps the order of names
	}
	return syncPath(path, os.O_RDONLY)
}

func syncPath(path string, flag int) error {
	f, err := os.OpenFile(path, flag, 0)
	if err != nil {
		return err
	}
	return errors.Join(f.Sync(), f.Close())
}

// exists reports whether there is something of that name.
func exists(path string) bool {
	_, err := os.Lstat(path)
	return err == nil
}
