package sweep

import (
	"fmt"
	"io"
	"os"
	"path/filepath"

	"betaloom/schema"
)

// Sweep is a sweep file as read: what is solved, at which points, and what it
// is asked for.
type Sweep struct {
	Name    string
	Physics schema.Physics // every parameter, those of a points file too (as axes, after the others)

	Axes    []schema.AxisBlock // in file order; the last varies fastest
	Columns []string           // of a points file, in its order; excludes Axes
	Rows    [][]float64        // of a points file: SI units, angles in radians

	Windows []Window
	Source  []byte // the sweep file as given

	places map[string]mark
}

// At gives the line and column, from 1, of the key with this path
// (materials.film, section.layers[1].thickness). For a path that is not in the
// file it is the position of what comes nearest above it.
func (s *Sweep) At(path string) (line, column int) {
	m := nearest(s.places, path)
	return m.keyLine, m.keyColumn
}

// Load reads the sweep file at path, and the tables and points files that it
// names relative to its folder. builtin are the names of the built-in
// materials; with nil any name passes. The error is Diagnostics for anything
// that is wrong in a file.
func Load(path string, builtin []string) (*Sweep, error) {
	src, err := readLimited(path)
	if err != nil {
		return nil, fmt.Errorf("sweep file: %w", err)
	}
	return parse(&reader{file: path, src: src, open: beside(path), builtin: builtin})
}

func readLimited(path string) ([]byte, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	return io.ReadAll(io.LimitReader(f, MaxFile+1))
}

// beside opens files relative to the folder of path.
func beside(path string) func(string) (io.ReadCloser, error) {
	return func(name string) (io.ReadCloser, error) {
		if !filepath.IsAbs(name) {
			name = filepath.Join(filepath.Dir(path), name)
		}
		info, err := os.Stat(name)
		if err != nil {
			return nil, err
		}
		if !info.Mode().IsRegular() { // a pipe would wait for its other end
			return nil, fmt.Errorf("%s is not a regular file", name)
		}
		return os.Open(name)
	}
}

// Parse reads a sweep file from src. file is its name in diagnostics; open
// reads the tables and points files that it names. Any name of a built-in
// material passes. The error is Diagnostics.
func Parse(file string, src []byte, open func(name string) (io.ReadCloser, error)) (*Sweep, error) {
	return parse(&reader{file: file, src: src, open: open})
}

func parse(r *reader) (*Sweep, error) {
	r.places, r.tables, r.profiles, r.odd = map[string]mark{}, map[string]*table{}, map[string]text{}, map[string]bool{}
	root, ok := r.document()
	if !ok {
		return nil, r.result()
	}
	raw, _ := sweepForm().read(r, root)
	s := newChecker(r, &raw).run()
	if err := r.result(); err != nil {
		return nil, err
	}
	s.Source, s.places = r.src, r.places
	return s, nil
}
