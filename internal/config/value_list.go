package config

import (
	"fmt"
	"strconv"

	"github.com/invopop/jsonschema"
	"go.yaml.in/yaml/v4"
)

// list is a sequence of 1 to max equal items; the key is left out when there are none.
type list[T any] struct {
	dst *[]T
	max int
	// what names the items, in the plural.
	what string
	// item binds the layout of one item to its place.
	item  func(*T) value
	check check
}

func (l list[T]) wanted() string {
	return fmt.Sprintf("a list of 1 to %d %s", l.max, l.what)
}

func (l list[T]) decode(d *decoder, n *yaml.Node, path string) {
	if n.Kind != yaml.SequenceNode {
		d.fail(n, path, found(n), l.wanted(), "")
		return
	}
	if count := len(n.Content); count < 1 || count > l.max {
		d.fail(n, path, fmt.Sprintf("%d %s", count, l.what), l.wanted(), "")
		return
	}
	before := len(d.errs)
	*l.dst = make([]T, len(n.Content))
	for i, c := range n.Content {
		d.value(l.item(&(*l.dst)[i]), c, under(path, strconv.Itoa(i)))
	}
	if l.check != nil && len(d.errs) == before {
		l.check(d, n, path)
	}
}

func (l list[T]) encode() *yaml.Node {
	if len(*l.dst) == 0 {
		return nil
	}
	n := &yaml.Node{Kind: yaml.SequenceNode, Tag: "!!seq"}
	for i := range *l.dst {
		n.Content = append(n.Content, l.item(&(*l.dst)[i]).encode())
	}
	return n
}

func (l list[T]) schema() *jsonschema.Schema {
	least, most := uint64(1), uint64(l.max)
	return &jsonschema.Schema{
		Type: "array", MinItems: &least, MaxItems: &most, Items: l.item(new(T)).schema(),
	}
}

func (l list[T]) visit(path string, see func(parent, key string)) {
	if c, ok := l.item(new(T)).(container); ok {
		c.visit(path, see)
	}
}

// pointer is a value that may be absent as a whole.
type pointer[T any] struct {
	dst  **T
	item func(*T) value
}

func (p pointer[T]) wanted() string {
	return p.item(new(T)).wanted()
}

func (p pointer[T]) decode(d *decoder, n *yaml.Node, path string) {
	*p.dst = new(T)
	p.item(*p.dst).decode(d, n, path)
}

func (p pointer[T]) encode() *yaml.Node {
	if *p.dst == nil {
		return nil
	}
	return p.item(*p.dst).encode()
}

func (p pointer[T]) schema() *jsonschema.Schema {
	return p.item(new(T)).schema()
}

func (p pointer[T]) visit(path string, see func(parent, key string)) {
	if c, ok := p.item(new(T)).(container); ok {
		c.visit(path, see)
	}
}
