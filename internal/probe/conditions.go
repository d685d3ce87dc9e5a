package probe

import (
	"fmt"
	"math"
	"strings"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/config"
	"ionfall/internal/inputerr"
)

// Placed is a part of a description that knows where its keys stand.
type Placed struct {
	file string
	pos  map[string][2]int
}

func placed(file string, n *yaml.Node) Placed {
	return Placed{file, map[string][2]int{"": {n.Line, n.Column}}}
}

// Errorf is an error about a key, in its place.
func (p *Placed) Errorf(key, got, want, hint string) *inputerr.Error {
	at := p.pos[key]
	if at == [2]int{} {
		at = p.pos[""]
	}
	return &inputerr.Error{
		File: p.file, Line: at[0], Col: at[1], Key: key, Got: got, Want: want, Hint: hint,
	}
}

// Condition is an input of the discharge that a measurement was made at: it tells the point of a
// scan.
type Condition struct{ Path, Text string }

// sameInput is how far a point may be from what a measurement states.
const sameInput = 0.01

// conditions reads paths of the input and their values.
func (d *describer) conditions(n *yaml.Node, path string) []Condition {
	if n.Kind != yaml.MappingNode || len(n.Content) == 0 {
		d.fail(n, path, "no mapping", "paths of the input with values, such as "+
			"{drive.tones.0.amplitude: 250 V}", "")
		return nil
	}
	var list []Condition
	for i := 0; i+1 < len(n.Content); i += 2 {
		key := n.Content[i].Value
		list = append(list, Condition{key, d.text(n.Content[i+1], path+"."+key)})
	}
	return list
}

// At are the conditions together with the pressure [Pa], where that is known.
func At(pressure float64, list []Condition) []Condition {
	if !(pressure > 0) {
		return list
	}
	return append([]Condition{{"gas.pressure", fmt.Sprintf("%.9g Pa", pressure)}}, list...)
}

// Holds tells whether a resolved input has the value, within 1 %, and what it has.
func (c Condition) Holds(resolved []byte) (same bool, got string, err error) {
	l, err := find(resolved, c.Path)
	if err != nil {
		return false, "", err
	}
	same = true
	for _, n := range l.found {
		got = n.Value
		value, unit, err := splitValue(n.Value)
		if err != nil { // a word
			same = same && strings.TrimSpace(c.Text) == n.Value
			continue
		}
		want, err := (&Input{Unit: unit}).read(c.Text)
		if err != nil {
			return false, got, fmt.Errorf("%s: got %w", c.Path, err)
		}
		same = same && math.Abs(value-want) <= sameInput*math.Max(math.Abs(want), math.Abs(value))
	}
	return same, got, nil
}

// pressureOf reads the key of that name.
func (d *describer) pressureOf(n *yaml.Node, path string) float64 {
	return d.quantity(n, path, config.MeasurePressure, 1e-4, 1e5)
}

// File is that of the description.
func (p *Placed) File() string { return p.file }
