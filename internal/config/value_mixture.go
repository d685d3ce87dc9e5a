package config

import (
	"fmt"
	"math/big"
	"regexp"
	"strconv"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"
)

// gasName is what a name of a gas may look like: it becomes a part of column names.
const gasName = `^[A-Za-z][A-Za-z0-9()+_-]*$`

// GasName tells whether a gas may have the name.
func GasName(name string) bool {
	return len(name) <= maxGasName && regexp.MustCompile(gasName).MatchString(name)
}

// mixture maps names of gases to fractions, in the order of the file.
type mixture struct{ dst *[]Component }

func (mixture) wanted() string {
	return fmt.Sprintf("a mapping of 1 to %d gases to their fractions, such as {Ar: 1}",
		maxComponents)
}

func (mixture) fraction(c *Component) number {
	return number{dst: &c.Fraction, low: 0, high: 1, above: true, percent: true}
}

func (v mixture) decode(d *decoder, n *yaml.Node, path string) {
	if n.Kind != yaml.MappingNode {
		d.fail(n, path, found(n), v.wanted(), "")
		return
	}
	if count := len(n.Content) / 2; count < 1 || count > maxComponents {
		d.fail(n, path, fmt.Sprintf("%d gases", count), v.wanted(), "")
		return
	}
	before := len(d.errs)
	first := map[string]*yaml.Node{}
	*v.dst = make([]Component, len(n.Content)/2)
	for i := range *v.dst {
		k, c := n.Content[2*i], &(*v.dst)[i]
		if !d.unique(k, path, first) || !v.named(d, k, path) {
			continue
		}
		c.Gas = k.Value
		d.value(v.fraction(c), n.Content[2*i+1], under(path, k.Value))
		d.place(k, under(path, k.Value)) // errors of the caller are about the name
	}
	if len(d.errs) == before {
		v.checkSum(d, n, path)
	}
}

func (v mixture) named(d *decoder, k *yaml.Node, path string) bool {
	if k.Tag == "!!str" && GasName(k.Value) {
		return true
	}
	d.fail(k, path, found(k)+" as the name of a gas",
		fmt.Sprintf("at most %d letters, digits and ()+_-, with a letter first", maxGasName), "")
	return false
}

// checkSum adds the fractions as they are written, so that three times 0.333333 is at the
// tolerance and not beyond it by rounding.
func (v mixture) checkSum(d *decoder, n *yaml.Node, path string) {
	sum := new(big.Rat)
	for _, c := range *v.dst {
		sum.Add(sum, asWritten(c.Fraction))
	}
	off := new(big.Rat).Sub(sum, big.NewRat(1, 1))
	if off.Abs(off).Cmp(constant(fractionTolerance, 0)) > 0 {
		f, _ := sum.Float64()
		d.fail(n, path, "fractions with the sum "+strconv.FormatFloat(f, 'g', 9, 64),
			"the sum 1 (to "+fractionTolerance+")", "")
	}
}

func (v mixture) encode() *yaml.Node {
	n := &yaml.Node{Kind: yaml.MappingNode, Tag: "!!map"}
	for i := range *v.dst {
		c := &(*v.dst)[i]
		n.Content = append(n.Content, scalarNode("!!str", c.Gas), v.fraction(c).encode())
	}
	return n
}

func (v mixture) schema() *jsonschema.Schema {
	least, most, longest := uint64(1), uint64(maxComponents), uint64(maxGasName)
	return &jsonschema.Schema{
		Type: "object", MinProperties: &least, MaxProperties: &most,
		PropertyNames:        &jsonschema.Schema{Pattern: gasName, MaxLength: &longest},
		AdditionalProperties: v.fraction(&Component{}).schema(),
		Examples:             []any{map[string]any{"Ar": 1}},
	}
}
