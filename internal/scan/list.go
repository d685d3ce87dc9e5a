package scan

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strings"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/inputerr"
)

// readList reads the points from a file of comma-separated values: the first line names the input
// paths, each further one is a point. Values are written as in an input, with their units.
func (p *Plan) readList(n *yaml.Node, kept string) {
	if n.Kind != yaml.ScalarNode || n.Value == "" {
		p.fail(n, "points", found(n), "the name of a CSV file", "")
		return
	}
	path := n.Value
	if !filepath.IsAbs(path) {
		path = filepath.Join(p.folder, path)
	}
	if kept != "" {
		path = filepath.Join(kept, listFile)
	}
	text, bad := readFile(path, maxListBytes)
	if bad != nil {
		p.errs = append(p.errs, bad)
		return
	}
	p.list = text
	p.sampled.method = methodGrid
	rows, ok := p.parseList(path, text)
	if !ok {
		return
	}
	p.buildAll(rows)
	if len(p.errs) > 0 { // the values stand in the list, not in the plan
		for _, e := range p.errs {
			if e.File == p.file {
				e.File = path
			}
		}
	}
}

// parseList takes the lines apart. The positions of the values are those in the list.
func (p *Plan) parseList(path string, text []byte) ([][]*yaml.Node, bool) {
	fail := func(line, col int, got, want string) {
		p.errs = append(p.errs, &inputerr.Error{
			File: path, Line: line, Col: col, Got: got, Want: want,
		})
	}
	r := csv.NewReader(bytes.NewReader(bytes.TrimPrefix(text, []byte("\xef\xbb\xbf"))))
	r.FieldsPerRecord, r.TrimLeadingSpace, r.Comment = -1, true, '#'
	var rows [][]*yaml.Node
	for {
		record, err := r.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		var bad *csv.ParseError
		if errors.As(err, &bad) {
			fail(bad.Line, bad.Column, "", "comma-separated values; "+bad.Err.Error())
			return nil, false
		}
		if err != nil {
			fail(0, 0, "", err.Error())
			return nil, false
		}
		var nodes []*yaml.Node
		for i, field := range record {
			v := scalar(strings.TrimSpace(field))
			v.Line, v.Column = r.FieldPos(i)
			nodes = append(nodes, v)
		}
		if len(p.Axes) == 0 {
			if !p.readHead(path, nodes) {
				return nil, false
			}
			continue
		}
		if len(nodes) != len(p.Axes) {
			fail(nodes[0].Line, 1, fmt.Sprintf("%d values", len(nodes)),
				fmt.Sprintf("%d, one for each name of the first line", len(p.Axes)))
			return nil, false
		}
		if rows = append(rows, nodes); len(rows) > maxPoints {
			fail(nodes[0].Line, 1, "more points", fmt.Sprintf("at most %d", maxPoints))
			return nil, false
		}
	}
	if len(rows) == 0 {
		fail(0, 0, "no points", "a line of input paths and a line for each point")
	}
	return rows, len(rows) > 0
}

// readHead takes the names of the axes.
func (p *Plan) readHead(path string, nodes []*yaml.Node) bool {
	before := len(p.errs)
	for _, n := range nodes {
		if p.distinct(n, n.Value) {
			p.Axes = append(p.Axes, Axis{Path: n.Value, node: n})
		}
	}
	for _, e := range p.errs[before:] {
		e.File = path
	}
	if len(p.Axes) > maxAxes {
		p.errs = append(p.errs, &inputerr.Error{
			File: path, Line: 1, Got: fmt.Sprintf("%d input paths", len(p.Axes)),
			Want: fmt.Sprintf("at most %d", maxAxes),
		})
	}
	return len(p.errs) == before
}
