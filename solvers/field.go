package solvers

import (
	"context"
	"fmt"
	"math"
)

// Fielder is a Problem that can give the fields of its modes.
type Fielder interface {
	Problem
	// Fields solves the point q and samples the fields of the mode with this number, counted as in a run: from the
	// highest Re neff down, as Modes gives them. A number that no guided mode there has is an
	// *InputError; the other errors are those of Modes.
	Fields(ctx context.Context, q Q, mode int, options FieldOptions) (*Field, error)
}

// FieldOptions says where a field is sampled.
type FieldOptions struct {
	Points int     // places along the window's longer side, 2 to MaxFieldPoints; 0: 201
	Window *Window // nil: the box of the cores and, where the section is open, as much beyond it as the mode needs to fall to 1/50
}

// Window is a rectangle of a section, in metres.
type Window struct{ Left, Right, Bottom, Top float64 }

// MaxFieldPoints bounds the places along one side of a window.
const MaxFieldPoints = 1001

// defaultFieldPoints are the places along the longer side of a window where none are given.
const defaultFieldPoints = 201

// Validate says what is out of range, as an *InputError.
func (o *FieldOptions) Validate() error {
	if o.Points != 0 && (o.Points < 2 || o.Points > MaxFieldPoints) {
		return &InputError{Where: "field", Found: fmt.Sprintf("%d points", o.Points), Expected: fmt.Sprintf("2 to %d", MaxFieldPoints)}
	}
	if w := o.Window; w != nil {
		wide, high := w.Right-w.Left, w.Top-w.Bottom
		if !(wide > 0) || !(high > 0) || math.IsInf(wide, 0) || math.IsInf(high, 0) {
			return &InputError{Where: "field", Found: fmt.Sprintf("a window from %g to %g m and %g to %g m", w.Left, w.Right, w.Bottom, w.Top), Expected: "one with a width and a height"}
		}
	}
	return nil
}

// Field is the fields of one mode on a grid of nx by ny places. The time factor is exp(j(wt - bz)) and mu0 is 4 pi 1e-7 H/m. The whole
// section carries an axial power of 1 W; a section that does not vary along x (nx is 1) carries 1 W per metre of
// width. Where the transverse E is largest its larger component is real and positive; without loss the transverse fields are
// then real and the axial ones imaginary. Fields are zero in metal and beyond a solver's computational walls.
// A place on an interface belongs to what is below it, or left of it.
type Field struct {
	Mode  Mode
	Count Count

	X, Y []float64       // rising, m, in the section's coordinates: y is zero at the lowest interface or ground
	E    [3][]complex128 // along x, y and z, V/m, at (X[i], Y[j]) in [j*nx+i]
	H    [3][]complex128 // likewise, A/m

	Materials []string // names of the sweep
	Metal     []bool   // which of them are conductors
	Material  []int    // what stands at each place: index into Materials, in the order of E
	Edges     []Edge   // where two materials meet within the window
}

// Edge is a straight line between two materials: the x and y of its ends, m.
type Edge struct{ X, Y [2]float64 }

// AddEdge adds the part of an edge that lies in the window, if any (Liang and Barsky, ACM Transactions on Graphics 3, 1, 1984).
func (f *Field) AddEdge(e Edge, w Window) {
	from, to := 0.0, 1.0
	clip := func(a, b, low, high float64) {
		switch d := b - a; {
		case d == 0 && (a < low || a > high):
			from, to = 1, 0
		case d > 0:
			from, to = max(from, (low-a)/d), min(to, (high-a)/d)
		case d < 0:
			from, to = max(from, (high-a)/d), min(to, (low-a)/d)
		}
	}
	clip(e.X[0], e.X[1], w.Left, w.Right)
	clip(e.Y[0], e.Y[1], w.Bottom, w.Top)
	if from > to || from == to && w.Left < w.Right {
		return
	}
	at := func(v [2]float64, t float64) float64 { return (1-t)*v[0] + t*v[1] }
	f.Edges = append(f.Edges, Edge{
		X: [2]float64{at(e.X, from), at(e.X, to)}, Y: [2]float64{at(e.Y, from), at(e.Y, to)},
	})
}

// MaterialIndex is the place of a name in Materials, where it is put if it is not there.
func (f *Field) MaterialIndex(name string, metal bool) int {
	for i, m := range f.Materials {
		if m == name {
			return i
		}
	}
	f.Materials, f.Metal = append(f.Materials, name), append(f.Metal, metal)
	return len(f.Materials) - 1
}

// NoMode is the error for the number of a mode that is not guided at a point.
func NoMode(mode int, c Count) error {
	expected := "a guided mode, and there is none: " + c.Reason
	if c.N > 0 {
		expected = fmt.Sprintf("0 to %d: %d modes are guided here", c.N-1, c.N)
	}
	return &InputError{Where: "field", Found: fmt.Sprintf("mode %d", mode), Expected: expected}
}

// NewField makes a field with the grid of the window and room for its values.
func NewField(o *FieldOptions, w Window) *Field {
	n := o.Points
	if n == 0 {
		n = defaultFieldPoints
	}
	side := func(length float64) int {
		share := length / max(w.Right-w.Left, w.Top-w.Bottom)
		return max(2, 1+int(math.Round(float64(n-1)*share)))
	}
	f := &Field{Y: spread(w.Bottom, w.Top, side(w.Top-w.Bottom)), X: []float64{w.Left}}
	if w.Right > w.Left {
		f.X = spread(w.Left, w.Right, side(w.Right-w.Left))
	}
	places := len(f.X) * len(f.Y)
	for c := range f.E {
		f.E[c], f.H[c] = make([]complex128, places), make([]complex128, places)
	}
	f.Material = make([]int, places)
	return f
}

func spread(low, high float64, n int) []float64 {
	v := make([]float64, n)
	for i := range v {
		t := float64(i) / float64(n-1)
		v[i] = (1-t)*low + t*high
	}
	return v
}

// Scale gives the fields the power of 1 W where they have that of power, and their phase.
func (f *Field) Scale(power float64) {
	factor := complex(1/math.Sqrt(math.Abs(power)), 0) * f.turn()
	for c := range f.E {
		for i := range f.E[c] {
			f.E[c][i] *= factor
			f.H[c][i] *= factor
		}
	}
}

// turn is the phase that makes the larger transverse component of E real and positive where that field is largest. Of
// places that differ by rounding alone the first counts.
func (f *Field) turn() complex128 {
	top, at := 0.0, complex(1, 0) // where there is no field
	for i := range f.E[0] {
		for c := range 2 {
			if s := math.Hypot(real(f.E[c][i]), imag(f.E[c][i])); s > 1.000001*top {
				top, at = s, f.E[c][i]
			}
		}
	}
	size := math.Hypot(real(at), imag(at))
	return complex(real(at)/size, -imag(at)/size)
}
