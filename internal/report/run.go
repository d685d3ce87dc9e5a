package report

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"ionfall/internal/config"
	"ionfall/internal/store"
	"ionfall/internal/table"
)

// Run is a results folder that is being read. Tables are read when first asked for.
type Run struct {
	Name    string // of the folder, without what marks a run in progress
	Dir     string // as given
	Whole   bool   // false for a run in progress
	Summary *store.Summary
	Case    *config.Case // nil where the input cannot be understood, as of a later version
	Input   string       // the input as given

	folder string
	tables map[string]*table.Table
}

// Open reads the summary and input of a results folder. A run in progress has no summary.
func Open(dir string) (*Run, error) {
	folder, whole, err := store.Locate(dir)
	if err != nil {
		return nil, err
	}
	r, err := OpenFolder(folder, filepath.Base(filepath.Clean(dir)))
	if err != nil {
		return nil, err
	}
	r.Dir, r.Whole = dir, whole
	return r, nil
}

// OpenFolder reads the files in folder, wherever they are, as those of a run of that name.
func OpenFolder(folder, name string) (*Run, error) {
	r := &Run{
		Name: strings.TrimSuffix(name, ".running"), Dir: folder, Whole: true, folder: folder,
		tables: map[string]*table.Table{}, Summary: &store.Summary{},
	}
	path := filepath.Join(folder, store.SummaryFile)
	s, err := store.ReadSummary(path)
	switch {
	case err == nil:
		r.Summary = s
	case !errors.Is(err, fs.ErrNotExist):
		return nil, fmt.Errorf("%s: %w", path, err)
	case !strings.HasSuffix(folder, ".running"):
		return nil, fmt.Errorf("%s is no results folder of a run: %s is not in it: %w",
			folder, store.SummaryFile, fs.ErrNotExist)
	}
	c, text, err := config.Load(filepath.Join(folder, "input.yaml"))
	if err == nil {
		r.Case = c
	}
	r.Input = string(text)
	return r, nil
}

// Title is that of the input, or the name of the folder.
func (r *Run) Title() string {
	if r.Case != nil && r.Case.Title != "" {
		return r.Case.Title
	}
	return r.Name
}

// Verdict is that of the summary, "unfinished" for a run in progress.
func (r *Run) Verdict() string {
	if r.Summary.Verdict == "" {
		return Unfinished
	}
	return r.Summary.Verdict
}

// Unfinished stands in place of the verdict of a run in progress.
const Unfinished = "unfinished"

// Table reads one of the tables; a missing one is fs.ErrNotExist.
func (r *Run) Table(name string) (*table.Table, error) {
	if t, ok := r.tables[name]; ok {
		return t, nil
	}
	t, err := store.ReadTable(filepath.Join(r.folder, name+".parquet"))
	if err != nil {
		return nil, err
	}
	r.tables[name] = t
	return t, nil
}

// Substrates are the names of the electrodes that carry a substrate, "grounded" if that is not
// known.
func (r *Run) Substrates() []string {
	var list []string
	if r.Case != nil {
		if r.Case.Electrodes.Powered.Substrate {
			list = append(list, "powered")
		}
		if r.Case.Electrodes.Grounded.Substrate {
			list = append(list, "grounded")
		}
	}
	if list == nil {
		list = []string{"grounded"}
	}
	return list
}

// IsRun tells whether a folder holds a run, finished or not, and no other folder's things.
func IsRun(dir string) bool {
	folder, _, err := store.Locate(dir)
	if err != nil {
		return false
	}
	for _, name := range []string{store.SummaryFile, "state.json"} {
		if info, err := os.Stat(filepath.Join(folder, name)); err == nil && info.Mode().IsRegular() {
			return true
		}
	}
	return false
}

// File is the name of the page in a results folder.
const File = "report.html"

// Distinguish gives runs in folders of the same name longer ones, and refuses a run given twice.
func Distinguish(runs []*Run) error {
	count := map[string]int{}
	folders := map[string]bool{}
	for _, r := range runs {
		count[r.Name]++
		if folders[r.folder] {
			return fmt.Errorf("%s is given twice", r.Dir)
		}
		folders[r.folder] = true
	}
	for _, r := range runs {
		if count[r.Name] > 1 {
			r.Name = filepath.ToSlash(filepath.Clean(r.Dir))
		}
	}
	return nil
}
