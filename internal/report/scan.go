package report

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"ionfall/internal/store"
	"ionfall/internal/table"
)

// PointsTable is the file of a scan with a row a point.
const PointsTable = "points.parquet"

// Scan is the table of a scan. Points that have no result yet have numbers that are not known.
type Scan struct {
	Name    string       `json:"-"`
	Inputs  []ScanColumn `json:"inputs"`
	Results []ScanColumn `json:"results"`
	Points  []ScanPoint  `json:"points"`
}

// ScanColumn is a quantity of every point.
type ScanColumn struct {
	Name   string   `json:"name"`
	Unit   string   `json:"unit"`
	Doc    string   `json:"doc"`
	Values Numbers  `json:"values"`
	SE     Numbers  `json:"se,omitempty"`
	Text   []string `json:"text,omitempty"`
}

// ScanPoint is one of the points.
type ScanPoint struct {
	ID      string `json:"id"` // of its results in the viewer, "" while there are none
	Number  int64  `json:"number"`
	Verdict string `json:"verdict"`
	Status  string `json:"status"`
}

// IsScan tells a scan by its table or its own record; a plan alone may lie in any folder.
func IsScan(dir string) bool {
	for _, name := range []string{PointsTable, "scan.json"} {
		if info, err := os.Stat(filepath.Join(dir, name)); err == nil && info.Mode().IsRegular() {
			return true
		}
	}
	return false
}

// OpenScan reads the table of a scan; one without a table yet has no points.
func OpenScan(dir string) (*Scan, error) {
	s := &Scan{Name: filepath.Base(filepath.Clean(dir))}
	t, err := store.ReadTable(filepath.Join(dir, PointsTable))
	if errors.Is(err, fs.ErrNotExist) && IsScan(dir) {
		return s, nil
	}
	if err != nil {
		return nil, err
	}
	s.take(t)
	return s, nil
}

// aside are columns that are neither input nor result.
func aside(name string) bool {
	return slices.Contains([]string{
		"point", "verdict", "status", "reason", "wall_s", "cpu_s", "particle_steps", "attempts",
	}, name)
}

func (s *Scan) take(t *table.Table) {
	s.Points = make([]ScanPoint, t.Rows())
	for _, c := range t.Columns {
		if strings.HasSuffix(c.Name, "_se") || aside(c.Name) {
			continue
		}
		column := ScanColumn{Name: c.Name, Unit: c.Unit, Doc: c.Doc, Text: c.Text}
		if c.Float != nil {
			column.Values = c.Float
		}
		for _, n := range c.Int {
			column.Values = append(column.Values, float64(n))
		}
		if se, has := t.Column(c.Name + "_se"); has && se.Float != nil {
			column.SE = se.Float
			s.Results = append(s.Results, column)
		} else {
			s.Inputs = append(s.Inputs, column)
		}
	}
	number, _ := t.Column("point") // without it the rows are counted
	verdict, _ := t.Column("verdict")
	status, _ := t.Column("status")
	for i := range s.Points {
		p := &s.Points[i]
		p.Number = int64(i)
		if number.Int != nil {
			p.Number = number.Int[i]
		}
		if verdict.Text != nil {
			p.Verdict = verdict.Text[i]
		}
		if status.Text != nil {
			p.Status = status.Text[i]
		}
	}
}

// failed counts the points that are not to be used.
func (s *Scan) failed() int {
	n := 0
	for _, p := range s.Points {
		if p.Verdict == store.Fail {
			n++
		}
	}
	return n
}

// varied are the inputs with more than one value.
func (s *Scan) varied() []ScanColumn {
	var list []ScanColumn
	for _, c := range s.Inputs {
		if len(c.Values) > 0 && len(distinct(c.Values)) > 1 {
			list = append(list, c)
		}
	}
	return list
}

// scanAnswers are the results that the page of a scan shows, as far as it has them.
func scanAnswers() []string {
	return []string{
		"ion_mean_energy_eV", "ion_flux_m2ps", "ion_energy_flux_Wpm2", "self_bias_V",
		"electron_density_center_m3", "power_Wpm2.total",
	}
}

// shown picks the results for the page: those at the grounded electrode where there are both.
func (s *Scan) shown() []ScanColumn {
	var list []ScanColumn
	for _, want := range scanAnswers() {
		for _, c := range s.Results {
			if c.Name == want || c.Name == want+".grounded.all" {
				list = append(list, c)
			}
		}
	}
	if list == nil && len(s.Results) > 0 {
		list = s.Results[:1]
	}
	return list
}

// Figures draws the results over every input that varies, after maps of them. Sound
// points and those that failed are two sets, told apart by shape and name.
func (s *Scan) Figures() []Figure {
	var list []Figure
	for _, result := range s.shown() {
		for _, input := range s.varied() {
			f := Figure{
				ID: slug(result.Name + "-" + input.Name), Kind: "scan",
				About: "Every point of the scan; the other inputs differ, too. Bars are standard " +
					"errors; crosses are points whose verdict is FAIL, which are not to be used.",
				Runs: []RunMark{
					{s.Name + ", sound points", store.OK}, {s.Name + ", failed points", store.Fail},
				},
				X:       Axis{Name: input.Name, Label: s.shortNames([]ScanColumn{input})[0], Unit: input.Unit},
				Y:       Axis{Name: result.Name, Label: table.ResultName(result.Name), Unit: result.Unit},
				Crossed: true,
			}
			f.Title = f.Y.Label + " over " + f.X.Label
			sound := Series{Label: "points", Run: 0, Dots: true}
			failed := Series{Label: "points", Run: 1, Dots: true, Cross: true}
			for i := range s.Points {
				to := &sound
				if s.Points[i].Verdict == store.Fail {
					to = &failed
				}
				to.X, to.Y = append(to.X, input.Values[i]), append(to.Y, result.Values[i])
				to.SE = append(to.SE, result.SE[i])
			}
			f.X.From, f.X.To = padded(input.Values)
			f.Series = append(f.Series, sound)
			if len(failed.X) > 0 {
				f.Series = append(f.Series, failed)
			} else {
				f.Runs = f.Runs[:1]
			}
			f.Alt = altOf(&f)
			list = append(list, f)
		}
	}
	return append(s.Maps(), list...)
}

// padded is the range of an input with some room, so that no point lies on the frame.
func padded(v Numbers) (low, high float64) {
	low, high = rangeOf(Axis{}, func(visit func(float64)) {
		for _, x := range v {
			visit(x)
		}
	}, false)
	room := 0.05 * (high - low)
	return low - room, high + room
}

// scanSheet is what the template of a scan is filled with.
type scanSheet struct {
	*sheet
	Heads []string
	Table []scanRow
	Done  string
}

type scanRow struct {
	Number, Verdict, Status string
	Cells                   []Cell
}

// ScanPage is the report of a scan.
func ScanPage(s *Scan) ([]byte, error) {
	var err error
	css := styleSheet()
	p := &scanSheet{sheet: &sheet{
		Sheet: &Sheet{Title: "Scan " + s.Name}, CSS: cssText(css), JS: scriptText(pageJS),
		Policy: policy(css, pageJS), Cautions: Cautions(),
	}}
	p.Done = fmt.Sprintf("%d points.", len(s.Points))
	if n := s.failed(); n > 0 {
		p.Done = fmt.Sprintf("%d points, %d of them with verdict FAIL: not to be used.",
			len(s.Points), n)
	}
	if p.Sections, err = sections(s.Figures()); err != nil {
		return nil, fmt.Errorf("report of a scan: %w", err)
	}
	columns := append(slices.Clone(s.Inputs), s.shown()...)
	for _, c := range columns {
		name := table.ResultName(c.Name)
		if c.SE == nil {
			name = s.shortNames([]ScanColumn{c})[0]
		}
		p.Heads = append(p.Heads, Axis{Label: name, Unit: prettyUnit(c.Unit)}.Title())
	}
	for i, point := range s.Points {
		row := scanRow{
			Number: fmt.Sprint(point.Number), Verdict: point.Verdict, Status: point.Status,
		}
		for _, c := range columns {
			row.Cells = append(row.Cells, c.cell(i, point.Verdict == store.Fail))
		}
		p.Table = append(p.Table, row)
	}
	return fill("scan", p)
}

// cell is a value for the table of points; only results can be unsound.
func (c *ScanColumn) cell(i int, failed bool) Cell {
	switch {
	case c.SE != nil:
		return Cell{estimate(c.Values[i], c.SE[i], ""), failed}
	case c.Values != nil:
		return Cell{Text: plainNumber(c.Values[i])}
	}
	return Cell{Text: c.Text[i]}
}
