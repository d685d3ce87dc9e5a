package config

import (
	"encoding/json"
	"fmt"
	"math/big"
	"strconv"
	"strings"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"
)

// number is a plain number without unit, or per cent of one.
type number struct {
	dst       *float64
	low, high float64
	// above excludes low, below excludes high.
	above, below bool
	// percent also accepts "5 %".
	percent bool
	// optional leaves the key out when the value is 0, which then means "not given".
	optional bool
}

func (v number) wanted() string {
	low, high := formatFloat(v.low), formatFloat(v.high)
	switch {
	case v.above:
		return "a number more than " + low + " and at most " + high
	case v.below:
		return "a number of at least " + low + " and less than " + high
	}
	return "a number from " + low + " to " + high
}

func (v number) decode(d *decoder, n *yaml.Node, path string) {
	if _, ok := d.scalar(v, n, path); !ok {
		return
	}
	f, bad := v.parse(n)
	if bad == nil && (f < v.low || f > v.high || (v.above && f <= v.low) ||
		(v.below && f >= v.high)) {
		bad = &fault{want: v.wanted()}
	}
	if bad != nil {
		d.fail(n, path, found(n), bad.want, bad.hint)
		return
	}
	*v.dst = f
}

func (v number) parse(n *yaml.Node) (float64, *fault) {
	if v.percent && (strings.HasSuffix(n.Value, "%") || strings.HasSuffix(n.Value, "ppm")) {
		f, bad := ratio().parse(n.Value)
		if bad == nil && strings.HasPrefix(n.Value, "-") {
			bad = &fault{want: v.wanted()}
		}
		return f, bad
	}
	r, bad := plain(n)
	if bad != nil {
		if bad.want == "" {
			bad.want = v.wanted()
		}
		return 0, bad
	}
	f, want := toFloat(r)
	if want != "" {
		return 0, &fault{want: want}
	}
	return f, nil
}

// plain is the value of a number without unit; a fault without want leaves that to the caller.
func plain(n *yaml.Node) (*big.Rat, *fault) {
	num, rest := splitNumber(n.Value)
	if num == "" || rest != "" {
		return nil, &fault{hint: plainHint(num, rest)}
	}
	if n.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle) != 0 {
		return nil, &fault{hint: "without quotes"}
	}
	if n.Tag != "!!int" && n.Tag != "!!float" {
		return nil, &fault{} // some reader of YAML takes it for something else
	}
	// 010 is eight to some readers of YAML and ten to others.
	if digits := strings.TrimLeft(num, "+-"); len(digits) > 1 && digits[0] == '0' &&
		countDigits(digits[1:2]) == 1 {
		return nil, &fault{hint: "without leading zeros"}
	}
	r, want := exact(num)
	if r == nil {
		return nil, &fault{want: want}
	}
	return r, nil
}

func plainHint(num, rest string) string {
	switch {
	case num == "":
		return ""
	case rest[0] == 'x' || rest[0] == 'o' || rest[0] == 'b' || rest[0] == '_':
		return "numbers are decimal digits, such as 1500 or 1.5e3"
	case rest[0] == ',':
		return "the decimal mark is a point"
	}
	return "without a unit"
}

func (v number) encode() *yaml.Node {
	if v.optional && *v.dst == 0 {
		return nil
	}
	return scalarNode("!!float", formatFloat(*v.dst))
}

func (v number) schema() *jsonschema.Schema {
	s := &jsonschema.Schema{Type: "number"}
	low, high := json.Number(formatFloat(v.low)), json.Number(formatFloat(v.high))
	if v.above {
		s.ExclusiveMinimum = low
	} else {
		s.Minimum = low
	}
	if v.below {
		s.ExclusiveMaximum = high
	} else {
		s.Maximum = high
	}
	if !v.percent {
		return s
	}
	text := quantity{dim: ratio()}.schema()
	text.Examples = []any{"5 %"}
	return &jsonschema.Schema{AnyOf: []*jsonschema.Schema{s, text}}
}

// integer is a whole number.
type integer struct {
	dst       *int
	low, high int
	// auto accepts the word auto for 0, optional leaves the key out when it is 0.
	auto, optional bool
	// why explains the lower limit, or is "".
	why string
}

func (v integer) wanted() string {
	want := fmt.Sprintf("a whole number from %d to %d", v.low, v.high)
	if v.auto {
		want += ", or auto"
	}
	return want
}

func (v integer) decode(d *decoder, n *yaml.Node, path string) {
	text, ok := d.scalar(v, n, path)
	if !ok {
		return
	}
	if v.auto && text == "auto" {
		*v.dst = 0
		return
	}
	i, bad := whole(n)
	low := big.NewInt(int64(v.low))
	if bad == nil && (i.Cmp(low) < 0 || i.Cmp(big.NewInt(int64(v.high))) > 0) {
		bad = &fault{want: v.wanted()}
		if i.Cmp(low) < 0 {
			bad.hint = v.why
		}
	}
	if bad != nil {
		d.fail(n, path, found(n), v.wanted(), bad.hint)
		return
	}
	*v.dst = int(i.Int64())
}

// whole is the value of a node that holds a whole number.
func whole(n *yaml.Node) (*big.Int, *fault) {
	r, bad := plain(n)
	if bad != nil {
		return nil, bad
	}
	if !r.IsInt() {
		return nil, &fault{}
	}
	return r.Num(), nil
}

func (v integer) encode() *yaml.Node {
	switch {
	case *v.dst == 0 && v.auto:
		return scalarNode("!!str", "auto")
	case *v.dst == 0 && v.optional:
		return nil
	}
	return scalarNode("!!int", strconv.Itoa(*v.dst))
}

func (v integer) schema() *jsonschema.Schema {
	s := &jsonschema.Schema{
		Type:    "integer",
		Minimum: json.Number(strconv.Itoa(v.low)), Maximum: json.Number(strconv.Itoa(v.high)),
	}
	if !v.auto {
		return s
	}
	return &jsonschema.Schema{AnyOf: []*jsonschema.Schema{{Const: "auto"}, s}}
}

// seed is a whole number of 64 bits.
type seed struct{ dst *uint64 }

func (seed) wanted() string { return "a whole number from 0 to 18446744073709551615" }

func (v seed) decode(d *decoder, n *yaml.Node, path string) {
	if _, ok := d.scalar(v, n, path); !ok {
		return
	}
	i, bad := whole(n)
	if bad != nil {
		d.fail(n, path, found(n), v.wanted(), bad.hint)
		return
	}
	if !i.IsUint64() {
		d.fail(n, path, found(n), v.wanted(), "")
		return
	}
	*v.dst = i.Uint64()
}

func (v seed) encode() *yaml.Node {
	return scalarNode("!!int", strconv.FormatUint(*v.dst, 10))
}

func (seed) schema() *jsonschema.Schema {
	return &jsonschema.Schema{Type: "integer", Minimum: "0", Maximum: "18446744073709551615"}
}
