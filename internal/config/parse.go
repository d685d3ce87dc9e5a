package config

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/inputerr"
)

// Parse reads a Case from the text of an input file. The name stands in messages. The error, if
// any, is an inputerr.List of everything that is wrong.
func Parse(name string, src []byte) (*Case, error) {
	if bad := checkText(src); bad != nil {
		bad.File = name
		return nil, inputerr.List{bad}
	}
	root, bad := parseYAML(src)
	if bad != nil {
		bad.File = name
		return nil, inputerr.List{bad}
	}
	c := newCase()
	d := newDecoder(name)
	tree := layout(c)
	tree.visit("", func(parent, key string) {
		d.parents[key] = append(d.parents[key], parent)
	})
	d.value(tree, root, "")
	if err := d.errs.Err(); err != nil {
		return nil, err
	}
	c.origin = &origin{file: name, pos: d.pos}
	return c, nil
}

// checkText wants UTF-8 text of a reasonable size.
func checkText(src []byte) *inputerr.Error {
	if len(src) > MaxFileBytes {
		return tooLarge(int64(len(src)), MaxFileBytes)
	}
	if bytes.HasPrefix(src, []byte{0xff, 0xfe}) || bytes.HasPrefix(src, []byte{0xfe, 0xff}) {
		return &inputerr.Error{Line: 1, Col: 1, Got: "text in UTF-16", Want: "text in UTF-8"}
	}
	line, col := 1, 1
	for rest := src; len(rest) > 0; col++ {
		r, size := utf8.DecodeRune(rest)
		if r == utf8.RuneError && size == 1 {
			return &inputerr.Error{
				Line: line, Col: col,
				Got: fmt.Sprintf("the byte 0x%02x", rest[0]), Want: "text in UTF-8",
			}
		}
		if r < ' ' && !strings.ContainsRune("\t\n\r", r) {
			return &inputerr.Error{
				Line: line, Col: col,
				Got: fmt.Sprintf("the control character U+%04X", r), Want: "text",
			}
		}
		if r == '\n' {
			line, col = line+1, 0
		}
		rest = rest[size:]
	}
	return nil
}

func tooLarge(size, most int64) *inputerr.Error {
	return &inputerr.Error{
		Got:  fmt.Sprintf("%d bytes", size),
		Want: fmt.Sprintf("an input file of at most %d bytes", most),
	}
}

// parseYAML gives the content of the only document.
func parseYAML(src []byte) (*yaml.Node, *inputerr.Error) {
	loader, err := yaml.NewLoader(bytes.NewReader(src))
	if err != nil {
		return nil, syntaxError(err)
	}
	var doc, second yaml.Node
	switch err := loader.Load(&doc); {
	case errors.Is(err, io.EOF) || (err == nil && len(doc.Content) == 0):
		return nil, &inputerr.Error{Got: "an empty file", Want: layout(newCase()).wanted()}
	case err != nil:
		return nil, syntaxError(err)
	}
	switch err := loader.Load(&second); {
	case err == nil:
		return nil, &inputerr.Error{
			Line: second.Line, Col: second.Column,
			Got: "a second document", Want: "one document a file",
		}
	case !errors.Is(err, io.EOF):
		return nil, syntaxError(err)
	}
	return doc.Content[0], nil
}

// syntaxError puts an error of the YAML reader into our form.
func syntaxError(err error) *inputerr.Error {
	var bad *yaml.LoadError
	if !errors.As(err, &bad) {
		return &inputerr.Error{Hint: "not valid YAML: " + err.Error()}
	}
	text := "not valid YAML: " + bad.Message
	if bad.ContextMsg != "" {
		text += ", " + bad.ContextMsg
		if bad.ContextMark.Line > 0 && bad.ContextMark.Line != bad.Mark.Line {
			text += fmt.Sprintf(" that starts in line %d", bad.ContextMark.Line)
		}
	}
	switch {
	case strings.Contains(bad.Message, "cannot start any token"):
		text += "; indent with blanks, not tabs, and quote text that starts with @, % or `"
	case strings.Contains(bad.Message, "mapping values are not allowed"):
		text += `; check the indentation, and quote text that holds ": "`
	}
	return &inputerr.Error{Line: bad.Mark.Line, Col: bad.Mark.Column, Hint: text}
}
