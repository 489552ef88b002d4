package sweep_test

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/sweep"
)

// FuzzParse: no sweep file, table or points file panics or hangs; what is
// refused is Diagnostics, each whole; what is accepted keeps the promises that
// the rest of the program builds on.
func FuzzParse(f *testing.F) {
	seeds := 0
	for _, pattern := range []string{"testdata/good/*.yaml", "testdata/bad/*.yaml"} {
		files, err := filepath.Glob(pattern)
		if err != nil {
			f.Fatal(err)
		}
		for _, file := range files {
			src, err := os.ReadFile(file)
			if err != nil {
				f.Fatal(err)
			}
			f.Add(src, []byte("wavelength_um,n\n1,2\n1.1,2\n1.2,2\n1.3,2\n"))
			seeds++
		}
	}
	for _, file := range []string{"testdata/good/wafer.csv", "testdata/good/lab-film.csv", "testdata/bad/points-cells.csv"} {
		csv, err := os.ReadFile(file)
		if err != nil {
			f.Fatal(err)
		}
		src, err := os.ReadFile("testdata/good/points.yaml")
		if err != nil {
			f.Fatal(err)
		}
		f.Add(src, csv)
		seeds++
	}
	if seeds < 100 {
		f.Fatalf("%d seeds", seeds)
	}
	f.Fuzz(func(t *testing.T, src, file []byte) {
		open := func(string) (io.ReadCloser, error) { return io.NopCloser(strings.NewReader(string(file))), nil }
		s, err := sweep.Parse("fuzz.yaml", src, open)
		if err != nil {
			checkDiagnostics(t, err)
			return
		}
		checkSweep(t, s)
	})
}

func checkDiagnostics(t *testing.T, err error) {
	t.Helper()
	var list sweep.Diagnostics
	if !errors.As(err, &list) || len(list) == 0 {
		t.Fatalf("found the error %v, expected diagnostics", err)
	}
	for _, d := range list {
		if d.File == "" || d.Line < 1 || d.Column < 1 || d.Found == "" || d.Expected == "" || strings.ContainsAny(d.String(), "\n\r\x00") || len(d.String()) > 2000 {
			t.Fatalf("diagnostic %#v has a gap, or is more than a line", d)
		}
	}
}

func checkSweep(t *testing.T, s *sweep.Sweep) {
	t.Helper()
	total, clocks := 1.0, 0
	for _, a := range s.Axes {
		total *= float64(len(a.Values))
		if len(a.Values) == 0 || len(a.Values) > sweep.MaxAxis {
			t.Fatalf("axis %s: found %d values", a.Parameter, len(a.Values))
		}
	}
	if total > sweep.MaxPoints || len(s.Axes) > 0 && s.Rows != nil {
		t.Fatalf("found %g points and %d rows", total, len(s.Rows))
	}
	for _, p := range s.Physics.Parameters {
		if p.Name == schema.Wavelength || p.Name == schema.Frequency {
			clocks++
		}
	}
	if clocks != 1 || s.Name == "" || strings.ContainsAny(s.Name, "/\\. ") {
		t.Fatalf("found %d of wavelength and frequency, name %q", clocks, s.Name)
	}
	for _, row := range s.Rows {
		if len(row) != len(s.Columns) {
			t.Fatalf("found a row of %d, expected %d", len(row), len(s.Columns))
		}
	}
}
