package probe

import (
	"bytes"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"ionfall/internal/inputerr"
)

// record is a line of a file of numbers.
type record struct {
	line  int
	cells []string
}

// reader takes a file of columns apart; mistakes are collected.
type reader struct {
	name         string
	separator    rune // 0 is blanks
	decimalComma bool
	header       []string
	headerLine   int
	rows         []record
	errs         inputerr.List
}

func (r *reader) fail(line, col int, key, got, want, hint string) {
	r.errs = append(r.errs, &inputerr.Error{
		File: r.name, Line: line, Col: col, Key: key, Got: got, Want: want, Hint: hint,
	})
}

// ReadSweeps reads a text file with a header and columns of voltage and current, separated by
// commas, semicolons, tabs or blanks; lines that start with # are remarks. Several sweeps follow
// each other, told apart by a column or by jumps and turns of the voltage. The error is an
// inputerr.List.
func ReadSweeps(name string, src []byte, columns Columns) (*File, error) {
	r, f, err := readChecked(name, src, columns)
	if err != nil {
		return nil, err
	}
	r.orient(columns.Sign, f)
	return f, r.errs.Err()
}

// readChecked reads the sweeps of a file, whichever way their current goes.
func readChecked(name string, src []byte, columns Columns) (*reader, *File, error) {
	r := &reader{name: name}
	r.split(src)
	if err := r.errs.Err(); err != nil {
		return nil, nil, err
	}
	f := &File{Name: name}
	points := r.points(columns, f)
	if err := r.errs.Err(); err != nil {
		return nil, nil, err
	}
	if f.Sweeps = r.legs(points, f); len(r.errs) == 0 {
		r.checkSweeps(f)
	}
	return r, f, r.errs.Err()
}

// split finds lines, separator and header.
func (r *reader) split(src []byte) {
	switch {
	case len(src) > MaxFileBytes:
		r.fail(0, 0, "", fmt.Sprintf("%d bytes", len(src)),
			fmt.Sprintf("at most %d bytes", MaxFileBytes), "")
		return
	case bytes.HasPrefix(src, []byte{0xff, 0xfe}), bytes.HasPrefix(src, []byte{0xfe, 0xff}):
		r.fail(1, 1, "", "text in UTF-16", "text in UTF-8", "")
		return
	}
	src = bytes.TrimPrefix(src, []byte("\xef\xbb\xbf"))
	for i, line := range strings.Split(strings.ReplaceAll(string(src), "\r\n", "\n"), "\n") {
		text := strings.TrimSpace(line)
		if text == "" || strings.HasPrefix(text, "#") {
			continue
		}
		if !utf8.ValidString(line) {
			r.fail(i+1, 0, "", "bytes that are no text", "text in UTF-8", "")
			return
		}
		if r.header == nil {
			r.choose(line)
			r.header, r.headerLine = r.cells(line), i+1
			continue
		}
		if len(r.rows) >= MaxPoints {
			r.fail(i+1, 0, "", fmt.Sprintf("more than %d points", MaxPoints), "fewer", "")
			return
		}
		r.rows = append(r.rows, record{i + 1, r.cells(line)})
	}
	if r.header == nil {
		r.fail(0, 0, "", "an empty file",
			"a header such as voltage_V,current_A and rows of numbers", "")
	}
}

// choose picks the separator from the header.
func (r *reader) choose(line string) {
	for _, c := range []rune{'\t', ';', ','} {
		if strings.ContainsRune(line, c) {
			r.separator, r.decimalComma = c, c != ','
			return
		}
	}
	r.decimalComma = true
}

func (r *reader) cells(line string) []string {
	if r.separator == 0 {
		return strings.Fields(line)
	}
	cells := strings.Split(line, string(r.separator))
	for i := range cells {
		cells[i] = strings.Trim(strings.TrimSpace(cells[i]), `"`)
	}
	return cells
}

// number reads a cell.
func (r *reader) number(row record, col int, key string) float64 {
	if col >= len(row.cells) {
		r.fail(row.line, 0, key, fmt.Sprintf("%d columns", len(row.cells)),
			fmt.Sprintf("%d as in the header of line %d", len(r.header), r.headerLine), "")
		return 0
	}
	text := row.cells[col]
	if r.decimalComma && !strings.Contains(text, ".") {
		text = strings.Replace(text, ",", ".", 1)
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil || math.IsNaN(v) || math.IsInf(v, 0) {
		r.fail(row.line, col+1, key, strconv.Quote(row.cells[col]), "a finite number",
			"the column counts cells")
		return 0
	}
	return v
}

// point is a measured pair, with where it stands.
type point struct {
	voltage, current float64
	group            string
	line             int
}

// points reads voltage and current in SI units.
func (r *reader) points(columns Columns, f *File) []point {
	voltage := r.column("voltage", columns.Voltage, columns.VoltageUnit, voltageColumn())
	current := r.column("current", columns.Current, columns.CurrentUnit, currentColumn())
	group := -1
	if columns.Sweep != "" {
		group = r.named("sweep", columns.Sweep)
	} else {
		for i, h := range r.header {
			if word, _ := splitUnit(h); strings.EqualFold(word, "sweep") {
				group = i
			}
		}
	}
	if len(r.errs) > 0 {
		return nil
	}
	f.Notes = append(f.Notes, fmt.Sprintf("voltage: column %q in %s; current: column %q in %s",
		r.header[voltage.index], voltage.unit, r.header[current.index], current.unit))
	list := make([]point, 0, len(r.rows))
	for _, row := range r.rows {
		p := point{
			voltage: voltage.scale * r.number(row, voltage.index, "voltage"),
			current: current.scale * r.number(row, current.index, "current"),
			line:    row.line,
		}
		if group >= 0 && group < len(row.cells) {
			p.group = row.cells[group]
		}
		list = append(list, p)
		if len(r.errs) > 100 {
			break // of which 20 are told
		}
	}
	return list
}
