package sweep_test

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"testing"
	"time"

	"betaloom/schema/sweep"
)

// TestLimits: what is too large is refused, and says by how much.
func TestLimits(t *testing.T) {
	huge := func(n int) string {
		var b strings.Builder
		for i := range n {
			fmt.Fprintf(&b, "p%d: 1, ", i)
		}
		return b.String()
	}
	for _, c := range []struct{ name, src, want string }{
		{"file", strings.Repeat("#", sweep.MaxFile+1), "a file of more than 1048576 bytes"},
		{"parameters", slab(t, "height: 0.4 um", huge(2000)+"height: 0.4 um"), "2002 names; expected at most 1000"},
		{"name", slab(t, "height", strings.Repeat("h", 500)), "a text of at most 64 bytes as a key"},
		{"expression", slab(t, "height: 0.4 um", "height: 0.4 um, x: {expr: \""+strings.Repeat("1+", 5000)+"1\"}"), "an expression"},
		{"depth", "a: " + strings.Repeat("[", 9000) + strings.Repeat("]", 9000), "more than 64 levels"},
		{"depth of the parser", "a: " + strings.Repeat("[", 200000), "exceeded max depth"},
		{"problems", slab(t, "{index: 2}", "{"+strings.Repeat("a: 1, ", 20000)+"}"), "more problems"},
	} {
		t.Run(c.name, func(t *testing.T) { refused(t, c.src, c.want) })
	}
}

// TestGridIsNotBuilt: the size of a grid is known before any of it is built.
func TestGridIsNotBuilt(t *testing.T) {
	var b strings.Builder
	for i := range 900 {
		fmt.Fprintf(&b, "p%d: {from: 0, to: 1, count: 1000000}, ", i)
	}
	src := slab(t, "height: 0.4 um", b.String()+"height: 0.4 um")
	var before, after runtime.MemStats
	runtime.ReadMemStats(&before)
	refused(t, src, "expected at most 1e+09")
	runtime.ReadMemStats(&after)
	// The axes alone would be 7.2 GB; the tree of this 40 kB file is a few MB.
	if used := after.TotalAlloc - before.TotalAlloc; used > 100<<20 {
		t.Errorf("found %d MB allocated, expected a few", used>>20)
	}
}

// TestSlowInputs feeds the largest files of the kinds that are apt to take
// time out of proportion. Each takes under a second on an idle core; the
// limit is where it would be felt as a hang.
func TestSlowInputs(t *testing.T) {
	fill := func(unit string) string { return strings.Repeat(unit, sweep.MaxFile/len(unit)) }
	for name, src := range map[string]string{
		"keys":        "a: {" + fill("b, ")[:sweep.MaxFile-10] + "}",
		"lines":       fill("a\n"),
		"comments":    fill("#a\n"),
		"documents":   fill("---\n"),
		"mappings":    fill("- a: b\n"),
		"unknown":     numbered("k%d: 1\n"),
		"blank":       fill(" \n"),
		"quotes":      "a: \"" + fill("\\n")[:sweep.MaxFile-20] + "\"",
		"block":       "a: |\n" + fill(" x\n")[:sweep.MaxFile-20],
		"anchors":     numbered("k%d: &a 1\n"),
		"aliases":     "a: &a 1\n" + fill("- *a\n")[:sweep.MaxFile-20],
		"expr chain":  chain(900),
		"values":      slab(t, "0.4 um", "{values: ["+fill("1 um, ")[:sweep.MaxFile-400]+"]}"),
		"strips":      slab(t, "thickness: height", "thickness: height, fill: glass, strips: ["+strings.Repeat("{centre: 0 um, width: 1 um}, ", 1000)+"]"),
		"polygon":     polygon(1000),
		"colons":      fill(":"),
		"questions":   fill("? "),
		"dashes":      fill("- ")[:20000],
		"flow braces": fill("{"),
	} {
		t.Run(name, func(t *testing.T) {
			start := time.Now()
			_, err := parse(src)
			var list sweep.Diagnostics
			if err != nil && !errors.As(err, &list) {
				t.Errorf("found the error %v, expected diagnostics", err)
			}
			if took := time.Since(start); took > 30*time.Second {
				t.Errorf("took %v", took)
			}
		})
	}
}

func numbered(format string) string {
	var b strings.Builder
	for i := 0; b.Len() < sweep.MaxFile-40; i++ {
		fmt.Fprintf(&b, format, i)
	}
	return b.String()
}

// chain is a sweep whose derived parameters each need the one after it.
func chain(n int) string {
	var b strings.Builder
	b.WriteString("format: 1\nsweep: chain\nmaterials: {a: {index: 1}}\nparameters:\n  wavelength: 1 um\n")
	for i := range n {
		fmt.Fprintf(&b, "  p%d: {expr: \"2 * p%d\"}\n", i, i+1)
	}
	fmt.Fprintf(&b, "  p%d: 1\nsection: {ground: both, layers: [{material: a, thickness: 1 um}]}\n", n)
	return b.String()
}

// polygon is a pipe with a saw-toothed outline.
func polygon(n int) string {
	var b strings.Builder
	b.WriteString("format: 1\nsweep: saw\nmaterials: {a: {index: 1}}\nparameters: {frequency: 1 GHz}\nsection:\n  pipe:\n    fill: a\n    polygon:\n")
	for i := range n - 1 {
		fmt.Fprintf(&b, "      - [%d mm, %d mm]\n", i, i%2)
	}
	b.WriteString("      - [500 mm, 1000 mm]\n")
	return b.String()
}

// TestFiles: the files that a sweep names are bounded too.
func TestFiles(t *testing.T) {
	points := slab(t, "parameters: {wavelength: {from: 1.3 um, to: 1.7 um, count: 5}, height: 0.4 um}", "points: {file: a}")
	table := slab(t, "{index: 2}", "{table: a}")
	for _, c := range []struct {
		name, src, want string
		file            io.Reader
	}{
		{"table of endless bytes", table, "the file a of more than 8388608 bytes", endless{}},
		{"points of endless bytes", points, "the file a of more than 67108864 bytes", endless{}},
		{"rows", points, "more than 5000000 rows", strings.NewReader("a,b\n" + strings.Repeat("1,1\n", sweep.MaxRows+1))},
		{"columns", points, "2001 columns", strings.NewReader(strings.Repeat("a,", 2000) + "\n")},
		{"zero bytes", table, "zero bytes", strings.NewReader("wavelength_um,n\n\x00")},
		{"broken reader", table, "cannot be read", io.MultiReader(strings.NewReader("wavelength_um,n\n"), broken{})},
		{"faults", points, "a.csv", nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			if c.file == nil {
				c.src = strings.ReplaceAll(c.src, "file: a", "file: a.csv")
				c.file = strings.NewReader("height [um]\n" + strings.Repeat("x\n", 100000))
			}
			_, err := sweep.Parse("test.yaml", []byte(c.src), func(string) (io.ReadCloser, error) { return io.NopCloser(c.file), nil })
			var list sweep.Diagnostics
			if !errors.As(err, &list) || len(list) > 50 || !strings.Contains(list.Error(), c.want) {
				t.Errorf("found %d diagnostics, %.300v, expected at most 50 with %q", len(list), err, c.want)
			}
		})
	}
}

// endless never ends.
type endless struct{}

func (endless) Read(b []byte) (int, error) {
	for i := range b {
		b[i] = 'a'
	}
	return len(b), nil
}

// broken cannot be read.
type broken struct{}

func (broken) Read([]byte) (int, error) { return 0, errors.New("the disk is gone") }

// TestLoad: what cannot be opened is an error, and so is a folder that
// stands for a table.
func TestLoad(t *testing.T) {
	dir := t.TempDir()
	if _, err := sweep.Load(filepath.Join(dir, "none.yaml"), nil); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("found the error %v, expected that there is no such file", err)
	}
	path := filepath.Join(dir, "a.yaml")
	if err := os.WriteFile(path, []byte(slab(t, "{index: 2}", "{table: .}")), 0o644); err != nil {
		t.Fatal(err)
	}
	if _, err := sweep.Load(path, nil); err == nil || !strings.Contains(err.Error(), "not a regular file") {
		t.Errorf("found the error %v, expected one that names no regular file", err)
	}
	if err := os.WriteFile(path, bytes.Repeat([]byte("#"), sweep.MaxFile+1), 0o644); err != nil {
		t.Fatal(err)
	}
	if _, err := sweep.Load(path, nil); err == nil || !strings.Contains(err.Error(), "a file of more than") {
		t.Errorf("found the error %v, expected one that says the limit", err)
	}
}
