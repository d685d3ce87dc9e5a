package config

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"ionfall/internal/inputerr"
)

// maxSiblings is how many names of a folder are looked at for a misspelt one.
const maxSiblings = 1000

// Load reads an input file. It returns the Case and the bytes it was read from; the bytes also
// when only their content is wrong. The error is an inputerr.List.
func Load(path string) (*Case, []byte, error) {
	return load(disk{}, path)
}

// files is what Load needs of a file system.
type files interface {
	Stat(path string) (fs.FileInfo, error)
	Open(path string) (io.ReadCloser, error)
	// Names are some of the names in a folder.
	Names(folder string) []string
}

// disk is the file system of the machine.
type disk struct{}

func (disk) Stat(path string) (fs.FileInfo, error)   { return os.Stat(path) }
func (disk) Open(path string) (io.ReadCloser, error) { return os.Open(path) }

func (disk) Names(folder string) []string {
	f, err := os.Open(folder)
	if err != nil {
		return nil // a hint less
	}
	names, _ := f.Readdirnames(maxSiblings) // what was read before an error is good enough
	_ = f.Close()                           // nothing was written
	return names
}

func load(on files, path string) (*Case, []byte, error) {
	src, bad := readFile(on, path, MaxFileBytes)
	if bad != nil {
		bad.File = path
		return nil, nil, inputerr.List{bad}
	}
	c, err := Parse(path, src)
	return c, src, err
}

// readFile is the content of a regular file of at most the given size. The file is looked at before
// it is opened, because opening a pipe waits for its writer.
func readFile(on files, path string, most int64) (src []byte, bad *inputerr.Error) {
	info, err := on.Stat(path)
	switch {
	case err != nil:
		return nil, fileError(on, path, err)
	case info.IsDir():
		return nil, &inputerr.Error{Got: "a folder", Want: "an input file"}
	case !info.Mode().IsRegular():
		return nil, &inputerr.Error{Got: "a pipe or device", Want: "a regular file"}
	case info.Size() > most:
		return nil, tooLarge(info.Size(), most)
	}
	f, err := on.Open(path)
	if err != nil {
		return nil, fileError(on, path, err)
	}
	defer func() { _ = f.Close() }() // nothing was written
	// The file may have grown since, or have no true size.
	src, err = io.ReadAll(io.LimitReader(f, most+1))
	if err != nil {
		return nil, fileError(on, path, err)
	}
	return src, nil
}

// fileError says in plain words why a file cannot be read.
func fileError(on files, path string, err error) *inputerr.Error {
	switch {
	case errors.Is(err, fs.ErrNotExist):
		where := ""
		if !filepath.IsAbs(path) {
			where = " under the current folder"
		}
		return &inputerr.Error{Hint: "no such file" + where + sibling(on, path)}
	case errors.Is(err, fs.ErrPermission):
		return &inputerr.Error{Hint: "no permission to read it"}
	}
	var cause *fs.PathError
	if errors.As(err, &cause) {
		err = cause.Err // the path is in the message already
	}
	return &inputerr.Error{Hint: "cannot be read: " + err.Error()}
}

// sibling is a hint to a file beside path with nearly its name, or "".
func sibling(on files, path string) string {
	folder, name := filepath.Split(path)
	if folder == "" {
		folder = "."
	}
	var names []string
	for _, n := range on.Names(folder) {
		if e := strings.ToLower(filepath.Ext(n)); e == ".yaml" || e == ".yml" {
			names = append(names, n)
		}
	}
	slices.Sort(names) // a folder has no order
	near := inputerr.Nearest(name, names)
	if near == "" {
		return ""
	}
	return fmt.Sprintf("; did you mean %q?", near)
}
