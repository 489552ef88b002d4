package sweep_test

import (
	"errors"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"betaloom/schema/sweep"
)

var update = flag.Bool("update", false, "write the golden files of testdata/bad anew")

// TestBad holds the whole message of each bad sweep file against the file
// of the same name that ends in .golden. The messages there were read
// one by one.
func TestBad(t *testing.T) {
	files, err := filepath.Glob("testdata/bad/*.yaml")
	if err != nil {
		t.Fatal(err)
	}
	if len(files) < 50 {
		t.Fatalf("%d bad files, expected at least 50", len(files))
	}
	for _, file := range files {
		t.Run(strings.TrimSuffix(filepath.Base(file), ".yaml"), func(t *testing.T) {
			got := message(t, file)
			golden := strings.TrimSuffix(file, ".yaml") + ".golden"
			if *update {
				if err := os.WriteFile(golden, []byte(got), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(golden)
			if err != nil {
				t.Fatal(err)
			}
			if got != string(want) {
				t.Errorf("found:\n%sexpected:\n%s", got, want)
			}
		})
	}
}

// message is the error of a bad file, which must be whole: each
// diagnostic has its place, what was found and what was expected.
func message(t *testing.T, file string) string {
	t.Helper()
	src, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	_, err = sweep.Parse(filepath.Base(file), src, opener("testdata/bad"))
	var list sweep.Diagnostics
	if !errors.As(err, &list) || len(list) == 0 {
		t.Fatalf("found the error %v, expected diagnostics", err)
	}
	for _, d := range list {
		if d.File == "" || d.Line < 1 || d.Column < 1 || d.Found == "" || d.Expected == "" {
			t.Errorf("diagnostic %#v has a gap", d)
		}
	}
	return list.Error() + "\n"
}
