package sweep

import (
	"fmt"
	"regexp"
	"strconv"

	"go.yaml.in/yaml/v3"
)

// list is a form for a sequence of items.
type list[V any] struct {
	item  form[V]
	least int
	most  int    // 0: no limit
	what  string // "layers, bottom to top"
}

// read keeps an item that cannot be read as a zero value, so that the
// others keep their indices.
func (l list[V]) read(r *reader, at place) ([]V, bool) {
	if at.node.Kind != yaml.SequenceNode {
		r.wrong(at, l.expects())
		return nil, false
	}
	n := len(at.node.Content)
	if n < l.least || l.most > 0 && n > l.most {
		r.fault(at.path, count(n, "item"), l.expects())
		return nil, false
	}
	all, good := make([]V, n), true
	for i, node := range at.node.Content {
		item := place{node, index(at.path, i)}
		r.enter(item, nil)
		v, ok := l.item.read(r, item)
		all[i], good = v, good && ok
	}
	return all, good
}

func (l list[V]) expects() string {
	switch {
	case l.least == l.most && l.most > 0:
		return fmt.Sprintf("a list of %d: %s", l.most, l.what)
	case l.most > 0:
		return fmt.Sprintf("a list of %d to %d: %s", l.least, l.most, l.what)
	case l.least > 1:
		return fmt.Sprintf("a list of at least %d: %s", l.least, l.what)
	}
	return "a list of " + l.what
}

func (l list[V]) describe() fragment {
	f := fragment{"type": "array", "items": l.item.describe(), "minItems": l.least}
	if l.most > 0 {
		f["maxItems"] = l.most
	}
	return f
}

// pair is a form for a list of exactly two items of one form.
func pair[V any](item form[V], what string) form[[2]V] {
	return mapped[[]V, [2]V]{list[V]{item, 2, 2, what}, func(v []V) (p [2]V) {
		copy(p[:], v)
		return p
	}}
}

// named is an entry of a mapping whose keys are the user's own names.
type named[V any] struct {
	name string
	path string
	v    V
	ok   bool // v could be read
}

// names is a form for a mapping from the user's own names.
type names[V any] struct {
	of      form[V]
	what    string // "materials"
	pattern *regexp.Regexp
	rule    string // what the pattern asks for
}

func (m names[V]) read(r *reader, at place) ([]named[V], bool) {
	if at.node.Kind != yaml.MappingNode {
		r.wrong(at, m.expects())
		return nil, false
	}
	if n := len(at.node.Content) / 2; n > maxNames {
		r.fault(at.path, count(n, "name"), fmt.Sprintf("at most %d", maxNames))
		return nil, false
	}
	var all []named[V]
	good := true
	for _, e := range r.entries(at) {
		if !m.pattern.MatchString(e.name) {
			r.faultAt(e.key, e.at.path, "the name "+quote(e.name), m.rule)
			good = false
			continue
		}
		v, ok := m.of.read(r, e.at)
		all, good = append(all, named[V]{e.name, e.at.path, v, ok}), good && ok
	}
	return all, good
}

func (m names[V]) expects() string { return "a mapping from the names of " + m.what }

func (m names[V]) describe() fragment {
	return fragment{
		"type": "object", "additionalProperties": m.of.describe(), "maxProperties": maxNames,
		"propertyNames": fragment{"pattern": m.pattern.String()},
	}
}

// index is the path of an item of a list.
func index(path string, i int) string { return path + "[" + strconv.Itoa(i) + "]" }
