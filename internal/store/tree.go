package store

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"strings"
)

// needed reports whether a continuation starts with a copy of the file of that name: the input as
// given and as resolved, and the log, which it extends.
func needed(name string) bool {
	return strings.HasSuffix(name, ".yaml") || strings.HasSuffix(name, ".log")
}

// kept reports whether results that replace others keep a file of theirs, when they have none of
// that name: whatever the user has put there, but nothing that the run wrote, which would pass for
// a part of the new results.
func kept(name string) bool {
	switch name {
	case SummaryFile, CheckpointFile, markerFile, "state.json", "report.html":
		return false
	}
	return !strings.HasSuffix(name, ".parquet") && !strings.HasSuffix(name, tempSuffix)
}

// carryOver copies from old to folder what is missing there and wanted.
func carryOver(fs fsys, old, folder string, wanted func(name string) bool) error {
	entries, err := os.ReadDir(old)
	if err != nil {
		return err
	}
	for _, e := range entries {
		if wanted(e.Name()) {
			if err := copyTree(fs, e, old, folder); err != nil {
				return err
			}
		}
	}
	return fs.syncDir(folder)
}

// copyTree copies one entry of the folder from into the folder to, unless it is there.
func copyTree(fs fsys, e os.DirEntry, from, to string) error {
	source, target := filepath.Join(from, e.Name()), filepath.Join(to, e.Name())
	switch {
	case e.IsDir():
		return copyDir(fs, source, target)
	case exists(target):
		return nil
	case e.Type().IsRegular():
		return copyFile(fs, source, target)
	case e.Type()&os.ModeSymlink != 0:
		link, err := os.Readlink(source)
		if err != nil {
			return err
		}
		return fs.symlink(link, target)
	}
	return fmt.Errorf("%s is neither file, folder nor link: move it away", source)
}

func copyDir(fs fsys, source, target string) error {
	if !exists(target) {
		if err := fs.mkdir(target); err != nil {
			return err
		}
	}
	entries, err := os.ReadDir(source)
	if err != nil {
		return err
	}
	for _, e := range entries {
		if err := copyTree(fs, e, source, target); err != nil {
			return err
		}
	}
	return fs.syncDir(target)
}

func copyFile(fs fsys, source, target string) error {
	in, err := os.Open(source)
	if err != nil {
		return err
	}
	err = replace(fs, target, func(w io.Writer) error {
		_, err := io.Copy(w, in)
		return err
	})
	return errors.Join(err, in.Close())
}

// copyText writes a short file.
func (r *Run) copyText(path, text string) error {
	return replace(r.fs, path, func(w io.Writer) error {
		_, err := io.WriteString(w, text)
		return err
	})
}

// removeTemps deletes what interrupted writes left in a folder.
func removeTemps(fs fsys, folder string) error {
	entries, err := os.ReadDir(folder)
	if err != nil {
		return err
	}
	for _, e := range entries {
		if e.Type().IsRegular() && strings.HasSuffix(e.Name(), tempSuffix) {
			if err := fs.remove(filepath.Join(folder, e.Name())); err != nil {
				return err
			}
		}
	}
	return nil
}

// removeTree deletes a folder and all in it; one that is not there is no error.
func removeTree(fs fsys, path string) error {
	entries, err := os.ReadDir(path)
	if isMissing(err) {
		return nil
	}
	if err != nil {
		return err
	}
	for _, e := range entries {
		inner := filepath.Join(path, e.Name())
		if e.IsDir() {
			err = removeTree(fs, inner)
		} else {
			err = fs.remove(inner)
		}
		if err != nil {
			return err
		}
	}
	return fs.remove(path)
}

// syncTree puts every file of a folder on the disk, and the names of them.
func syncTree(fs fsys, folder string) error {
	entries, err := os.ReadDir(folder)
	if err != nil {
		return err
	}
	for _, e := range entries {
		path := filepath.Join(folder, e.Name())
		switch {
		case e.IsDir():
			err = syncTree(fs, path)
		case e.Type().IsRegular():
			err = fs.syncFile(path)
		}
		if err != nil {
			return err
		}
	}
	return fs.syncDir(folder)
}
