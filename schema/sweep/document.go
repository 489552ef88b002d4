package sweep

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"regexp"
	"strconv"
	"strings"

	"go.yaml.in/yaml/v3"
)

// document parses the file's one YAML document. ok is false where it cannot
// be read on.
func (r *reader) document() (root place, ok bool) {
	if len(r.src) > MaxFile {
		r.add(Diagnostic{r.file, 1, 1, "", fmt.Sprintf("a file of more than %d bytes", MaxFile), "a sweep file within that; long lists of points belong into a points file"})
		return place{}, false
	}
	dec := yaml.NewDecoder(bytes.NewReader(r.src))
	var doc, next yaml.Node
	switch err := dec.Decode(&doc); {
	case errors.Is(err, io.EOF):
		r.add(Diagnostic{r.file, 1, 1, "", "an empty file", "a sweep: format, sweep, materials, parameters, section"})
		return place{}, false
	case err != nil:
		r.syntax(err)
		return place{}, false
	}
	switch err := dec.Decode(&next); {
	case err == nil:
		r.faultAt(&next, "", "a second document", "one document in a sweep file")
	case !errors.Is(err, io.EOF):
		r.syntax(err)
		return place{}, false
	}
	root = place{doc.Content[0], ""}
	r.enter(root, nil)
	if root.node.Kind != yaml.MappingNode {
		r.wrong(root, "a mapping that starts with format: 1")
		return place{}, false
	}
	return root, r.plain(root.node)
}

var yamlLine = regexp.MustCompile(`^yaml: (?:line (\d+): )?(.*)$`)
var yamlAnchor = regexp.MustCompile(`unknown anchor '(.*)' referenced`)

// syntax reports an error of the YAML parser, which gives a line or none.
func (r *reader) syntax(err error) {
	d := Diagnostic{File: r.file, Line: 1, Column: 1, Found: err.Error(), Expected: "YAML"}
	if m := yamlLine.FindStringSubmatch(strings.ReplaceAll(err.Error(), "\n", " ")); m != nil {
		d.Found = "what is not YAML: " + m[2]
		d.Line = max(1, lineNumber(m[1]))
	}
	if line := r.sourceLine(d.Line); strings.HasPrefix(strings.TrimLeft(line, " "), "\t") {
		d.Expected = "spaces, not tabs, at the start of a line"
	}
	if m := yamlAnchor.FindStringSubmatch(err.Error()); m != nil {
		before, _, _ := strings.Cut(string(r.src), "*"+m[1])
		d.Line = 1 + strings.Count(before, "\n")
		d.Found, d.Expected = "the alias "+quote("*"+m[1]), "the value itself: a sweep file has no anchors and aliases"
	}
	r.add(d)
}

func lineNumber(s string) int {
	n, err := strconv.Atoi(s)
	if err != nil {
		return 0
	}
	return n
}

// plain refuses what makes a YAML file hard to follow: anchors, aliases, merge
// keys, tags and deep nesting. ok is false where the tree is too deep.
func (r *reader) plain(root *yaml.Node) (ok bool) {
	type level struct {
		node  *yaml.Node
		depth int
	}
	stack := []level{{root, 1}}
	for len(stack) > 0 {
		top := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		if top.depth > maxDepth {
			r.faultAt(top.node, "", fmt.Sprintf("more than %d levels of nesting", maxDepth), "the few levels that the keys of a sweep file need")
			return false
		}
		r.plainNode(top.node)
		for _, c := range top.node.Content {
			stack = append(stack, level{c, top.depth + 1})
		}
	}
	return true
}

func (r *reader) plainNode(n *yaml.Node) {
	switch {
	case n.Kind == yaml.AliasNode:
		r.faultAt(n, "", "the alias "+quote("*"+n.Value), "the value itself: a sweep file has no anchors and aliases")
	case n.Anchor != "":
		r.faultAt(n, "", "the anchor "+quote("&"+n.Anchor), "the value alone: a sweep file has no anchors and aliases")
	case n.Kind == yaml.ScalarNode && n.ShortTag() == "!!merge":
		r.faultAt(n, "", "the merge key <<", "the keys themselves: a sweep file has no merge keys")
	case n.Style&yaml.TaggedStyle != 0:
		r.faultAt(n, "", "the tag "+quote(n.Tag), "the value alone: a sweep file has no tags")
	}
}
