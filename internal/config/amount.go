package config

import (
	"strings"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"
)

// Amount is a property of the reactor per area of the powered electrode, or in total, which the
// area of the powered electrode turns into the other. The zero value is "not given".
type Amount struct {
	// Value in SI units, per m2 or in total.
	Value float64
	// Total says that it is not per area.
	Total bool
}

// Given tells whether there is a value.
func (a Amount) Given() bool { return a.Value != 0 }

// PerArea returns the amount per area [... /m2] of a powered electrode with the area [m2].
func (a Amount) PerArea(area float64) float64 {
	if a.Total && a.Value != 0 {
		return a.Value / area
	}
	return a.Value
}

// TimesArea returns, for what becomes less with the area (a resistance), its value for 1 m2
// [... m2].
func (a Amount) TimesArea(area float64) float64 {
	if a.Total && a.Value != 0 {
		return a.Value * area
	}
	return a.Value
}

// amount is an Amount with a unit that tells which of the two it is.
type amount struct {
	dst        *Amount
	per, total dimension
	low, high  string // limits, in both cases as numbers in the first unit; low is excluded
}

// both is a dimension with the units of either kind, for messages.
func (v amount) both() dimension {
	return dimension{v.total.name, v.per.example, append(append([]unit(nil), v.per.units...),
		v.total.units...)}
}

func (v amount) wanted() string { return v.both().wanted() }

func (v amount) decode(d *decoder, n *yaml.Node, path string) {
	text, ok := d.scalar(v, n, path)
	if !ok {
		return
	}
	f, bad := v.both().parse(text)
	if bad != nil {
		d.fail(n, path, found(n), bad.want, bad.hint)
		return
	}
	_, rest := splitNumber(text)
	_, total := v.total.find(strings.TrimLeft(rest, gapChars))
	of := v.per
	if total {
		of = v.total
	}
	low, high := v.low+" "+of.units[0].name, v.high+" "+of.units[0].name
	q := quantity{dim: of, low: low, high: high, above: true}
	if f <= q.bound(low) || f > q.bound(high) {
		d.fail(n, path, found(n), q.limits(), "")
		return
	}
	*v.dst = Amount{f, total}
}

func (v amount) encode() *yaml.Node {
	if !v.dst.Given() {
		return nil
	}
	of := v.per
	if v.dst.Total {
		of = v.total
	}
	return scalarNode("!!str", of.format(v.dst.Value))
}

func (v amount) schema() *jsonschema.Schema {
	return quantity{dim: v.both(), low: v.low, high: v.high}.schema()
}
