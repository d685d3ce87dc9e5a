package config

import (
	"regexp"
	"strings"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"
)

// quantity is a number with a unit.
type quantity struct {
	dst *float64
	dim dimension
	// low and high are the limits, as quantities.
	low, high string
	// above excludes low itself.
	above bool
	// optional leaves the key out when the value is 0, which then means "not given".
	optional bool
	// absent, if given, says when the key is left out.
	absent func() bool
}

func (q quantity) wanted() string {
	return q.dim.wanted()
}

func (q quantity) limits() string {
	if q.above {
		return "more than " + q.low + " and at most " + q.high
	}
	return q.low + " to " + q.high
}

// bound is a limit as a number.
func (q quantity) bound(text string) float64 {
	f, bad := q.dim.parse(text)
	if bad != nil {
		panic("config: bad limit: " + text)
	}
	return f
}

func (q quantity) decode(d *decoder, n *yaml.Node, path string) {
	text, ok := d.scalar(q, n, path)
	if !ok {
		return
	}
	f, bad := q.dim.parse(text)
	if bad != nil {
		d.fail(n, path, found(n), bad.want, bad.hint)
		return
	}
	low := q.bound(q.low)
	if f < low || f > q.bound(q.high) || (q.above && f <= low) || q.signed(text) {
		d.fail(n, path, found(n), q.limits(), "")
		return
	}
	*q.dst = f
}

// signed says that text has a minus sign where no negative value exists: "-0 V" included, which
// the schema cannot tell from "-1 V".
func (q quantity) signed(text string) bool {
	return !q.negative() && strings.HasPrefix(text, "-")
}

// negative says that values written with a minus sign are within the limits.
func (q quantity) negative() bool {
	return strings.HasPrefix(q.low, "-") || q.dim.units[len(q.dim.units)-1].offset != ""
}

func (q quantity) encode() *yaml.Node {
	if q.optional && *q.dst == 0 || q.absent != nil && q.absent() {
		return nil
	}
	return scalarNode("!!str", q.dim.format(*q.dst))
}

func (q quantity) schema() *jsonschema.Schema {
	sign := `\+?`
	if q.negative() {
		sign = `[+-]?`
	}
	return &jsonschema.Schema{
		Type:     "string",
		Pattern:  "^" + sign + q.dim.pattern() + "$",
		Examples: []any{q.dim.example},
	}
}

// pattern matches an unsigned quantity, in the dialect that JSON Schema and Go share.
func (d dimension) pattern() string {
	var units []string
	for _, s := range d.spellings() {
		units = append(units, regexp.QuoteMeta(s))
	}
	return `([0-9]+(\.[0-9]*)?|\.[0-9]+)([eE][+-]?[0-9]+)?[` + gapChars + `]*(` +
		strings.Join(units, "|") + `)`
}

// scalarNode is a value or key to write. Words that old readers of YAML take for a truth value
// (off, NO) are put in quotes.
func scalarNode(tag, text string) *yaml.Node {
	n := &yaml.Node{Kind: yaml.ScalarNode, Tag: tag, Value: text}
	switch strings.ToLower(text) {
	case "y", "n", "yes", "no", "on", "off":
		n.Style = yaml.DoubleQuotedStyle
	}
	return n
}
