package probe

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/config"
)

// Input is an uncertain input of a case with its prior.
type Input struct {
	// Path in the input file, such as gas.temperature; a * stands for all keys or items there, which
	// then have the same value.
	Path string
	// Lo and Hi bound the values, Mean and Sigma are those of a normal prior; Sigma 0 is a uniform
	// one. In the unit that the resolved input writes.
	Lo, Hi, Mean, Sigma float64
	Unit                string
	// Nominal is the value of the case.
	Nominal float64
}

// PriorText says what the prior is.
func (f *Input) PriorText() string {
	if f.Sigma > 0 {
		return strings.TrimSpace(fmt.Sprintf("normal, %.4g +- %.2g %s", f.Mean, f.Sigma, f.Unit))
	}
	return strings.TrimSpace(fmt.Sprintf("uniform, %.4g to %.4g %s", f.Lo, f.Hi, f.Unit))
}

// value of a place in 0..1.
func (f *Input) value(u float64) float64 { return f.Lo + u*(f.Hi-f.Lo) }

// logPrior of a value, up to a constant.
func (f *Input) logPrior(x float64) float64 {
	if f.Sigma > 0 {
		return -math.Pow((x-f.Mean)/f.Sigma, 2) / 2
	}
	return 0
}

const (
	// reach of a normal prior that is looked at, in standard deviations.
	reach = 2.5
	// MaxInputs that are adjusted at once.
	MaxInputs = 6
)

// usualPriors of inputs that are seldom known, where none is stated.
func usualPriors() map[string][2]float64 {
	return map[string][2]float64{"ion_secondary_yield": {0, 0.3}, "electron_reflection": {0, 0.5}}
}

// ParseInput reads PATH or PATH(prior) for a resolved case. A prior is a range such as 300 K..450 K
// (uniform), or a relative or absolute standard deviation such as 5 % or +- 10 V (normal).
func ParseInput(text string, resolved []byte) (*Input, error) {
	path, prior, found := strings.Cut(text, "(")
	path = strings.TrimSpace(path)
	if found {
		var ok bool
		if prior, ok = strings.CutSuffix(strings.TrimSpace(prior), ")"); !ok {
			return nil, errors.New("no closing bracket after the prior")
		}
	}
	nodes, err := find(resolved, path)
	if err != nil {
		return nil, err
	}
	f := &Input{Path: path}
	if f.Nominal, f.Unit, err = splitValue(nodes.found[0].Value); err != nil {
		return nil, fmt.Errorf("%s is %q, want a number", path, nodes.found[0].Value)
	}
	prior = strings.TrimSpace(prior)
	if prior == "" {
		last := path[strings.LastIndexByte(path, '.')+1:]
		bounds, ok := usualPriors()[last]
		if !ok {
			return nil, fmt.Errorf("no usual prior for %s: give one, as %s(5 %%) or %s(LOW..HIGH)", path,
				path, path)
		}
		f.Lo, f.Hi = bounds[0], bounds[1]
		return f, nil
	}
	return f, f.prior(prior)
}

// prior reads the text of a prior.
func (f *Input) prior(text string) error {
	if lo, hi, ok := strings.Cut(text, ".."); ok {
		var err1, err2 error
		f.Lo, err1 = f.read(lo)
		f.Hi, err2 = f.read(hi)
		if err := errors.Join(err1, err2); err != nil {
			return err
		}
		if !(f.Hi > f.Lo) {
			return fmt.Errorf("the prior %q, want a range from low to high", text)
		}
		return nil
	}
	f.Mean = f.Nominal
	if absolute, ok := strings.CutPrefix(text, "+-"); ok {
		var err error
		if f.Sigma, err = f.read(absolute); err != nil {
			return err
		}
	} else {
		part, bad := config.MeasureRatio.Read(text)
		if bad != nil {
			return fmt.Errorf("the prior %q, want a range such as 300 K..450 K, a relative error such as "+
				"5 %%, or an error such as +- 10 V", text)
		}
		f.Sigma = part * math.Abs(f.Nominal)
	}
	if !(f.Sigma > 0) {
		return fmt.Errorf("the prior %q of a value of %g has no width", text, f.Nominal)
	}
	f.Lo, f.Hi = f.Mean-reach*f.Sigma, f.Mean+reach*f.Sigma
	if f.Mean > 0 {
		f.Lo = math.Max(f.Lo, 0)
	}
	return nil
}

// read is a value in the unit of the input.
func (f *Input) read(text string) (float64, error) {
	text = strings.TrimSpace(text)
	if f.Unit == "" {
		v, err := strconv.ParseFloat(text, 64)
		if err != nil {
			return 0, fmt.Errorf("%q, want a plain number", text)
		}
		return v, nil
	}
	for _, m := range []config.Measure{
		config.MeasureLength, config.MeasurePressure, config.MeasureTemperature,
		config.MeasureVoltage, config.MeasureRatio, config.MeasureAngle, config.MeasureEnergy,
		config.MeasureResistance, config.MeasureDuration,
	} {
		one, bad := m.Read("1 " + f.Unit)
		if bad != nil {
			continue
		}
		v, bad := m.Read(text)
		if bad != nil {
			return 0, fmt.Errorf("%q, want %s", text, bad.Want)
		}
		if m == config.MeasureTemperature {
			return v, nil // resolved inputs are in kelvin
		}
		return v / one, nil
	}
	number, unit, err := splitValue(text)
	if err != nil || unit != f.Unit {
		return 0, fmt.Errorf("%q, want a number in %s", text, f.Unit)
	}
	return number, nil
}

// splitValue takes "250 V" apart.
func splitValue(text string) (number float64, unit string, err error) {
	word, unit, _ := strings.Cut(strings.TrimSpace(text), " ")
	number, err = strconv.ParseFloat(word, 64)
	return number, strings.TrimSpace(unit), err
}

// located are the values of a path in a document.
type located struct {
	doc   yaml.Node
	found []*yaml.Node
}

// find returns the scalars at a path.
func find(src []byte, path string) (*located, error) {
	l := &located{}
	loader, err := yaml.NewLoader(bytes.NewReader(src))
	if err == nil {
		err = loader.Load(&l.doc)
	}
	if err != nil || len(l.doc.Content) == 0 {
		return nil, fmt.Errorf("the case cannot be read: %w", err)
	}
	nodes := l.doc.Content[:1]
	for i, part := range strings.Split(path, ".") {
		var next []*yaml.Node
		var names []string
		for _, n := range nodes {
			below, known := children(n, part)
			next, names = append(next, below...), append(names, known...)
		}
		if len(next) == 0 {
			return nil, fmt.Errorf("no input %s: at %q there are %s", path,
				strings.Join(strings.Split(path, ".")[:i+1], "."), strings.Join(names, ", "))
		}
		nodes = next
	}
	for _, n := range nodes {
		if n.Kind != yaml.ScalarNode {
			return nil, fmt.Errorf("%s is no single value", path)
		}
	}
	l.found = nodes
	return l, nil
}

// children are those of a node that a part of a path names, and the names there are.
func children(n *yaml.Node, part string) (found []*yaml.Node, names []string) {
	for i := range n.Content {
		var name string
		var value *yaml.Node
		switch {
		case n.Kind == yaml.SequenceNode:
			name, value = strconv.Itoa(i), n.Content[i]
		case n.Kind == yaml.MappingNode && i%2 == 1:
			name, value = n.Content[i-1].Value, n.Content[i]
		default:
			continue
		}
		names = append(names, name)
		if part == "*" || part == name {
			found = append(found, value)
		}
	}
	return found, names
}

// With returns the resolved case with other values of inputs.
func With(resolved []byte, inputs []Input, values []float64) ([]byte, error) {
	for i := range inputs {
		l, err := find(resolved, inputs[i].Path)
		if err != nil {
			return nil, err
		}
		text := strconv.FormatFloat(values[i], 'g', 12, 64)
		for _, n := range l.found {
			n.Value = strings.TrimSpace(text + " " + inputs[i].Unit)
		}
		if resolved, err = yaml.Dump(&l.doc, yaml.WithLineWidth(-1)); err != nil {
			return nil, fmt.Errorf("writing the case: %w", err)
		}
	}
	return resolved, nil
}
