package scan

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"path/filepath"
	"strconv"

	"go.yaml.in/yaml/v4"
	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distmv"
	"gonum.org/v1/gonum/stat/samplemv"

	"ionfall/internal/config"
	"ionfall/internal/inputerr"
)

// choosePoints makes the points of the axes.
func (p *Plan) choosePoints() {
	var rows [][]*yaml.Node
	if p.sampled.method == methodGrid {
		count := 1
		for _, a := range p.Axes {
			if count *= len(a.values); count > maxPoints {
				p.fail(p.Axes[0].node, "vary", fmt.Sprintf("more than %d points", maxPoints),
					fmt.Sprintf("at most %d", maxPoints), "")
				return
			}
		}
		rows = p.grid(count)
	} else {
		rows = p.spread()
	}
	p.buildAll(rows)
}

// grid returns all combinations; the last axis changes fastest.
func (p *Plan) grid(count int) [][]*yaml.Node {
	rows := make([][]*yaml.Node, count)
	for i := range rows {
		rows[i] = make([]*yaml.Node, len(p.Axes))
		rest := i
		for k := len(p.Axes) - 1; k >= 0; k-- {
			values := p.Axes[k].values
			rows[i][k] = values[rest%len(values)]
			rest /= len(values)
		}
	}
	return rows
}

// spread returns points that fill the ranges evenly.
func (p *Plan) spread() [][]*yaml.Node {
	d, n := len(p.Axes), p.sampled.points
	batch := mat.NewDense(n, d, nil)
	source := rand.NewPCG(p.sampled.seed, 0)
	cube := distmv.NewUnitUniform(d, nil)
	if p.sampled.method == methodLatin {
		samplemv.LatinHypercube{Q: cube, Src: source}.Sample(batch)
	} else {
		samplemv.Halton{Kind: samplemv.Owen, Q: cube, Src: source}.Sample(batch)
	}
	rows := make([][]*yaml.Node, n)
	for i := range rows {
		for k := range p.Axes {
			v := scalar(p.Axes[k].textAt(batch.At(i, k)))
			v.Line, v.Column = p.Axes[k].node.Line, p.Axes[k].node.Column
			rows[i] = append(rows[i], v)
		}
	}
	return rows
}

// buildAll makes the points of the rows. All that is wrong with any of them is reported, each
// mistake once.
func (p *Plan) buildAll(rows [][]*yaml.Node) {
	seen := map[string]bool{}
	for _, nodes := range rows {
		point, errs := p.build(len(p.Points)+1, nodes)
		for _, e := range p.placed(errs, len(p.Points)+1, nodes) {
			place := fmt.Sprint(e.File, e.Line, e.Col, e.Key, e.Got)
			if !seen[place] {
				p.errs = append(p.errs, e)
			}
			seen[place] = true
		}
		p.Points = append(p.Points, point)
	}
	p.describeAxes()
}

// build makes the input of one point from its values on the axes.
func (p *Plan) build(number int, nodes []*yaml.Node) (Point, inputerr.List) {
	tree := clone(p.tree)
	for i, a := range p.Axes {
		if !set(tree, a.Path, clone(nodes[i])) {
			return Point{}, inputerr.List{{
				Key: a.Path, Hint: "the base has no such element to vary: counting is from 0",
			}}
		}
	}
	for _, key := range fileKeys() {
		if name := lookup(tree, key); name != nil && !filepath.IsAbs(name.Value) {
			return Point{}, inputerr.List{{
				Key: key, Got: found(name),
				Want: "a whole path, as the inputs of the points stand in folders of their own",
			}}
		}
	}
	if !p.varies("seed") {
		seed := strconv.FormatUint(p.origin.Seed+uint64(number), 10)
		set(tree, "seed", &yaml.Node{Kind: yaml.ScalarNode, Tag: "!!int", Value: seed})
	}
	fail := func(err error) (Point, inputerr.List) {
		var list inputerr.List
		if !errors.As(err, &list) {
			list = inputerr.List{{Hint: err.Error()}}
		}
		return Point{}, list
	}
	text, err := yaml.Dump(tree, yaml.WithLineWidth(-1))
	if err != nil {
		return fail(err)
	}
	c, err := config.Parse(pointName(number)+".yaml", text)
	if err != nil {
		return fail(err)
	}
	full, err := c.Resolved()
	if err != nil {
		return fail(err)
	}
	resolved, bad := parseYAML("resolved", full)
	if bad != nil {
		return fail(inputerr.List{bad})
	}
	point := Point{Number: number, Input: text}
	for _, a := range p.Axes {
		value, number := "", math.NaN()
		if n := lookup(resolved, a.Path); n != nil {
			value, number = textOf(n)
		}
		point.Texts, point.Values = append(point.Texts, value), append(point.Values, number)
	}
	return point, nil
}

// textOf is a value of the resolved input as text and, if it is one, as a number in its unit, with
// per cent as a fraction.
func textOf(n *yaml.Node) (string, float64) {
	if n.Kind != yaml.ScalarNode {
		n = clone(n)
		n.Style = yaml.FlowStyle
		text, err := yaml.Dump(n, yaml.WithLineWidth(-1))
		if err != nil {
			return "", math.NaN()
		}
		return string(bytes.TrimSpace(text)), math.NaN()
	}
	v, unit := splitUnit(n.Value)
	if unit == "%" {
		v /= 100
	}
	return n.Value, v
}

func (p *Plan) varies(path string) bool {
	for _, a := range p.Axes {
		if within(path, a.Path) {
			return true
		}
	}
	return false
}

// describeAxes finds the units of the axes from the points.
func (p *Plan) describeAxes() {
	for i := range p.Axes {
		a := &p.Axes[i]
		for _, point := range p.Points {
			if len(point.Texts) == 0 {
				continue // it is wrong, which has been reported
			}
			_, unit := splitUnit(point.Texts[i])
			name, known := unitSuffixes()[unit]
			a.Text = a.Text || math.IsNaN(point.Values[i]) || !known
			a.Unit = name.unit
		}
		if a.Text {
			a.Unit = ""
		}
	}
}

// Column is the name of an axis in the table of points.
func (a *Axis) Column() string {
	for _, name := range unitSuffixes() {
		if name.unit == a.Unit && a.Unit != "" {
			return a.Path + "_" + name.suffix
		}
	}
	return a.Path
}

type unitName struct{ unit, suffix string }

// unitSuffixes gives, for the units of resolved inputs, how tables write them.
func unitSuffixes() map[string]unitName {
	return map[string]unitName{
		"": {}, "%": {}, "m": {"m", "m"}, "Pa": {"Pa", "Pa"}, "K": {"K", "K"}, "V": {"V", "V"},
		"Hz": {"Hz", "Hz"}, "rad": {"rad", "rad"}, "eV": {"eV", "eV"}, "s": {"s", "s"},
		"/m3": {"1/m3", "m3"}, "m/s": {"m/s", "mps"}, "W": {"W", "W"}, "A": {"A", "A"},
		"F": {"F", "F"}, "H": {"H", "H"}, "Ohm": {"Ohm", "Ohm"}, "W/m2": {"W/m2", "Wpm2"},
		"kg": {"kg", "kg"}, "C": {"C", "C"}, "J": {"J", "J"},
	}
}

// pointName is that of the folder of a point.
func pointName(number int) string { return fmt.Sprintf("point=%04d", number) }

// Fingerprint identifies the points of the plan: a folder takes no other ones.
func (p *Plan) Fingerprint() string {
	h := sha256.New()
	for _, point := range p.Points[:p.planned] {
		h.Write(point.Input) // never fails
		h.Write([]byte{0})
	}
	return hex.EncodeToString(h.Sum(nil))
}
