package section

import (
	"fmt"
	"math"

	"betaloom/solvers"
)

// frame is a mesh in the making: each line of it is a share of the way
// between two lines, or levels, of the web.
type frame struct {
	o      *Options
	m      *Mesh
	w      *web
	params int
	open   sides

	columns, rows []share // one for each line of the mesh
	before, under []int   // which interval of the web each column, row lies in
}

// sides marks sides of a mesh.
type sides struct{ left, right, bottom, top bool }

// share is the place at t between lines, or levels, of and of+1. The left
// and right walls count as lines 0 and last.
type share struct {
	of int
	t  float64
}

// x is the place of interval end i, counted with the outer walls, at level j.
func (f *frame) x(i, j int) *Length {
	switch {
	case i == 0:
		return f.w.plan.left
	case i > len(f.w.lines):
		return f.w.plan.right
	}
	return &f.w.lines[i-1].x[j]
}

// cut divides all intervals between lines and between levels.
func (f *frame) cut() error {
	lines, levels := f.w.corners()
	n := len(lines)
	for i := 0; i <= n; i++ {
		s := stretch{
			low: i > 0 && lines[i-1], high: i < n && lines[i],
			openLow: i == 0 && f.open.left, openEnd: i == n && f.open.right,
		}
		for j := range levels {
			s.width = max(s.width, f.x(i+1, j).V-f.x(i, j).V)
		}
		if err := divide(f.o, s, i, &f.columns, &f.before, &f.m.OrderX); err != nil {
			return err
		}
	}
	last := len(levels) - 1
	for k := range last {
		s := stretch{
			width: f.w.plan.levels[k+1].V - f.w.plan.levels[k].V, low: levels[k], high: levels[k+1],
			openLow: k == 0 && f.open.bottom, openEnd: k == last-1 && f.open.top,
		}
		if err := divide(f.o, s, k, &f.rows, &f.under, &f.m.OrderY); err != nil {
			return err
		}
	}
	return nil
}

// divide cuts one stretch and adds its lines, their interval and their
// cells' orders.
func divide(o *Options, s stretch, of int, lines *[]share, interval *[]int, orders *[]int) error {
	places, err := o.cut(s)
	if err != nil {
		return err
	}
	if len(*lines) == 0 {
		*lines = append(*lines, share{of, 0})
	}
	for i := 1; i < len(places); i++ {
		*lines = append(*lines, share{of, places[i]})
		*interval = append(*interval, of)
		*orders = append(*orders, o.order((places[i]-places[i-1])*s.width))
	}
	return nil
}

// place sets the lines.
func (f *frame) place() error {
	if n := len(f.columns) * len(f.rows); n > maxNumbers/8 {
		return tooMany(fmt.Sprintf("%d nodes", n))
	}
	levels := f.w.plan.levels
	f.m.Y = make([]float64, len(f.rows))
	f.m.X = make([][]float64, len(f.rows))
	for j, r := range f.rows {
		f.m.Y[j] = lerp(levels[r.of].V, levels[r.of+1].V, r.t)
		f.m.X[j] = make([]float64, len(f.columns))
		for i, c := range f.columns {
			low := lerp(f.x(c.of, r.of).V, f.x(c.of+1, r.of).V, c.t)
			high := lerp(f.x(c.of, r.of+1).V, f.x(c.of+1, r.of+1).V, c.t)
			f.m.X[j][i] = lerp(low, high, r.t)
		}
	}
	return nil
}

// check holds that every cell is a convex quadrilateral, with digits left in
// its width and height.
func (f *frame) check() error {
	narrow := func(what string, a, b float64, all []float64) error {
		return &solvers.InputError{
			Where: "mesh", Found: fmt.Sprintf("%s at %g m and %g m, of a mesh from %g m to %g m", what, a, b, all[0], all[len(all)-1]),
			Expected: "a section and bounds whose numbers are not so far apart",
		}
	}
	y := f.m.Y
	for j := 1; j < len(y); j++ {
		height := y[j] - y[j-1]
		if !(height > least(y)) {
			return narrow("levels", y[j-1], y[j], y)
		}
		for _, x := range f.m.X[j-1 : j+1] {
			floor := least(x)
			for i := 1; i < len(x); i++ {
				if w := x[i] - x[i-1]; !(w > floor && w*height > 0) {
					return narrow("vertical lines", x[i-1], x[i], x)
				}
			}
		}
	}
	return nil
}

// least is the width below which places lose their meaning.
func least(places []float64) float64 {
	a, b := places[0], places[len(places)-1]
	return 1e-13 * math.Max(b-a, math.Max(math.Abs(a), math.Abs(b)))
}

// fill sets what the cells are made of.
func (f *frame) fill() {
	at := f.cells()
	for _, k := range f.under {
		media, parts := make([]int, len(f.before)), make([][]int, len(f.before))
		for i, b := range f.before {
			c := &f.w.plan.rows[k].cells[at[k][b]]
			media[i], parts[i] = c.medium, c.parts
		}
		f.m.Medium, f.m.Part = append(f.m.Medium, media), append(f.m.Part, parts)
	}
}

// cells says which cell of each row an interval between lines lies in.
func (f *frame) cells() [][]int {
	at := make([][]int, len(f.w.at))
	for k, row := range f.w.at {
		at[k] = make([]int, len(f.w.lines)+1)
		c := 0
		for i, l := range f.w.lines {
			if c < len(row) && row[c] == l {
				c++
			}
			at[k][i+1] = c
		}
	}
	return at
}
