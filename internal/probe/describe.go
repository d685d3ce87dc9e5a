package probe

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/config"
	"ionfall/internal/inputerr"
)

// Description is a file that says how measurements were made.
type Description struct {
	File      string
	Probes    []ProbeDescription
	Analysers []AnalyserDescription
}

// ProbeDescription is one probe at one place, with its sweeps.
type ProbeDescription struct {
	Name   string
	Sweeps string // file of the sweeps, relative to that of the description
	// Position of the tip from the powered electrode [m]; NaN if it is not stated.
	Position float64
	// Across says that the tip stands across the electrodes' planes, along the gap.
	Across bool
	// AreaError is the relative standard error of the tip's area.
	AreaError float64
	// Run is the results folder to compare with, if it is stated here.
	Run     string
	Columns Columns
	Setup   Setup
	// Inputs tell the point of a scan, beside the pressure.
	Inputs []Condition

	Placed
}

// ParseDescription reads a description. The error is an inputerr.List.
func ParseDescription(name string, src []byte) (*Description, error) {
	d := &describer{file: name}
	root := d.document(src)
	out := &Description{File: name}
	if root != nil {
		d.mapping(root, "", []string{"probes", "analysers"}, func(key string, n *yaml.Node) {
			for i, item := range d.items(n, key) {
				path := key + "." + strconv.Itoa(i)
				if key == "probes" {
					out.Probes = append(out.Probes, d.probe(item, path))
				} else {
					out.Analysers = append(out.Analysers, d.analyser(item, path))
				}
			}
		})
		if len(out.Probes)+len(out.Analysers) == 0 && len(d.errs) == 0 {
			d.fail(root, "", "no measurements", "probes, analysers or both, each a list", "")
		}
	}
	if err := d.errs.Err(); err != nil {
		return nil, err
	}
	return out, nil
}

// describer reads YAML; mistakes are collected.
type describer struct {
	file string
	errs inputerr.List
}

func (d *describer) fail(n *yaml.Node, key, got, want, hint string) {
	d.errs = append(d.errs, &inputerr.Error{
		File: d.file, Line: n.Line, Col: n.Column, Key: key, Got: got, Want: want, Hint: hint,
	})
}

// document is the content of the only document, or nil.
func (d *describer) document(src []byte) *yaml.Node {
	loader, err := yaml.NewLoader(bytes.NewReader(src))
	var doc yaml.Node
	if err == nil {
		err = loader.Load(&doc)
	}
	bad := &inputerr.Error{File: d.file}
	var syntax *yaml.LoadError
	switch {
	case errors.Is(err, io.EOF), err == nil && len(doc.Content) == 0:
		bad.Got, bad.Want = "an empty file", "probes, analysers or both, each a list"
	case errors.As(err, &syntax):
		bad.Line, bad.Col = syntax.Mark.Line, syntax.Mark.Column
		bad.Hint = "not valid YAML: " + syntax.Message
	case err != nil:
		bad.Hint = "not valid YAML: " + err.Error()
	default:
		return doc.Content[0]
	}
	d.errs = append(d.errs, bad)
	return nil
}

// mapping visits the known keys of a mapping.
func (d *describer) mapping(n *yaml.Node, path string, known []string,
	visit func(key string, n *yaml.Node),
) {
	if n.Kind != yaml.MappingNode {
		d.fail(n, path, "no mapping", "a mapping with "+strings.Join(known, ", "), "")
		return
	}
	seen := map[string]bool{}
	for i := 0; i+1 < len(n.Content); i += 2 {
		key, value := n.Content[i], n.Content[i+1]
		full := strings.TrimPrefix(path+"."+key.Value, ".")
		switch {
		case !slices.Contains(known, key.Value):
			hint := ""
			if near := inputerr.Nearest(key.Value, known); near != "" {
				hint = fmt.Sprintf("did you mean %q?", near)
			}
			d.fail(key, full, "an unknown key", "one of "+strings.Join(known, ", "), hint)
		case seen[key.Value]:
			d.fail(key, full, "the key a second time", "each key once", "")
		case value.Kind == yaml.AliasNode:
			d.fail(value, full, "an alias", "the value itself", "")
		default:
			visit(key.Value, value)
		}
		seen[key.Value] = true
	}
}

// items of a list.
func (d *describer) items(n *yaml.Node, path string) []*yaml.Node {
	const most = 200
	if n.Kind != yaml.SequenceNode || len(n.Content) == 0 || len(n.Content) > most {
		d.fail(n, path, "no such list", fmt.Sprintf("a list of 1 to %d items", most), "")
		return nil
	}
	return n.Content
}

// text is a scalar that is not empty.
func (d *describer) text(n *yaml.Node, path string) string {
	if n.Kind != yaml.ScalarNode || strings.TrimSpace(n.Value) == "" {
		d.fail(n, path, "no text", "a text", "")
		return ""
	}
	return n.Value
}

// quantity between two bounds, in SI units.
func (d *describer) quantity(n *yaml.Node, path string, m config.Measure, lo, hi float64) float64 {
	v, bad := m.Read(d.text(n, path))
	if bad != nil {
		d.fail(n, path, bad.Got, bad.Want, bad.Hint)
		return math.NaN()
	}
	if !(v >= lo && v <= hi) {
		d.fail(n, path, n.Value, fmt.Sprintf("from %g to %g in SI units", lo, hi), "")
	}
	return v
}

// choice is one of several words.
func (d *describer) choice(n *yaml.Node, path string, words ...string) string {
	if v := d.text(n, path); v == "" || slices.Contains(words, v) {
		return v
	}
	d.fail(n, path, strconv.Quote(n.Value), "one of "+strings.Join(words, ", "), "")
	return ""
}

// integer between two bounds.
func (d *describer) integer(n *yaml.Node, path string, lo, hi int) int {
	v, err := strconv.Atoi(d.text(n, path))
	if err != nil || v < lo || v > hi {
		d.fail(n, path, strconv.Quote(n.Value), fmt.Sprintf("a whole number from %d to %d", lo, hi),
			"")
	}
	return v
}
