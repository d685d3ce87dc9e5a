package config

import (
	"fmt"
	"maps"
	"slices"
	"strings"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"

	"ionfall/internal/inputerr"
)

// field is one key of a mapping.
type field struct {
	key      string
	required bool
	value    value
	// doc describes it in the schema: meaning and default.
	doc string
}

// mapping is a set of known keys.
type mapping struct {
	fields []field
	// word is a text that stands for "everything left out", or "".
	word string
	// check looks at the whole when all of it was read.
	check check
	// optional leaves it out when all its fields are left out.
	optional bool
}

func (m mapping) keys() []string {
	var keys []string
	for _, f := range m.fields {
		keys = append(keys, f.key)
	}
	return keys
}

func (m mapping) wanted() string {
	want := "a mapping with " + strings.Join(m.keys(), ", ")
	if m.word != "" {
		return m.word + ", or " + want
	}
	return want
}

func (m mapping) decode(d *decoder, n *yaml.Node, path string) {
	if m.word != "" && n.Kind == yaml.ScalarNode && n.Value == m.word {
		return
	}
	if n.Kind != yaml.MappingNode {
		d.fail(n, path, found(n), m.wanted(), "")
		return
	}
	before := len(d.errs)
	first, meant := map[string]*yaml.Node{}, map[string]bool{}
	for i := 0; i+1 < len(n.Content); i += 2 {
		k := n.Content[i]
		if !d.unique(k, path, first) {
			continue
		}
		if f := m.field(k.Value); f != nil {
			d.value(f.value, n.Content[i+1], under(path, k.Value))
			continue
		}
		near, text := d.unknown(m, k.Value, path)
		meant[near] = true
		d.fail(k, under(path, quote(k.Value)), "", "", text)
	}
	for _, f := range m.fields {
		if f.required && first[f.key] == nil && !meant[f.key] {
			d.fail(n, under(path, f.key), "nothing", f.value.wanted(), "the key is required")
		}
	}
	if m.check != nil && len(d.errs) == before {
		m.check(d, n, path)
	}
}

// field is the field of a key, or nil.
func (m mapping) field(key string) *field {
	i := slices.IndexFunc(m.fields, func(f field) bool { return f.key == key })
	if i < 0 {
		return nil
	}
	return &m.fields[i]
}

// unique reports a key that is no plain text, or was there before.
func (d *decoder) unique(k *yaml.Node, path string, first map[string]*yaml.Node) bool {
	if k.Kind != yaml.ScalarNode || k.Style&yaml.TaggedStyle != 0 {
		got := found(k)
		if k.Kind == yaml.AliasNode {
			got = "*" + k.Value
		}
		d.fail(k, path, got+" as a key", "a plain word as a key", "")
		return false
	}
	if old := first[k.Value]; old != nil {
		d.fail(k, under(path, quote(k.Value)), "", "",
			fmt.Sprintf("duplicate key; it is already in line %d", old.Line))
		return false
	}
	first[k.Value] = k
	return true
}

// unknown is the message for an unknown key: where it belongs, or what was probably meant. If
// that is a key of this mapping, near is that key.
func (d *decoder) unknown(m mapping, key, path string) (near, text string) {
	if len(d.errs) >= maxHints {
		return "", "unknown key"
	}
	if parents := d.parents[key]; len(parents) > 0 {
		return "", "unknown key here; it belongs " + places(parents)
	}
	if near := inputerr.Nearest(key, m.keys()); near != "" {
		return near, fmt.Sprintf("unknown key; did you mean %q?", near)
	}
	others := slices.Sorted(maps.Keys(d.parents)) // a map must not decide between equals
	if other := inputerr.Nearest(key, others); other != "" {
		return "", fmt.Sprintf("unknown key; did you mean %q? it belongs %s", other,
			places(d.parents[other]))
	}
	known := "the keys here are "
	if path == "" {
		known = "the keys at the top are "
	}
	return "", "unknown key; " + known + strings.Join(m.keys(), ", ")
}

// places is "under a, or under b".
func places(parents []string) string {
	var texts []string
	for _, p := range parents {
		if p == "" {
			texts = append(texts, "at the top level")
		} else {
			texts = append(texts, "under "+p)
		}
	}
	return strings.Join(texts, ", or ")
}

func (m mapping) encode() *yaml.Node {
	n := &yaml.Node{Kind: yaml.MappingNode, Tag: "!!map"}
	for _, f := range m.fields {
		if v := f.value.encode(); v != nil {
			n.Content = append(n.Content, scalarNode("!!str", f.key), v)
		}
	}
	if m.optional && len(n.Content) == 0 {
		return nil
	}
	return n
}

func (m mapping) schema() *jsonschema.Schema {
	s := &jsonschema.Schema{
		Type: "object", AdditionalProperties: jsonschema.FalseSchema,
		Properties: jsonschema.NewProperties(),
	}
	for _, f := range m.fields {
		v := f.value.schema()
		v.Description = f.doc
		s.Properties.Set(f.key, v)
		if f.required {
			s.Required = append(s.Required, f.key)
		}
	}
	if m.word == "" {
		return s
	}
	return &jsonschema.Schema{AnyOf: []*jsonschema.Schema{{Const: m.word}, s}}
}

// container is a value with known keys below it.
type container interface {
	// visit calls see for every key below path.
	visit(path string, see func(parent, key string))
}

func (m mapping) visit(path string, see func(parent, key string)) {
	for _, f := range m.fields {
		see(path, f.key)
		if c, ok := f.value.(container); ok {
			c.visit(under(path, f.key), see)
		}
	}
}
