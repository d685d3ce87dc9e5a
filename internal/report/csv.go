package report

import (
	"bytes"
	"encoding/csv"
	"math"
	"strconv"
)

// CSV is the data behind a figure: a row a point, with the run and its verdict in every row.
func (f *Figure) CSV() ([]byte, error) {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	var err error
	switch {
	case f.Map != nil:
		err = f.mapCSV(w)
	case f.Bars != nil:
		err = f.barCSV(w)
	default:
		err = f.seriesCSV(w)
	}
	if err != nil {
		return nil, err
	}
	w.Flush()
	return b.Bytes(), w.Error()
}

func (f *Figure) runCells(run int) []string {
	if run < 0 || run >= len(f.Runs) {
		return []string{"", ""}
	}
	return []string{f.Runs[run].Name, f.Runs[run].Verdict}
}

func (f *Figure) seriesCSV(w *csv.Writer) error {
	head := []string{"run", "verdict", "curve", f.X.Name, f.Y.Name, f.Y.Name + "_se"}
	if err := w.Write(head); err != nil {
		return err
	}
	for _, s := range f.Series {
		for i := range s.X {
			row := append(f.runCells(s.Run), s.Label, cell(s.X[i], 6), cell(s.Y[i], 6), "")
			if len(s.SE) > 0 {
				row[5] = cell(s.SE[i], 3)
			}
			if err := w.Write(row); err != nil {
				return err
			}
		}
	}
	return nil
}

func (f *Figure) mapCSV(w *csv.Writer) error {
	m := f.Map
	head := []string{"run", "verdict", f.X.Name, f.Y.Name, m.Value.Name, m.Value.Name + "_se"}
	if err := w.Write(head); err != nil {
		return err
	}
	nx := len(m.XEdges) - 1
	for i, z := range m.Z {
		row := append(f.runCells(m.Run), cell(middle(m.XEdges, i%nx), 5),
			cell(middle(m.YEdges, i/nx), 5), cell(z, 5), "")
		if len(m.SE) > 0 {
			row[5] = cell(m.SE[i], 2)
		}
		if err := w.Write(row); err != nil {
			return err
		}
	}
	return nil
}

func (f *Figure) barCSV(w *csv.Writer) error {
	head := []string{"run", "verdict", "part", f.Y.Name, f.Y.Name + "_se"}
	if err := w.Write(head); err != nil {
		return err
	}
	for _, b := range f.Bars {
		row := append(f.runCells(b.Run), b.Label, cell(b.Value, 6), cell(b.SE, 3))
		if err := w.Write(row); err != nil {
			return err
		}
	}
	return nil
}

func middle(edges Numbers, i int) float64 { return 0.5 * (edges[i] + edges[i+1]) }

// cell is a number with so many digits, empty where there is none.
func cell(v float64, digits int) string {
	if math.IsNaN(v) {
		return ""
	}
	return strconv.FormatFloat(v, 'g', digits, 64)
}

// short is a number for a sentence.
func short(v float64) string { return strconv.FormatFloat(v, 'g', 3, 64) }
