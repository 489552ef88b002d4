package sweep

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v3"
)

// key is one key of a mapping: its name, what it means, and how it is read
// into the mapping's value.
type key[T any] struct {
	name, doc string
	due       bool // an error where it is missing
	read      func(r *reader, at place, dst *T) bool
	describe  func() fragment
}

// keyOf makes a key from a form and the way to set its value. It is set even
// where some of it could not be read, so that the rest is checked in the
// same go.
func keyOf[T, V any](name, doc string, f form[V], set func(*T, V)) key[T] {
	return key[T]{
		name: name, doc: doc, describe: f.describe,
		read: func(r *reader, at place, dst *T) bool {
			v, ok := f.read(r, at)
			set(dst, v)
			return ok
		},
	}
}

// must marks a key as due.
func must[T any](k key[T]) key[T] {
	k.due = true
	return k
}

// object is a form for a mapping with known keys.
type object[T any] struct {
	what  string // "a material"
	doc   string
	keys  []key[T]
	one   []string            // exactly one of these keys is due
	needs map[string][]string // a key, and the keys one of which it needs beside it
}

func (o object[T]) read(r *reader, at place) (T, bool) {
	var dst T
	if at.node.Kind != yaml.MappingNode {
		r.wrong(at, o.expects())
		return dst, false
	}
	before, good := len(r.problems)+r.dropped, true
	for _, e := range r.entries(at) {
		if i := slices.IndexFunc(o.keys, func(k key[T]) bool { return k.name == e.name }); i >= 0 {
			good = o.keys[i].read(r, e.at, &dst) && good
			continue
		}
		good = false
		o.unknown(r, at, e)
	}
	return dst, o.complete(r, at) && good && before == len(r.problems)+r.dropped
}

// unknown reports a key that is not known.
func (o object[T]) unknown(r *reader, at place, e entry) {
	if c := e.name[0]; c >= '0' && c <= '9' && e.at.node.ShortTag() == "!!null" {
		r.faultAt(e.key, e.at.path, quote(e.name)+" behind a comma", "a point in a decimal number, or a key")
		return
	}
	meant, ok := r.similar(e.name, o.names())
	if ok { // what is missing is not missed again under its right name
		r.places[join(at.path, meant)] = r.places[e.at.path]
		meant = "; did you mean " + meant + "?"
	}
	r.faultAt(e.key, e.at.path, "the unknown key "+quote(e.name), "in "+o.what+" one of "+strings.Join(o.names(), ", ")+meant)
}

// complete checks which keys stand together.
func (o object[T]) complete(r *reader, at place) bool {
	for i := 0; i < len(at.node.Content); i += 2 {
		if at.node.Content[i].ShortTag() == "!!merge" { // what it was to bring is not missed
			return false
		}
	}
	has := func(name string) bool { return r.has(join(at.path, name)) }
	before := len(r.problems) + r.dropped
	for _, k := range o.keys {
		if k.due && !has(k.name) {
			r.fault(at.path, "no "+k.name, "the key "+k.name+": "+k.doc)
		}
	}
	for _, k := range o.keys {
		if others := o.needs[k.name]; others != nil && has(k.name) && !slices.ContainsFunc(others, has) {
			r.fault(join(at.path, k.name), k.name+" without "+orList(others), k.name+" only beside "+orList(others))
		}
	}
	var chosen []string
	for _, name := range o.one {
		if has(name) {
			chosen = append(chosen, name)
		}
	}
	switch {
	case len(o.one) == 0 || len(chosen) == 1:
	case len(chosen) == 0:
		r.fault(at.path, "none of "+strings.Join(o.one, ", "), "in "+o.what+" exactly one of them")
	default:
		r.fault(at.path, strings.Join(chosen, " and ")+" together", "in "+o.what+" exactly one of "+strings.Join(o.one, ", "))
	}
	return before == len(r.problems)+r.dropped
}

func (o object[T]) names() []string {
	all := make([]string, len(o.keys))
	for i, k := range o.keys {
		all[i] = k.name
	}
	return all
}

func (o object[T]) expects() string {
	return o.what + ", a mapping with the keys " + strings.Join(o.names(), ", ")
}

func (o object[T]) describe() fragment {
	properties, due := fragment{}, []string{}
	for _, k := range o.keys {
		properties[k.name] = k.describe().with("description", k.doc)
		if k.due {
			due = append(due, k.name)
		}
	}
	f := fragment{"type": "object", "description": o.doc, "properties": properties, "additionalProperties": false}
	if len(due) > 0 {
		f["required"] = due
	}
	if len(o.one) > 0 {
		f["oneOf"] = require(o.one)
	}
	if len(o.needs) > 0 {
		beside := fragment{}
		for name, others := range o.needs {
			beside[name] = fragment{"anyOf": require(others)}
		}
		f["dependentSchemas"] = beside
	}
	return f
}

func require(names []string) []fragment {
	all := make([]fragment, len(names))
	for i, n := range names {
		all[i] = fragment{"required": []string{n}}
	}
	return all
}

// entry is one key of a mapping and what stands under it.
type entry struct {
	name string
	key  *yaml.Node
	at   place
}

// entries lists the keys of a mapping and records where they stand. A key that is
// no text, or stands there twice, is reported and left out.
func (r *reader) entries(at place) []entry {
	var all []entry
	first := map[string]*yaml.Node{}
	for i := 0; i+1 < len(at.node.Content); i += 2 {
		k, v := at.node.Content[i], at.node.Content[i+1]
		switch {
		case k.Kind == yaml.AliasNode || k.ShortTag() == "!!merge":
			continue // plain has reported it
		case k.Kind != yaml.ScalarNode || k.ShortTag() == "!!null" || k.Value == "" || len(k.Value) > maxName:
			r.faultAt(k, at.path, describe(k)+" as a key", fmt.Sprintf("a text of at most %d bytes as a key", maxName))
			continue
		}
		e := entry{k.Value, k, place{v, join(at.path, segment(k.Value))}}
		if f := first[e.name]; f != nil {
			r.faultAt(k, e.at.path, "the key "+quote(e.name)+" again", "it once; it stands in line "+strconv.Itoa(f.Line)+" already")
			continue
		}
		first[e.name] = k
		r.enter(e.at, k)
		all = append(all, e)
	}
	return all
}

// segment is a key as a piece of a path: one that is no name stands in
// quotes.
func segment(name string) string {
	if materialPattern.MatchString(name) {
		return name
	}
	return strconv.Quote(name)
}

func join(path, name string) string {
	if path == "" {
		return name
	}
	return path + "." + name
}
