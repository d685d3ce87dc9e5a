package report

import (
	"errors"
	"fmt"
	"io/fs"
	"slices"
	"strings"

	"ionfall/internal/inputerr"
	"ionfall/internal/table"
)

// Select narrows what figures show; "" is all.
type Select struct {
	Electrode, Species, Region string
}

// Kind makes one sort of figure.
type Kind struct {
	ID    string
	Title string
	About string
	group string
	build func(k Kind, runs []*Run, s Select) ([]Figure, error)
}

// Group is the part of the page that the figure belongs to.
func (k Kind) Group() string { return k.group }

// The groups that the page is divided into.
const (
	groupWall     = "What hits the electrodes"
	groupBeside   = "Beside measurements"
	groupGap      = "Across the gap"
	groupPhase    = "Over the RF period"
	groupElectron = "Electrons"
	groupBalance  = "Balances"
	groupHistory  = "How the run went"
)

// Kinds are all figures, in the order of the page.
func Kinds() []Kind {
	return slices.Concat(wallKinds(), besideKinds(), gapKinds(), phaseKinds(), waveKinds(),
		electronKinds(), balanceKinds(), historyKinds())
}

// FindKind returns the kind with the ID, or an error that names the nearest.
func FindKind(id string) (Kind, error) {
	var ids []string
	for _, k := range Kinds() {
		if k.ID == id {
			return k, nil
		}
		ids = append(ids, k.ID)
	}
	if near := inputerr.Nearest(id, ids); near != "" {
		return Kind{}, fmt.Errorf("no figure %q; did you mean %q?", id, near)
	}
	return Kind{}, fmt.Errorf("no figure %q; want one of %s", id, strings.Join(ids, ", "))
}

// Figures makes the figures of this kind from the runs. Runs that lack the data are left out; an
// error that is fs.ErrNotExist says that none has them.
func (k Kind) Figures(runs []*Run, s Select) ([]Figure, error) {
	figures, err := k.build(k, runs, s)
	if err != nil {
		return nil, fmt.Errorf("figure %s: %w", k.ID, err)
	}
	if len(figures) == 0 {
		return nil, fmt.Errorf("figure %s: nothing recorded for it%s: %w", k.ID, s.text(),
			fs.ErrNotExist)
	}
	for i := range figures {
		f := &figures[i]
		f.Kind = k.ID
		if f.Title == "" {
			f.Title = k.Title
		}
		if f.About == "" {
			f.About = k.About
		}
	}
	return figures, nil
}

func (s Select) text() string {
	var parts []string
	for _, p := range []string{s.Electrode, s.Species, s.Region} {
		if p != "" {
			parts = append(parts, p)
		}
	}
	if parts == nil {
		return ""
	}
	return " (" + strings.Join(parts, ", ") + ")"
}

// AllFigures makes every figure of the runs that can be made, and lists the kinds that cannot.
func AllFigures(runs []*Run) (figures []Figure, absent []string, err error) {
	for _, k := range Kinds() {
		list, err := k.Figures(runs, Select{})
		switch {
		case errors.Is(err, fs.ErrNotExist) && k.group == groupBeside:
			// most runs have none, and lack nothing
		case errors.Is(err, fs.ErrNotExist):
			absent = append(absent, k.Title)
		case err != nil:
			return nil, nil, err
		}
		figures = append(figures, list...)
	}
	return figures, absent, nil
}

// tableOf reads a table of a run; one that is not there is nil without an error.
func tableOf(r *Run, name string) (*table.Table, error) {
	t, err := r.Table(name)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, nil
	}
	return t, err
}

// part is the rows of a table that belong together.
type part struct {
	keys []string // the values of the text columns
	rows []int
}

// parts divides the rows by the values of text columns, in the order of their appearance.
func parts(t *table.Table, columns ...string) ([]part, error) {
	texts := make([][]string, len(columns))
	for i, name := range columns {
		var err error
		if texts[i], err = t.Texts(name); err != nil {
			return nil, err
		}
	}
	index := map[string]int{}
	var list []part
	for row := range t.Rows() {
		keys := make([]string, len(columns))
		for i := range columns {
			keys[i] = texts[i][row]
		}
		id := strings.Join(keys, "\x00")
		at, ok := index[id]
		if !ok {
			at = len(list)
			index[id] = at
			list = append(list, part{keys: keys})
		}
		list[at].rows = append(list[at].rows, row)
	}
	return list, nil
}

// pick returns the values of a column in some rows, times a factor.
func pick(t *table.Table, name string, rows []int, factor float64) (Numbers, error) {
	v, err := t.Floats(name)
	if err != nil {
		return nil, err
	}
	list := make(Numbers, len(rows))
	for i, row := range rows {
		list[i] = v[row] * factor
	}
	return list, nil
}

// errorsOf returns the standard errors of a column, nil where there are none.
func errorsOf(t *table.Table, name string, rows []int, factor float64) Numbers {
	if _, ok := t.Column(name + "_se"); !ok {
		return nil
	}
	list, err := pick(t, name+"_se", rows, factor)
	if err != nil {
		return nil
	}
	return list
}

func allRows(t *table.Table) []int {
	rows := make([]int, t.Rows())
	for i := range rows {
		rows[i] = i
	}
	return rows
}

func fits(want, got string) bool { return want == "" || strings.EqualFold(want, got) }
