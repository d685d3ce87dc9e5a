package config

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"

	"ionfall/internal/inputerr"
)

// line is one line of text.
type line struct {
	dst *string
	max int
}

func (v line) wanted() string {
	return fmt.Sprintf("one line of text of at most %d characters", v.max)
}

func (v line) decode(d *decoder, n *yaml.Node, path string) {
	text, ok := d.scalar(v, n, path)
	if !ok {
		return
	}
	if n.Tag != "!!str" {
		d.fail(n, path, found(n), "text", "put it in quotes")
		return
	}
	odd := func(r rune) bool { return !unicode.IsPrint(r) && !unicode.Is(unicode.Zs, r) }
	if utf8.RuneCountInString(text) > v.max || strings.ContainsFunc(text, odd) {
		d.fail(n, path, found(n), v.wanted(), "")
		return
	}
	*v.dst = text
}

func (v line) encode() *yaml.Node {
	if *v.dst == "" {
		return nil
	}
	n := scalarNode("!!str", *v.dst)
	if !regexp.MustCompile(`^[A-Za-z][A-Za-z0-9 ,./()+-]*$`).MatchString(*v.dst) {
		n.Style = yaml.DoubleQuotedStyle
	}
	return n
}

func (v line) schema() *jsonschema.Schema {
	most := uint64(v.max)
	return &jsonschema.Schema{Type: "string", MaxLength: &most}
}

// choice is one of some words.
type choice struct {
	dst     *string
	options []string
	// auto accepts the word auto for "".
	auto bool
}

// words are the options, with auto first if it is one.
func (v choice) words() []string {
	if v.auto {
		return append([]string{"auto"}, v.options...)
	}
	return v.options
}

func (v choice) wanted() string {
	words := v.words()
	last := len(words) - 1
	return strings.Join(words[:last], ", ") + " or " + words[last]
}

func (v choice) decode(d *decoder, n *yaml.Node, path string) {
	text, ok := d.scalar(v, n, path)
	if !ok {
		return
	}
	if !slices.Contains(v.words(), text) {
		hint := ""
		if near := inputerr.Nearest(text, v.words()); near != "" {
			hint = fmt.Sprintf("did you mean %q?", near)
		}
		d.fail(n, path, found(n), v.wanted(), hint)
		return
	}
	if v.auto && text == "auto" {
		text = ""
	}
	*v.dst = text
}

func (v choice) encode() *yaml.Node {
	if v.auto && *v.dst == "" {
		return scalarNode("!!str", "auto")
	}
	return scalarNode("!!str", *v.dst)
}

func (v choice) schema() *jsonschema.Schema {
	s := &jsonschema.Schema{Type: "string"}
	for _, w := range v.words() {
		s.Enum = append(s.Enum, w)
	}
	return s
}

// boolean is true or false.
type boolean struct{ dst *bool }

func (boolean) wanted() string { return "true or false" }

func (v boolean) decode(d *decoder, n *yaml.Node, path string) {
	text, ok := d.scalar(v, n, path)
	if !ok {
		return
	}
	if n.Tag != "!!bool" {
		d.fail(n, path, found(n), v.wanted(), "")
		return
	}
	*v.dst = strings.EqualFold(text, "true")
}

func (v boolean) encode() *yaml.Node {
	return scalarNode("!!bool", fmt.Sprint(*v.dst))
}

func (boolean) schema() *jsonschema.Schema {
	return &jsonschema.Schema{Type: "boolean"}
}
