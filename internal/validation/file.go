package validation

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
)

// Read returns the rows of a file; none if there is no file.
func Read(path string) ([]Row, error) {
	data, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, nil
	}
	if err != nil {
		return nil, fmt.Errorf("validation rows: %w", err)
	}
	var rows []Row
	d := json.NewDecoder(bytes.NewReader(data))
	d.DisallowUnknownFields()
	if err := d.Decode(&rows); err != nil {
		return nil, fmt.Errorf("validation rows of %s: %w", path, err)
	}
	return rows, nil
}

// ReadAll returns the rows of all .json files of a folder, files in the order of their names.
func ReadAll(folder string) ([]Row, error) {
	names, err := filepath.Glob(filepath.Join(folder, "*.json"))
	if err != nil {
		return nil, err
	}
	var all []Row
	for _, name := range names {
		rows, err := Read(name)
		if err != nil {
			return nil, err
		}
		all = append(all, rows...)
	}
	return all, nil
}

// Merge writes the rows to the file in place of those with the same section and quantity; others
// stay. Sections and quantities are sorted, so that the same rows always make the same bytes.
func Merge(path string, rows ...Row) error {
	all, err := Read(path)
	if err != nil {
		return err
	}
	for _, r := range rows {
		i := slices.IndexFunc(all, func(o Row) bool {
			return o.Section == r.Section && o.Quantity == r.Quantity
		})
		if i < 0 {
			all = append(all, r)
		} else {
			all[i] = r
		}
	}
	data, err := json.MarshalIndent(sorted(all), "", "  ")
	if err != nil {
		return fmt.Errorf("validation rows for %s: %w", path, err)
	}
	if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
		return fmt.Errorf("validation rows: %w", err)
	}
	temporary := path + ".new"
	if err := os.WriteFile(temporary, append(data, '\n'), 0o644); err != nil {
		return fmt.Errorf("validation rows: %w", err)
	}
	return os.Rename(temporary, path)
}

// Test is what Record needs of a running test, such as a *testing.T.
type Test interface {
	Helper()
	Log(args ...any)
	Error(args ...any)
}

// Record judges the rows, logs them, fails the test for each that does not pass, and merges all
// of them, also those that failed, into the file if update is set.
func Record(t Test, path string, update bool, rows ...Row) {
	t.Helper()
	judged := make([]Row, len(rows))
	for i, r := range rows {
		judged[i] = r.Judged()
		if judged[i].Pass {
			t.Log(judged[i].Text())
		} else {
			t.Error(judged[i].Text())
		}
	}
	if !update {
		return
	}
	if err := Merge(path, judged...); err != nil {
		t.Error(err)
	}
}
