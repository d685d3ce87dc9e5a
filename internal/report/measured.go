package report

import (
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"ionfall/internal/inputerr"
)

const (
	// maxMeasuredBytes is far above any table that a figure could show.
	maxMeasuredBytes = 16 << 20
	// maxMeasuredRows is how many points a figure can show.
	maxMeasuredRows = 200_000
)

// ReadMeasured reads points to lay over a figure: two columns in the units of its axes, and the
// standard error as a third if it is known. A first line that is no number is taken for titles;
// lines that begin with # are left out. Errors name their place.
func ReadMeasured(path string) (Series, error) {
	f, err := os.Open(path)
	if err != nil {
		return Series{}, &inputerr.Error{File: path, Hint: "cannot be read: " + errText(err)}
	}
	defer func() { _ = f.Close() }() // nothing was written
	if info, err := f.Stat(); err != nil || !info.Mode().IsRegular() ||
		info.Size() > maxMeasuredBytes {
		return Series{}, &inputerr.Error{
			File: path, Want: fmt.Sprintf("a file of at most %d MB", maxMeasuredBytes>>20),
		}
	}
	r := csv.NewReader(io.LimitReader(f, maxMeasuredBytes))
	r.Comment, r.FieldsPerRecord, r.TrimLeadingSpace = '#', -1, true
	name := strings.TrimSuffix(filepath.Base(path), filepath.Ext(path))
	s := Series{Label: name + " (measured)", Run: -1, Dots: true}
	for {
		row, err := r.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		var bad *csv.ParseError
		if errors.As(err, &bad) {
			return Series{}, &inputerr.Error{
				File: path, Line: bad.Line, Col: bad.Column, Hint: bad.Err.Error(),
			}
		}
		if err != nil {
			return Series{}, fmt.Errorf("%s: %w", path, err)
		}
		if err := s.take(r, path, row); err != nil {
			return Series{}, err
		}
	}
	if len(s.X) == 0 {
		return Series{}, &inputerr.Error{File: path, Want: "rows of x, y and, if known, the error of y"}
	}
	return s, nil
}

func errText(err error) string {
	var cause *os.PathError
	if errors.As(err, &cause) {
		return cause.Err.Error()
	}
	return err.Error()
}

// take adds a row.
func (s *Series) take(r *csv.Reader, path string, row []string) error {
	if len(row) < 2 || len(row) > 3 {
		line, col := r.FieldPos(0)
		return &inputerr.Error{
			File: path, Line: line, Col: col, Got: fmt.Sprintf("%d columns", len(row)),
			Want: "x, y and, if known, the error of y",
		}
	}
	values := [3]float64{0, 0, math.NaN()}
	for i, word := range row {
		v, err := strconv.ParseFloat(strings.TrimSpace(word), 64)
		if err == nil && !math.IsInf(v, 0) && !math.IsNaN(v) && (i < 2 || v >= 0) {
			values[i] = v
			continue
		}
		line, col := r.FieldPos(i)
		if i == 0 && len(s.X) == 0 && s.Width == nil {
			s.Width = Numbers{} // titles are passed over once
			return nil
		}
		want := "a number"
		if i == 2 {
			want = "an error that is a number and not negative"
		}
		return &inputerr.Error{File: path, Line: line, Col: col, Got: strconv.Quote(word), Want: want}
	}
	if len(s.X) == maxMeasuredRows {
		return &inputerr.Error{File: path, Want: fmt.Sprintf("at most %d rows", maxMeasuredRows)}
	}
	s.X, s.Y, s.SE = append(s.X, values[0]), append(s.Y, values[1]), append(s.SE, values[2])
	return nil
}
