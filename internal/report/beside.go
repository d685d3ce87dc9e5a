package report

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"

	"ionfall/internal/store"
)

// BesideFile holds the measurements that a run was compared with, in its folder.
const BesideFile = "measured.json"

// Beside is a measurement that a run was compared with.
type Beside struct {
	Name     string // of the measurement
	Sweeps   string // the file it comes from
	Where    string // in words
	Verdict  string // a sentence
	Rows     []BesideRow
	Cautions []string
	// Figures show both; the run of a curve is 0 where it is simulated, -1 where measured.
	Figures []Figure
}

// BesideRow is a quantity on both sides.
type BesideRow struct {
	Label, Unit         string
	Measured, Simulated BesideValue
	// Sigma is simulated less measured in joint standard errors.
	Sigma store.Number
}

// BesideValue is a number with its standard error, or the reason why there is none.
type BesideValue struct {
	Value, SE store.Number
	Reason    string
}

// besideFile is the form of the file. Summary is the hash of the results that were compared: those
// of a run that was continued are others.
type besideFile struct {
	Summary      string
	Measurements []Beside
}

// maxBesideBytes is far above what comparisons of some hundred probes take.
const maxBesideBytes = 256 << 20

// summaryHash tells states of a run apart.
func summaryHash(folder string) (string, error) {
	src, err := os.ReadFile(filepath.Join(folder, store.SummaryFile))
	if err != nil {
		return "", err
	}
	sum := sha256.Sum256(src)
	return hex.EncodeToString(sum[:]), nil
}

// readBeside reads the file of a folder; earlier tells that it belongs to other results.
func readBeside(folder string) (list []Beside, earlier bool, err error) {
	path := filepath.Join(folder, BesideFile)
	info, err := os.Stat(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, false, nil
	}
	if err != nil {
		return nil, false, err
	}
	if !info.Mode().IsRegular() || info.Size() > maxBesideBytes {
		return nil, false, fmt.Errorf("%s: want a file of at most %d MB", path, maxBesideBytes>>20)
	}
	src, err := os.ReadFile(path)
	if err != nil {
		return nil, false, err
	}
	var f besideFile
	if err := json.Unmarshal(src, &f); err != nil {
		return nil, false, fmt.Errorf("%s: not what a comparison writes (%w): compare again", path, err)
	}
	for i := range f.Measurements {
		if err := f.Measurements[i].check(); err != nil {
			return nil, false, fmt.Errorf("%s: %w: compare again", path, err)
		}
	}
	hash, err := summaryHash(folder)
	return f.Measurements, hash != f.Summary, err
}

// check refuses curves that cannot be drawn.
func (b *Beside) check() error {
	for i := range b.Figures {
		for _, s := range b.Figures[i].Series {
			n := len(s.X)
			if len(s.Y) != n || len(s.SE) != 0 && len(s.SE) != n || len(s.Width) != 0 {
				return fmt.Errorf("%s: curve %q: lengths differ", b.Name, s.Label)
			}
		}
	}
	return nil
}

// KeepBeside records measurements in the folder of the run that they were compared with. One of
// the same name and file takes the place of the earlier one.
func KeepBeside(dir string, list ...Beside) error {
	folder, _, err := store.Locate(dir)
	if err != nil {
		return err
	}
	old, earlier, err := readBeside(folder)
	if err != nil || earlier {
		old = nil // what cannot be shown any more is not kept
	}
	for _, b := range list {
		old = slices.DeleteFunc(old, func(o Beside) bool {
			return o.Name == b.Name && o.Sweeps == b.Sweeps
		})
		old = append(old, b)
	}
	hash, err := summaryHash(folder)
	if err != nil {
		return err
	}
	text, err := json.Marshal(besideFile{hash, old})
	if err != nil {
		return err
	}
	return store.WriteFile(filepath.Join(folder, BesideFile), append(text, '\n'))
}

// beside are the measurements of these very results.
func (r *Run) beside() []Beside {
	list, earlier, err := readBeside(r.folder)
	if err != nil || earlier {
		return nil
	}
	return list
}

// BesideSheet is a comparison in words.
type BesideSheet struct {
	Name, Sweeps, Where, Verdict string
	Rows                         []BesideCells
	Cautions                     []string
}

// BesideCells is a row of its table.
type BesideCells struct{ Label, Measured, Simulated, Sigma string }

// besideSheets are the comparisons of a run, and what is to be said if they cannot be shown.
func (r *Run) besideSheets() (sheets []BesideSheet, lost string) {
	list, earlier, err := readBeside(r.folder)
	switch {
	case err != nil:
		return nil, "Measurements that were compared with this run cannot be shown: " + err.Error()
	case earlier:
		return nil, "Measurements were compared with earlier results of this run: compare again."
	}
	for i := range list {
		b := &list[i]
		s := BesideSheet{
			Name: b.Name, Sweeps: b.Sweeps, Where: b.Where, Verdict: b.Verdict, Cautions: b.Cautions,
		}
		for _, row := range b.Rows {
			sigma := "–"
			if z := float64(row.Sigma); !math.IsNaN(z) {
				sigma = typeset(fmt.Sprintf("%+.1f", z))
			}
			s.Rows = append(s.Rows, BesideCells{
				row.Label, row.Measured.text(row.Unit), row.Simulated.text(row.Unit), sigma,
			})
		}
		sheets = append(sheets, s)
	}
	return sheets, ""
}

func (v BesideValue) text(unit string) string {
	if v.Reason != "" {
		return "not known: " + v.Reason
	}
	return estimate(float64(v.Value), float64(v.SE), unit)
}
