package web

import (
	"errors"
	"io/fs"
	"net/http"
	"path/filepath"
	"strconv"
	"strings"

	"ionfall/internal/report"
	"ionfall/internal/store"
	"ionfall/internal/table"
)

// scanView is the table of a scan.
type scanView struct {
	ID      string       `json:"id"`
	Inputs  []scanColumn `json:"inputs"`
	Results []scanColumn `json:"results"`
	Points  []scanPoint  `json:"points"`
}

// scanColumn is a quantity of every point.
type scanColumn struct {
	Name   string         `json:"name"`
	Unit   string         `json:"unit"`
	Doc    string         `json:"doc"`
	Values report.Numbers `json:"values"`
	SE     report.Numbers `json:"se,omitempty"`
	Text   []string       `json:"text,omitempty"`
}

// scanPoint is one of the points.
type scanPoint struct {
	ID      string `json:"id"` // of its results, "" while there are none
	Number  int64  `json:"number"`
	Verdict string `json:"verdict"`
	Status  string `json:"status"`
}

// costs are columns that are neither input nor result.
var costs = [...]string{"point", "wall_s", "cpu_s", "particle_steps", "attempts", "seed"}

func (s *Server) scan(r *http.Request) (any, error) {
	item, err := s.catalog.find(r.URL.Query().Get("id"))
	if err != nil {
		return nil, err
	}
	if item.Kind != kindScan {
		return nil, &requestError{http.StatusBadRequest, item.ID + " is no scan"}
	}
	t, err := store.ReadTable(filepath.Join(item.dir, pointsTable))
	if errors.Is(err, fs.ErrNotExist) {
		return scanView{ID: item.ID}, nil // planned, with no point done yet
	}
	if err != nil {
		return nil, err
	}
	return newScanView(item, t), nil
}

func newScanView(item Item, t *table.Table) scanView {
	v := scanView{ID: item.ID, Points: make([]scanPoint, t.Rows())}
	for _, c := range t.Columns {
		if strings.HasSuffix(c.Name, "_se") || isCost(c.Name) ||
			c.Name == "verdict" || c.Name == "status" {
			continue
		}
		column := scanColumn{Name: c.Name, Unit: c.Unit, Doc: c.Doc}
		switch {
		case c.Float != nil:
			column.Values = c.Float
		case c.Int != nil:
			for _, n := range c.Int {
				column.Values = append(column.Values, float64(n))
			}
		default:
			column.Text = c.Text
		}
		se, has := t.Column(c.Name + "_se")
		if has && se.Float != nil {
			column.SE = se.Float
			v.Results = append(v.Results, column)
		} else {
			v.Inputs = append(v.Inputs, column)
		}
	}
	v.fillPoints(item, t)
	return v
}

func isCost(name string) bool {
	for _, c := range costs {
		if c == name {
			return true
		}
	}
	return false
}

// fillPoints says of every row which results it is of and whether they hold.
func (v *scanView) fillPoints(item Item, t *table.Table) {
	folders := map[int64]string{}
	for _, id := range pointsOf(item) {
		_, number, _ := strings.Cut(id[strings.LastIndex(id, "/")+1:], "=")
		if n, err := strconv.ParseInt(number, 10, 64); err == nil {
			folders[n] = id
		}
	}
	number, _ := t.Column("point")
	verdict, _ := t.Column("verdict")
	status, _ := t.Column("status")
	for i := range v.Points {
		p := &v.Points[i]
		p.Number = int64(i)
		if number.Int != nil {
			p.Number = number.Int[i]
		}
		p.ID = folders[p.Number]
		if verdict.Text != nil {
			p.Verdict = verdict.Text[i]
		}
		if status.Text != nil {
			p.Status = status.Text[i]
		}
	}
}
