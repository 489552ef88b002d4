package sweep

import (
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v3"

	"betaloom/schema/quantity"
)

// reader is the state of reading one sweep file: where everything stands,
// which names are used where, and the problems so far.
type reader struct {
	file string
	src  []byte
	open func(string) (io.ReadCloser, error)

	builtin  []string // names of built-in materials; nil: any
	places   map[string]mark
	problems Diagnostics
	dropped  int // problems beyond maxProblems
	hints    int // searches for a similar name

	numbers    []numberUse
	materials  []materialUse
	quantities []parameterQuantity
	profiles   map[string]text // by path
	odd        map[string]bool // paths of stretches of another dimension than their axis

	tables     map[string]*table
	tableBytes int
}

// mark is where a path stands: its key, and what stands under it. For an item
// of a list the two are the same.
type mark struct {
	keyLine, keyColumn int
	line, column       int
}

// place is a node of the YAML tree with its path.
type place struct {
	node *yaml.Node
	path string
}

// enter records where a path stands. key is nil for an item of a list.
func (r *reader) enter(at place, key *yaml.Node) {
	n := at.node
	m := mark{n.Line, n.Column, n.Line, n.Column}
	if key != nil {
		m.keyLine, m.keyColumn = key.Line, key.Column
		if n.Kind != yaml.ScalarNode && n.Style&yaml.FlowStyle == 0 { // an indented block
			m.line, m.column = key.Line, key.Column
		}
	}
	r.places[at.path] = m
}

// has reports whether a path is in the file, be it right or wrong.
func (r *reader) has(path string) bool {
	_, ok := r.places[path]
	return ok
}

// fault reports a problem with what stands under a path.
func (r *reader) fault(path, found, expected string) {
	m := nearest(r.places, path)
	r.add(Diagnostic{r.file, m.line, m.column, path, found, expected})
}

// faultAt reports a problem at a node.
func (r *reader) faultAt(n *yaml.Node, path, found, expected string) {
	r.add(Diagnostic{r.file, n.Line, n.Column, path, found, expected})
}

func (r *reader) add(d Diagnostic) {
	if len(r.problems) >= maxProblems {
		r.dropped++
		return
	}
	r.problems = append(r.problems, d)
}

// result gives the problems in order, nil where there is none.
func (r *reader) result() error {
	if len(r.problems) == 0 {
		return nil
	}
	list := r.problems.order(r.file)
	if r.dropped > 0 {
		list = append(list, Diagnostic{r.file, 1, 1, "", fmt.Sprintf("%d more problems", r.dropped), "the ones above mended first"})
	}
	return list
}

// nearest finds the position of path, or of what comes nearest above it.
func nearest(places map[string]mark, path string) mark {
	for {
		if m, ok := places[path]; ok {
			return m
		}
		cut := strings.LastIndexAny(path, ".[")
		if cut < 0 {
			return mark{1, 1, 1, 1}
		}
		path = path[:cut]
	}
}

// hint ends a message with the name that was probably meant.
func (r *reader) hint(word string, among []string) string {
	if n, ok := r.similar(word, among); ok {
		return fmt.Sprintf(" (did you mean %s?)", n)
	}
	return ""
}

// similar looks for a name like word, a bounded number of times.
func (r *reader) similar(word string, among []string) (string, bool) {
	const most = 1000
	if r.hints >= maxHints {
		return "", false
	}
	r.hints++
	return quantity.Nearest(word, among[:min(most, len(among))])
}

// describe says what a node is, for a message.
func describe(n *yaml.Node) string {
	switch {
	case n.Kind == yaml.MappingNode && len(n.Content) == 0:
		return "an empty mapping"
	case n.Kind == yaml.MappingNode:
		return "a mapping"
	case n.Kind == yaml.SequenceNode && len(n.Content) == 0:
		return "an empty list"
	case n.Kind == yaml.SequenceNode:
		return "a list"
	case n.Kind != yaml.ScalarNode:
		return "an alias"
	case n.Value == "" && n.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle) != 0:
		return "an empty text"
	case n.ShortTag() == "!!null":
		return "nothing"
	case n.ShortTag() == "!!bool":
		return "the truth value " + n.Value
	}
	return quote(n.Value)
}

// quote shows a text of the file in a message: as it is where it is short
// and plain.
func quote(s string) string {
	if s == "" {
		return "nothing"
	}
	plain := func(c rune) bool {
		return c > ' ' && c < 0x7f && !strings.ContainsRune(`"';`, c)
	}
	if len(s) <= 40 && strings.TrimSpace(s) == s && !slices.ContainsFunc([]rune(strings.ReplaceAll(s, " ", "_")), func(c rune) bool { return !plain(c) }) {
		return s
	}
	return quantity.Excerpt(s)
}

// count is a number of things, for a message.
func count(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return strconv.Itoa(n) + " " + thing + "s"
}

// orList joins names for a message: a, b or c.
func orList(names []string) string {
	if len(names) < 2 {
		return strings.Join(names, "")
	}
	return strings.Join(names[:len(names)-1], ", ") + " or " + names[len(names)-1]
}
