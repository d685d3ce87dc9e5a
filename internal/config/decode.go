package config

import (
	"strconv"
	"strings"
	"unicode"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"

	"ionfall/internal/inputerr"
)

// value is one place of the layout, bound to a field of a Case.
type value interface {
	// wanted completes "want ...".
	wanted() string
	// decode reads a node into the Case, and reports what is wrong with it.
	decode(d *decoder, n *yaml.Node, path string)
	// encode is the node that decode would read, or nil if the key is to be left out.
	encode() *yaml.Node
	// schema describes what decode accepts.
	schema() *jsonschema.Schema
}

// check looks at values together, once each of them has been read without an error.
type check func(d *decoder, n *yaml.Node, path string)

// maxHints bounds the search for misspelt keys in a file that is something else altogether.
const maxHints = 100

// maxGot is how many characters of the input a message repeats.
const maxGot = 60

// decoder collects the positions and the errors of a file.
type decoder struct {
	file string
	errs inputerr.List
	pos  map[string]position
	// parents are the places where a key is known, by key.
	parents map[string][]string
}

func newDecoder(file string) *decoder {
	return &decoder{file: file, pos: map[string]position{}, parents: map[string][]string{}}
}

// value reads one node, whatever it is.
func (d *decoder) value(v value, n *yaml.Node, path string) {
	d.place(n, path)
	switch {
	case n.Kind == yaml.AliasNode:
		d.fail(n, path, "*"+n.Value, v.wanted(), "aliases are not supported: repeat the value")
	case n.Style&yaml.TaggedStyle != 0:
		d.fail(n, path, "the tag "+quote(n.Tag), v.wanted(), "tags are not supported: leave it out")
	default:
		v.decode(d, n, path)
	}
}

// place notes where a key path is.
func (d *decoder) place(n *yaml.Node, path string) {
	d.pos[path] = position{n.Line, n.Column}
}

func (d *decoder) fail(n *yaml.Node, path, got, want, hint string) {
	d.errs = append(d.errs, &inputerr.Error{
		File: d.file, Line: n.Line, Col: n.Column, Key: path, Got: got, Want: want, Hint: hint,
	})
}

// scalar is the text of a node; if it is no scalar, or nothing, that is reported.
func (d *decoder) scalar(v value, n *yaml.Node, path string) (string, bool) {
	if n.Kind != yaml.ScalarNode || n.Tag == "!!null" {
		d.fail(n, path, found(n), v.wanted(), "")
		return "", false
	}
	return n.Value, true
}

// found describes a node for a message.
func found(n *yaml.Node) string {
	switch {
	case n.Kind == yaml.MappingNode:
		return "a mapping"
	case n.Kind == yaml.SequenceNode:
		return "a list"
	case n.Tag == "!!null":
		return "nothing"
	}
	if n.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle) != 0 {
		return strconv.Quote(shorten(n.Value))
	}
	return quote(n.Value)
}

// quote repeats a text of the input: as it is where that is unambiguous, in quotes where it has
// blanks at an end or characters that do not print, and cut where it is long.
func quote(text string) string {
	cut := shorten(text)
	odd := func(r rune) bool { return !unicode.IsPrint(r) && !strings.ContainsRune(gapChars, r) }
	if cut == "" || strings.TrimSpace(cut) != cut || strings.ContainsFunc(cut, odd) {
		return strconv.Quote(cut)
	}
	return cut
}

// shorten cuts a text that is too long for a message.
func shorten(text string) string {
	if runes := []rune(text); len(runes) > maxGot {
		return string(runes[:maxGot]) + "..."
	}
	return text
}

// under joins a key to the path of its mapping.
func under(path, key string) string {
	if path == "" {
		return key
	}
	return path + "." + key
}
