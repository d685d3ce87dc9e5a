package config

import (
	"fmt"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"
)

// folder is the name of a folder; whether it is there is for the caller to find out.
type folder struct{ dst *string }

func (folder) wanted() string {
	return fmt.Sprintf("a folder such as ./gases, with at most %d characters", maxPath)
}

func (v folder) decode(d *decoder, n *yaml.Node, path string) {
	text, ok := d.scalar(v, n, path)
	if !ok {
		return
	}
	if n.Tag != "!!str" {
		d.fail(n, path, found(n), v.wanted(), "put it in quotes")
		return
	}
	if utf8.RuneCountInString(text) > maxPath || strings.ContainsFunc(text, unicode.IsControl) ||
		strings.TrimSpace(text) == "" {
		d.fail(n, path, found(n), v.wanted(), "")
		return
	}
	*v.dst = text
}

func (v folder) encode() *yaml.Node {
	if *v.dst == "" {
		return nil
	}
	n := scalarNode("!!str", *v.dst)
	n.Style = yaml.DoubleQuotedStyle
	return n
}

func (folder) schema() *jsonschema.Schema {
	most := uint64(maxPath)
	return &jsonschema.Schema{
		Type: "string", MaxLength: &most, Pattern: `\S`, Examples: []any{"./gases"},
	}
}
