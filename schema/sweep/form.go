package sweep

import (
	"go.yaml.in/yaml/v3"
)

// form says what may stand under a key: it reads a value of type V there,
// and describes it in the JSON Schema.
type form[V any] interface {
	// read reads the value at a place. Where problems were reported ok is false
	// and v holds what could be read.
	read(r *reader, at place) (v V, ok bool)
	// expects names what is due, for a message: "a list of layers".
	expects() string
	// describe gives the JSON Schema.
	describe() fragment
}

// fragment is a piece of JSON Schema.
type fragment map[string]any

// with adds a keyword to a fragment.
func (f fragment) with(keyword string, value any) fragment {
	f[keyword] = value
	return f
}

// wrong reports a value of the wrong kind. What plain has reported is not
// reported again.
func (r *reader) wrong(at place, expected string) {
	if at.node.Kind != yaml.AliasNode {
		r.fault(at.path, describe(at.node), expected)
	}
}

// scalar reads the text of a value that is neither a mapping nor a list,
// nor missing.
func (r *reader) scalar(at place, expected string) (string, bool) {
	n := at.node
	if n.Kind != yaml.ScalarNode || n.ShortTag() == "!!null" || n.ShortTag() == "!!bool" || n.Value == "" {
		r.wrong(at, expected)
		return "", false
	}
	return n.Value, true
}

// mapped is a form whose value is turned into another; turn takes zero values too.
type mapped[V, W any] struct {
	form[V]
	turn func(V) W
}

func (m mapped[V, W]) read(r *reader, at place) (W, bool) {
	v, ok := m.form.read(r, at)
	return m.turn(v), ok
}

// optional reads a value that may be absent as a pointer.
func optional[V any](f form[V]) form[*V] {
	return mapped[V, *V]{f, func(v V) *V { return &v }}
}

// either is one of two forms: the second where the value is of the given
// kind, else the first.
type either[V any] struct {
	plain form[V]
	kind  yaml.Kind
	other form[V]
}

func (e either[V]) read(r *reader, at place) (V, bool) {
	switch at.node.Kind {
	case e.kind:
		return e.other.read(r, at)
	case yaml.ScalarNode:
		if at.node.ShortTag() != "!!null" {
			return e.plain.read(r, at)
		}
	}
	r.wrong(at, e.expects())
	var none V
	return none, false
}

func (e either[V]) expects() string { return e.plain.expects() + ", or " + e.other.expects() }

func (e either[V]) describe() fragment {
	return fragment{"anyOf": []fragment{e.plain.describe(), e.other.describe()}}
}
