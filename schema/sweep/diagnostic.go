package sweep

import (
	"cmp"
	"fmt"
	"slices"
	"strings"
)

// Diagnostic is one problem of a sweep file or of a file that it names.
type Diagnostic struct {
	File         string
	Line, Column int    // from 1
	Path         string // section.layers[1].thickness; empty for the whole file
	Found        string
	Expected     string
}

// String writes the diagnostic on one line:
// file:line:column: path: found this; expected that.
func (d Diagnostic) String() string {
	path := ""
	if d.Path != "" {
		path = d.Path + ": "
	}
	return fmt.Sprintf("%s:%d:%d: %sfound %s; expected %s", d.File, d.Line, d.Column, path, d.Found, d.Expected)
}

// Diagnostics is every problem found, in the order of the file; those of
// tables and points files follow those of the sweep file.
type Diagnostics []Diagnostic

// Error gives one line for each problem.
func (d Diagnostics) Error() string {
	lines := make([]string, len(d))
	for i, one := range d {
		lines[i] = one.String()
	}
	return strings.Join(lines, "\n")
}

// order sorts by position, the sweep file itself first, and drops repeats.
func (d Diagnostics) order(file string) Diagnostics {
	slices.SortStableFunc(d, func(a, b Diagnostic) int {
		return cmp.Or(
			cmp.Compare(outside(a, file), outside(b, file)),
			cmp.Compare(a.File, b.File), cmp.Compare(a.Line, b.Line), cmp.Compare(a.Column, b.Column),
			cmp.Compare(a.Path, b.Path), cmp.Compare(a.Found, b.Found),
		)
	})
	return slices.Compact(d)
}

func outside(d Diagnostic, file string) int {
	if d.File == file {
		return 0
	}
	return 1
}
