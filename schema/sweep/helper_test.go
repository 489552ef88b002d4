package sweep_test

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"betaloom/schema/sweep"
)

// opener opens files of a folder.
func opener(dir string) func(string) (io.ReadCloser, error) {
	return func(name string) (io.ReadCloser, error) { return os.Open(filepath.Join(dir, name)) }
}

func read(t *testing.T, file string) []byte {
	t.Helper()
	b, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// load reads a good sweep file.
func load(t *testing.T, name string) *sweep.Sweep {
	t.Helper()
	s, err := sweep.Load(filepath.Join("testdata/good", name), nil)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// slab is a good sweep file with some of its text replaced, in pairs.
func slab(t *testing.T, replace ...string) string {
	t.Helper()
	src := string(read(t, "testdata/good/slab.yaml"))
	for i := 0; i < len(replace); i += 2 {
		if !strings.Contains(src, replace[i]) {
			t.Fatalf("slab.yaml has no %q", replace[i])
		}
		src = strings.ReplaceAll(src, replace[i], replace[i+1])
	}
	return src
}

// parse reads a sweep file that names no others.
func parse(src string) (*sweep.Sweep, error) {
	return sweep.Parse("test.yaml", []byte(src), func(string) (io.ReadCloser, error) { return nil, os.ErrNotExist })
}

// refused asserts that a file is refused with a diagnostic whose text holds want.
func refused(t *testing.T, src, want string) {
	t.Helper()
	_, err := parse(src)
	var list sweep.Diagnostics
	if !errors.As(err, &list) {
		t.Fatalf("found the error %v, expected diagnostics", err)
	}
	if !strings.Contains(list.Error(), want) {
		t.Errorf("found %s, expected a diagnostic with %q", list, want)
	}
}
