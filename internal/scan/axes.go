package scan

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/inputerr"
)

const (
	axisWanted = "a list of values, or a range such as {from: 100 V, to: 400 V, points: 7}"
	linear     = "linear"
	logarithm  = "log"
)

// readSampling reads how the points of the ranges are chosen.
func (p *Plan) readSampling(n *yaml.Node) {
	p.sampled = sampling{method: methodGrid, seed: 1}
	if n == nil {
		return
	}
	methods := []string{methodGrid, methodLatin, methodHalton}
	keys := p.mapping(n, "sampling", "a mapping with method, points, seed", "method", "points", "seed")
	if m := keys["method"]; m != nil {
		p.sampled.method = m.Value
		if !contains(methods, m.Value) {
			p.fail(m, "sampling.method", found(m), "one of "+strings.Join(methods, ", "), "")
		}
	}
	if s := keys["seed"]; s != nil {
		p.sampled.seed = uint64(p.whole(s, "sampling.seed", 0, math.MaxInt32))
	}
	points := keys["points"]
	switch {
	case points == nil && p.sampled.method != methodGrid:
		p.fail(n, "sampling.points", "nothing", "the number of points", "the key is required")
	case points != nil && p.sampled.method == methodGrid:
		p.fail(points, "sampling.points", found(points), "no number of points with a grid",
			"each range of a grid has its own points")
	case points != nil:
		p.sampled.points = p.whole(points, "sampling.points", 1, maxPoints)
	}
}

// whole reads a whole number.
func (p *Plan) whole(n *yaml.Node, key string, low, high int) int {
	v, err := strconv.Atoi(n.Value)
	if n.Kind != yaml.ScalarNode || err != nil || v < low || v > high {
		p.fail(n, key, found(n), fmt.Sprintf("a whole number from %d to %d", low, high), "")
		return low
	}
	return v
}

// readAxes reads what varies.
func (p *Plan) readAxes(n *yaml.Node) {
	if n.Kind != yaml.MappingNode || len(n.Content) == 0 || len(n.Content)/2 > maxAxes {
		p.fail(n, "vary", found(n),
			fmt.Sprintf("a mapping of 1 to %d input paths to their values", maxAxes), "")
		return
	}
	for i := 0; i+1 < len(n.Content); i += 2 {
		k, v := n.Content[i], n.Content[i+1]
		if !p.distinct(k, k.Value) {
			continue
		}
		axis := Axis{Path: k.Value, node: k}
		ok := false
		switch v.Kind {
		case yaml.SequenceNode:
			ok = p.readValues(&axis, v)
		case yaml.MappingNode:
			ok = p.readRange(&axis, v)
		default:
			p.fail(v, axis.Path, found(v), axisWanted, "")
		}
		if ok {
			p.Axes = append(p.Axes, axis)
		}
	}
}

// distinct refuses an axis that is, or lies within, another.
func (p *Plan) distinct(n *yaml.Node, path string) bool {
	for _, a := range p.Axes {
		if within(path, a.Path) || within(a.Path, path) {
			p.fail(n, path, "", "", "it varies already, as "+a.Path)
			return false
		}
	}
	if path == "" || strings.HasPrefix(path, ".") || strings.HasSuffix(path, ".") {
		p.fail(n, path, found(n), "an input path such as gas.pressure", "")
		return false
	}
	return true
}

// within reports whether an input path is another or lies below it.
func within(path, other string) bool {
	return path == other || strings.HasPrefix(path, other+".")
}

// readValues reads a list of values, each of which is a valid input with the base.
func (p *Plan) readValues(a *Axis, n *yaml.Node) bool {
	if len(n.Content) == 0 || len(n.Content) > maxValues {
		p.fail(n, a.Path, fmt.Sprintf("%d values", len(n.Content)),
			fmt.Sprintf("1 to %d values", maxValues), "")
		return false
	}
	if p.sampled.method != methodGrid {
		p.fail(n, a.Path, "a list of values",
			"a range such as {from: 100 V, to: 400 V} for the method "+p.sampled.method, "")
		return false
	}
	ok := true
	seen := map[string]bool{}
	for i, v := range n.Content {
		text, unit, good := p.canonical(a, v)
		if good && seen[text] {
			p.fail(v, a.Path, found(v), "values that differ", "")
			good = false
		}
		seen[text] = true
		ok = ok && good
		if good && i == 0 {
			a.suffix = unit
		}
		a.Text = a.Text || good && v.Kind != yaml.ScalarNode
	}
	a.values = n.Content
	return ok
}

// readRange reads from, to, points and spacing.
func (p *Plan) readRange(a *Axis, n *yaml.Node) bool {
	before := len(p.errs)
	keys := p.mapping(n, a.Path, axisWanted, "from", "to", "points", "spacing")
	for _, key := range []string{"from", "to"} {
		v := keys[key]
		if v == nil {
			p.fail(n, under(a.Path, key), "nothing", "an end of the range", "the key is required")
			continue
		}
		text, unit, ok := p.canonical(a, v)
		if !ok {
			continue
		}
		number, err := strconv.ParseFloat(strings.TrimSuffix(text, " "+unit), 64)
		if err != nil {
			p.fail(v, under(a.Path, key), found(v), "a number or a quantity", "")
		}
		a.suffix = unit
		if key == "from" {
			a.low = number
		} else {
			a.high = number
		}
	}
	if s := keys["spacing"]; s != nil {
		a.log = s.Value == logarithm
		if s.Value != linear && s.Value != logarithm {
			p.fail(s, under(a.Path, "spacing"), found(s), "linear or log", "")
		}
	}
	if len(p.errs) > before {
		return false
	}
	if a.low == a.high || a.log && (a.low <= 0 || a.high <= 0) {
		want := "two ends that differ"
		if a.log {
			want += ", both above 0 for log spacing"
		}
		p.fail(n, a.Path, fmt.Sprintf("%g to %g %s", a.low, a.high, a.suffix), want, "")
		return false
	}
	a.ranged = true
	return p.readCount(a, n, keys["points"])
}

// readCount reads the number of points of a range, which only a grid needs.
func (p *Plan) readCount(a *Axis, n, points *yaml.Node) bool {
	if p.sampled.method != methodGrid {
		if points != nil {
			p.fail(points, under(a.Path, "points"), found(points),
				"sampling.points for the method "+p.sampled.method, "")
		}
		return points == nil
	}
	if points == nil {
		p.fail(n, under(a.Path, "points"), "nothing", "the number of points", "the key is required")
		return false
	}
	before := len(p.errs)
	count := p.whole(points, under(a.Path, "points"), 2, maxValues)
	for i := range count {
		v := scalar(a.textAt(float64(i) / float64(count-1)))
		v.Line, v.Column = n.Line, n.Column
		a.values = append(a.values, v)
	}
	return len(p.errs) == before
}

// significant is how many digits a value inside a range has: nobody sets a knob more finely.
const significant = 6

// textAt is the input text of the place u of a range, 0 at its start and 1 at its end.
func (a *Axis) textAt(u float64) string {
	v := a.low + (a.high-a.low)*u
	if a.log {
		v = a.low * math.Pow(a.high/a.low, u)
	}
	switch u {
	case 0:
		v = a.low
	case 1:
		v = a.high
	default:
		// The text has exactly these digits, so it parses.
		v, _ = strconv.ParseFloat(strconv.FormatFloat(v, 'g', significant, 64), 64)
	}
	text := strconv.FormatFloat(v, 'g', -1, 64)
	if a.suffix != "" {
		text += " " + a.suffix
	}
	return text
}

// canonical is a value as the resolved input has it, and its unit, when only this axis is changed.
func (p *Plan) canonical(a *Axis, v *yaml.Node) (text, unit string, ok bool) {
	one := Plan{
		file: p.file, folder: p.folder, tree: p.tree, origin: p.origin, Axes: []Axis{*a},
	}
	point, errs := one.build(1, []*yaml.Node{v})
	if len(errs) > 0 {
		for _, e := range errs {
			e.File, e.Line, e.Col = p.file, v.Line, v.Column
		}
		p.errs = append(p.errs, errs[:1]...)
		return "", "", false
	}
	text = point.Texts[0]
	_, unit = splitUnit(text)
	return text, unit, true
}

// splitUnit takes "5 Pa" apart. A text that does not start with a number is all unit.
func splitUnit(text string) (number float64, unit string) {
	first, rest, _ := strings.Cut(text, " ")
	v, err := strconv.ParseFloat(first, 64)
	if err != nil {
		return math.NaN(), text
	}
	return v, rest
}

// placed gives errors about the input of a point the place in the plan that they come from.
func (p *Plan) placed(errs inputerr.List, number int, nodes []*yaml.Node) inputerr.List {
	for _, e := range errs {
		for i, a := range p.Axes {
			if e.Key != "" && (within(e.Key, a.Path) || within(a.Path, e.Key)) {
				e.File, e.Line, e.Col = p.file, a.node.Line, a.node.Column
				if n := nodes[i]; n.Line > 0 {
					e.Line, e.Col = n.Line, n.Column
				}
			}
		}
		if e.File != p.file {
			_, e.Line, e.Col = p.origin.Position(e.Key)
			e.File, _, _ = p.origin.Position("")
			e.Hint = strings.TrimPrefix(e.Hint+fmt.Sprintf("; with the values of point %d", number),
				"; ")
		}
	}
	return errs
}
