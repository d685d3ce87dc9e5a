package crosssections

import (
	"fmt"
	"io/fs"
	"maps"
	"slices"
	"strings"
)

// Files are the files of a library in memory, by their paths with slashes: "Xx/gas.yaml".
type Files map[string][]byte

// OpenFiles is OpenLibrary for files in memory.
func OpenFiles(files Files) (*Library, error) {
	return openFolders(files.Folders(), func(name string) ([]byte, error) {
		data, ok := files[name]
		if !ok {
			return nil, fmt.Errorf("%s: %w", name, fs.ErrNotExist)
		}
		return data, nil
	})
}

// Folders are the folders of the files, sorted.
func (f Files) Folders() []string {
	seen := map[string]bool{}
	for name := range f {
		if folder, _, below := strings.Cut(name, "/"); below {
			seen[folder] = true
		}
	}
	return slices.Sorted(maps.Keys(seen))
}

// Only are the files of one folder.
func (f Files) Only(folder string) Files {
	part := Files{}
	for name, data := range f {
		if strings.HasPrefix(name, folder+"/") {
			part[name] = data
		}
	}
	return part
}
