package solvers

import (
	"math"
	"math/cmplx"
	"testing"
)

func TestFieldGrid(t *testing.T) {
	for _, c := range []struct {
		name   string
		points int
		w      Window
		nx, ny int
	}{
		{"square", 11, Window{-1, 1, 0, 2}, 11, 11},
		{"wide", 101, Window{-2, 2, 0, 1}, 101, 26},
		{"default", 0, Window{0, 1, 0, 2}, 101, 201},
		{"a hair high", 11, Window{0, 1, 0, 1e-9}, 11, 2},
		{"no width", 7, Window{0, 0, -1, 1}, 1, 7},
	} {
		t.Run(c.name, func(t *testing.T) {
			f := NewField(&FieldOptions{Points: c.points}, c.w)
			if len(f.X) != c.nx || len(f.Y) != c.ny || len(f.E[2]) != c.nx*c.ny || len(f.Material) != c.nx*c.ny {
				t.Fatalf("%d by %d places, expected %d by %d", len(f.X), len(f.Y), c.nx, c.ny)
			}
			if f.X[0] != c.w.Left || f.X[c.nx-1] != c.w.Right || f.Y[0] != c.w.Bottom || f.Y[c.ny-1] != c.w.Top {
				t.Errorf("from %g to %g and %g to %g", f.X[0], f.X[c.nx-1], f.Y[0], f.Y[c.ny-1])
			}
		})
	}
}

// TestAddEdge cuts lines at the unit square, by hand.
func TestAddEdge(t *testing.T) {
	w := Window{0, 1, 0, 1}
	for _, c := range []struct {
		name     string
		in, want Edge
		gone     bool
	}{
		{"inside", Edge{[2]float64{0.25, 0.75}, [2]float64{0.5, 1}}, Edge{[2]float64{0.25, 0.75}, [2]float64{0.5, 1}}, false},
		{"across", Edge{[2]float64{-1, 3}, [2]float64{0.5, 0.5}}, Edge{[2]float64{0, 1}, [2]float64{0.5, 0.5}}, false},
		{"a corner", Edge{[2]float64{0.5, 1.5}, [2]float64{0, 1}}, Edge{[2]float64{0.5, 1}, [2]float64{0, 0.5}}, false},
		{"downward", Edge{[2]float64{0.5, 0.5}, [2]float64{2, -2}}, Edge{[2]float64{0.5, 0.5}, [2]float64{1, 0}}, false},
		{"beside", Edge{[2]float64{2, 2}, [2]float64{0, 1}}, Edge{}, true},
		{"past a corner", Edge{[2]float64{0.9, 1.9}, [2]float64{-0.9, 0.1}}, Edge{}, true},
	} {
		t.Run(c.name, func(t *testing.T) {
			var f Field
			f.AddEdge(c.in, w)
			if c.gone {
				if len(f.Edges) != 0 {
					t.Fatalf("found %v, expected none", f.Edges)
				}
				return
			}
			if len(f.Edges) != 1 {
				t.Fatalf("found %v, expected one", f.Edges)
			}
			for i := range 2 {
				if got := f.Edges[0]; math.Abs(got.X[i]-c.want.X[i])+math.Abs(got.Y[i]-c.want.Y[i]) > 1e-15 {
					t.Fatalf("found %v, expected %v", got, c.want)
				}
			}
		})
	}
}

// TestScale: a quarter of the power is half the field, and the largest transverse E becomes real and positive whatever its phase was.
func TestScale(t *testing.T) {
	f := NewField(&FieldOptions{Points: 2}, Window{0, 1, 0, 1})
	f.E[0] = []complex128{1i, 2i, 0, 0}
	f.E[1] = []complex128{0, 0, -4i, 0}
	f.E[2] = []complex128{9, 0, 0, 0}
	f.H[1] = []complex128{0, 0, 0, 2i}
	f.Scale(4)
	for name, c := range map[string]struct{ got, want complex128 }{
		"largest": {f.E[1][2], 2}, "other": {f.E[0][1], -1}, "axial": {f.E[2][0], 4.5i}, "H": {f.H[1][3], -1},
	} {
		if cmplx.Abs(c.got-c.want) > 1e-15 {
			t.Errorf("%s: found %v, expected %v", name, c.got, c.want)
		}
	}
	f = NewField(&FieldOptions{Points: 2}, Window{0, 1, 0, 1})
	f.Scale(1)
	if f.E[0][0] != 0 {
		t.Errorf("no field became %v", f.E[0][0])
	}
}
