package sweep

import (
	"bytes"
	"strings"
	"unicode/utf8"

	"go.yaml.in/yaml/v3"
)

// inText is the position of a byte of a text: exact where the text stands in
// the file on one line as it is, else where it starts.
func (c *reader) inText(t text, offset int) (line, column int) {
	n := t.node
	if n == nil {
		return 1, 1
	}
	line, column = n.Line, n.Column
	if n.Style&(yaml.LiteralStyle|yaml.FoldedStyle) != 0 {
		return line, column
	}
	start := column
	if n.Style&(yaml.SingleQuotedStyle|yaml.DoubleQuotedStyle) != 0 {
		start++
	}
	rest, ok := afterColumn(c.sourceLine(line), start)
	if !ok || !strings.HasPrefix(rest, t.s) {
		return line, column
	}
	return line, start + utf8.RuneCountInString(t.s[:min(max(0, offset), len(t.s))])
}

// sourceLine is a line of the sweep file, from 1.
func (c *reader) sourceLine(line int) string {
	rest := c.src
	for ; line > 1; line-- {
		_, after, ok := bytes.Cut(rest, []byte("\n"))
		if !ok {
			return ""
		}
		rest = after
	}
	rest, _, _ = bytes.Cut(rest, []byte("\n"))
	return string(rest)
}

// afterColumn is what stands on a line from a column on, counted in
// characters from 1.
func afterColumn(line string, column int) (string, bool) {
	for ; column > 1; column-- {
		_, size := utf8.DecodeRuneInString(line)
		if size == 0 {
			return "", false
		}
		line = line[size:]
	}
	return line, true
}
