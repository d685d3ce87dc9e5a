package scan

import (
	"slices"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v4"
)

// lookup returns the node of a dotted path, nil if there is none.
func lookup(n *yaml.Node, path string) *yaml.Node {
	for key := range strings.SplitSeq(path, ".") {
		if n = child(n, key); n == nil {
			return nil
		}
	}
	return n
}

func child(n *yaml.Node, key string) *yaml.Node {
	switch n.Kind {
	case yaml.MappingNode:
		for i := 0; i+1 < len(n.Content); i += 2 {
			if n.Content[i].Value == key {
				return n.Content[i+1]
			}
		}
	case yaml.SequenceNode:
		if i, err := strconv.Atoi(key); err == nil && i >= 0 && i < len(n.Content) {
			return n.Content[i]
		}
	}
	return nil
}

// set puts a value at a dotted path, making the mappings on the way: a word in the place of a
// mapping ("numerics: auto") gives way. It returns false where a list has no such element.
func set(n *yaml.Node, path string, value *yaml.Node) bool {
	key, rest, deeper := strings.Cut(path, ".")
	if n.Kind == yaml.SequenceNode {
		i, err := strconv.Atoi(key)
		if err != nil || i < 0 || i >= len(n.Content) {
			return false
		}
		if !deeper {
			n.Content[i] = value
			return true
		}
		return set(n.Content[i], rest, value)
	}
	if n.Kind != yaml.MappingNode {
		*n = yaml.Node{Kind: yaml.MappingNode, Tag: "!!map"}
	}
	for i := 0; i+1 < len(n.Content); i += 2 {
		if n.Content[i].Value != key {
			continue
		}
		if !deeper {
			n.Content[i+1] = value
			return true
		}
		return set(n.Content[i+1], rest, value)
	}
	inner := value
	if deeper {
		inner = &yaml.Node{Kind: yaml.MappingNode, Tag: "!!map"}
		if !set(inner, rest, value) {
			return false
		}
	}
	n.Content = append(n.Content, &yaml.Node{Kind: yaml.ScalarNode, Tag: "!!str", Value: key}, inner)
	return true
}

func clone(n *yaml.Node) *yaml.Node {
	c := *n
	c.Content = make([]*yaml.Node, len(n.Content))
	for i, inner := range n.Content {
		c.Content[i] = clone(inner)
	}
	return &c
}

// found describes a node for a message.
func found(n *yaml.Node) string {
	switch n.Kind {
	case yaml.MappingNode:
		return "a mapping"
	case yaml.SequenceNode:
		return "a list"
	}
	if n.Value == "" {
		return "nothing"
	}
	return strconv.Quote(n.Value)
}

func under(path, key string) string {
	if path == "" {
		return key
	}
	return path + "." + key
}

func contains(list []string, s string) bool { return slices.Contains(list, s) }

func scalar(text string) *yaml.Node { return &yaml.Node{Kind: yaml.ScalarNode, Value: text} }
