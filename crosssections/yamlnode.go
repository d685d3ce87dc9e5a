package crosssections

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v4"
)

// at notes an error at the place of a node.
func (r *gasReader) at(n *yaml.Node, key, got, want string) {
	r.add(n.Line, n.Column, key, got, want)
}

// atUnknown notes a word that is none of the known ones, with the nearest of them.
func (r *gasReader) atUnknown(n *yaml.Node, key, what, word, want string, known []string) {
	r.addHint(n.Line, n.Column, key, what+quoted(word), want, didYouMean(word, known))
}

// mapping is the values of a mapping by key. Unknown and repeated keys and missing required ones
// are noted.
func (r *gasReader) mapping(n *yaml.Node, path string, known []string, required ...string,
) map[string]*yaml.Node {
	m := map[string]*yaml.Node{}
	if n.Kind != yaml.MappingNode {
		r.at(n, path, "no mapping", "the keys "+strings.Join(known, ", "))
		return m
	}
	for i := 0; i+1 < len(n.Content); i += 2 {
		key := n.Content[i]
		switch {
		case !slices.Contains(known, key.Value):
			r.atUnknown(key, path, "unknown key ", key.Value,
				"one of "+strings.Join(known, ", "), known)
		case m[key.Value] != nil:
			r.at(key, path, "a second "+quoted(key.Value), "each key once")
		default:
			m[key.Value] = n.Content[i+1]
		}
	}
	for _, key := range required {
		if m[key] == nil {
			r.at(n, path, "no "+quoted(key), "the keys "+strings.Join(required, ", "))
		}
	}
	return m
}

// text is a scalar that is not empty; a node that is nil was noted before, or is optional.
func (r *gasReader) text(n *yaml.Node, key string) string {
	if n == nil {
		return ""
	}
	if n.Kind != yaml.ScalarNode || strings.TrimSpace(n.Value) == "" || n.Tag == "!!null" {
		r.at(n, key, "no text", "text")
		return ""
	}
	return n.Value
}

// number is a positive number.
func (r *gasReader) number(n *yaml.Node, key string) float64 {
	if n == nil {
		return 0
	}
	v, err := strconv.ParseFloat(n.Value, 64)
	if n.Kind != yaml.ScalarNode || err != nil || !(v > 0) || v > math.MaxFloat32 {
		r.at(n, key, quoted(n.Value), "a number above 0")
		return 0
	}
	return v
}

// items are the items of a sequence.
func (r *gasReader) items(n *yaml.Node, key string) []*yaml.Node {
	if n == nil {
		return nil
	}
	if n.Kind != yaml.SequenceNode {
		r.at(n, key, "no list", "a list")
		return nil
	}
	if len(n.Content) > maxGasProcesses {
		r.at(n, key, fmt.Sprintf("%d items", len(n.Content)), fmt.Sprintf("at most %d",
			maxGasProcesses))
		return nil
	}
	return n.Content
}
