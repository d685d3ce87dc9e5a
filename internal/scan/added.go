package scan

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/store"
)

const addedFile = "added.csv"

// readAdded takes in the points that a search has added to the scan.
func (f *Folder) readAdded() error {
	path := filepath.Join(f.Dir, addedFile)
	text, err := os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return err
	}
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	if err != nil {
		return fmt.Errorf("%s: %w", path, err)
	}
	f.Plan.Points = f.Plan.Points[:f.Plan.planned]
	for i, row := range rows {
		if i == 0 {
			continue
		}
		if err := f.Plan.add(row); err != nil {
			return fmt.Errorf("%s:%d: %w", path, i+1, err)
		}
	}
	return nil
}

// add makes one more point of values as an input has them.
func (p *Plan) add(texts []string) error {
	if len(texts) != len(p.Axes) {
		return fmt.Errorf("got %d values, want %d", len(texts), len(p.Axes))
	}
	nodes := make([]*yaml.Node, len(texts))
	for i, text := range texts {
		nodes[i] = scalar(text)
	}
	point, errs := p.build(len(p.Points)+1, nodes)
	if err := errs.Err(); err != nil {
		return err
	}
	p.Points = append(p.Points, point)
	return nil
}

// addPlaces adds the points at places of the unit cube, on the disk before anything is run.
func (f *Folder) addPlaces(cube []Axis, places [][]float64) error {
	var b bytes.Buffer
	w := csv.NewWriter(&b)
	rows := [][]string{}
	var head []string
	for _, a := range f.Plan.Axes {
		head = append(head, a.Path)
	}
	rows = append(rows, head)
	for _, point := range f.Plan.Points[f.Plan.planned:] {
		rows = append(rows, point.Texts)
	}
	for _, u := range places {
		texts := make([]string, len(cube))
		for k := range cube {
			texts[k] = cube[k].textAt(u[k])
		}
		if err := f.Plan.add(texts); err != nil {
			return err
		}
		rows = append(rows, texts)
	}
	if err := w.WriteAll(rows); err != nil {
		return err
	}
	return store.WriteFile(filepath.Join(f.Dir, addedFile), b.Bytes())
}

// cube returns the axes as ranges: those that the plan gives, or from the smallest to the largest
// value that it has.
func (p *Plan) cube() ([]Axis, error) {
	cube := make([]Axis, len(p.Axes))
	for k, a := range p.Axes {
		if a.Text {
			return nil, fmt.Errorf("%s varies by words: a search needs numbers", a.Path)
		}
		if !a.ranged {
			a.low, a.high = math.Inf(1), math.Inf(-1)
			for _, point := range p.Points[:p.planned] {
				v, unit := splitUnit(point.Texts[k])
				a.low, a.high, a.suffix = math.Min(a.low, v), math.Max(a.high, v), unit
			}
			a.log = a.low > 0 && a.high > 3*a.low
		}
		if a.low == a.high {
			return nil, fmt.Errorf("%s has one value only: a search needs a range", a.Path)
		}
		cube[k] = a
	}
	return cube, nil
}

// placeIn is where a point is in the unit cube of the ranges.
func placeIn(cube []Axis, point Point) []float64 {
	u := make([]float64, len(cube))
	for k, a := range cube {
		v, _ := splitUnit(point.Texts[k])
		u[k] = (v - a.low) / (a.high - a.low)
		if a.log {
			u[k] = math.Log(v/a.low) / math.Log(a.high/a.low)
		}
	}
	return u
}
