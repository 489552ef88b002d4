package main

import (
	"bufio"
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
)

const (
	root   = "../.."
	module = "betaloom"
)

// TestImports holds the imports of the tree against the table in
// DEVELOPERS.md: what is not listed there may not be imported, and what is
// listed must be.
func TestImports(t *testing.T) {
	allowed := readMap(t)
	actual := readTree(t)
	for pkg, imports := range actual {
		t.Run(pkg, func(t *testing.T) {
			want, ok := allowed[pkg]
			if !ok {
				t.Fatalf("not in the map of DEVELOPERS.md")
			}
			for _, i := range slices.Compact(slices.Sorted(slices.Values(ours(imports)))) {
				if !slices.Contains(want, i) {
					t.Errorf("imports %s, which the map does not allow", i)
				}
			}
			for _, w := range want {
				if !slices.Contains(imports, module+"/"+w) {
					t.Errorf("the map allows %s, which is not imported", w)
				}
			}
		})
	}
	for pkg := range allowed {
		if _, ok := actual[pkg]; !ok {
			t.Errorf("%s is in the map of DEVELOPERS.md and not in the tree", pkg)
		}
	}
}

// TestSolversStandAlone keeps queues and tables out of the physics.
func TestSolversStandAlone(t *testing.T) {
	checked := 0
	for pkg, imports := range readTree(t) {
		if pkg != "solvers" && !strings.HasPrefix(pkg, "solvers/") {
			continue
		}
		checked++
		for _, i := range imports {
			if strings.Contains(i, "nats-io") || strings.Contains(i, "apache/arrow") {
				t.Errorf("%s imports %s", pkg, i)
			}
		}
	}
	if checked == 0 {
		t.Fatal("no package under solvers was found")
	}
}

// TestPackagesAreDocumented asks each package for its manual.
func TestPackagesAreDocumented(t *testing.T) {
	for pkg := range readTree(t) {
		if !documented(t, filepath.Join(root, pkg)) {
			t.Errorf("%s has no package comment", pkg)
		}
	}
}

func ours(imports []string) []string {
	var list []string
	for _, i := range imports {
		if rest, ok := strings.CutPrefix(i, module+"/"); ok {
			list = append(list, rest)
		}
	}
	return list
}

var row = regexp.MustCompile("^\\| `([^`]+)` \\|[^|]*\\|(.*)\\|$")
var quoted = regexp.MustCompile("`([^`]+)`")

// readMap reads the table between the imports marks.
func readMap(t *testing.T) map[string][]string {
	t.Helper()
	f, err := os.Open(filepath.Join(root, "DEVELOPERS.md"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	table, inside := map[string][]string{}, false
	for s := bufio.NewScanner(f); s.Scan(); {
		switch line := s.Text(); {
		case line == "<!-- imports -->":
			inside = true
		case line == "<!-- /imports -->":
			inside = false
		case inside:
			if m := row.FindStringSubmatch(line); m != nil {
				table[m[1]] = []string{}
				for _, q := range quoted.FindAllStringSubmatch(m[2], -1) {
					table[m[1]] = append(table[m[1]], q[1])
				}
			}
		}
	}
	if len(table) == 0 {
		t.Fatal("DEVELOPERS.md has no map of imports")
	}
	return table
}

// readTree lists, for each package, what its files other than tests import.
func readTree(t *testing.T) map[string][]string {
	t.Helper()
	tree := map[string][]string{}
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() && (d.Name() == "testdata" || len(d.Name()) > 2 && d.Name()[0] == '.') {
			return skip(err, d)
		}
		if d.IsDir() || !strings.HasSuffix(path, ".go") || strings.HasSuffix(path, "_test.go") {
			return nil
		}
		dir, err := filepath.Rel(root, filepath.Dir(path))
		if err != nil {
			return err
		}
		imports, err := imports(path)
		tree[filepath.ToSlash(dir)] = append(tree[filepath.ToSlash(dir)], imports...)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	if len(tree) == 0 {
		t.Fatal("no package was found")
	}
	return tree
}

func skip(err error, d fs.DirEntry) error {
	if err != nil {
		return err
	}
	return fs.SkipDir
}

func imports(path string) ([]string, error) {
	f, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ImportsOnly)
	if err != nil {
		return nil, err
	}
	var list []string
	for _, i := range f.Imports {
		p, err := strconv.Unquote(i.Path.Value)
		if err != nil {
			return nil, err
		}
		list = append(list, p)
	}
	return list, nil
}

func documented(t *testing.T, dir string) bool {
	t.Helper()
	files, err := filepath.Glob(filepath.Join(dir, "*.go"))
	if err != nil {
		t.Fatal(err)
	}
	for _, path := range files {
		if strings.HasSuffix(path, "_test.go") {
			continue
		}
		f, err := parser.ParseFile(token.NewFileSet(), path, nil, parser.ParseComments|parser.PackageClauseOnly)
		if err != nil {
			t.Fatal(err)
		}
		if f.Doc != nil && len(f.Doc.Text()) > 40 {
			return true
		}
	}
	return false
}
