package section

import (
	"fmt"
	"math"

	"betaloom/solvers"
)

// Bounds are the distances of the computational walls, in metres, above zero: Left and Right beyond the outermost
// wall ends of the section, Bottom and Top beyond its outermost interfaces. A side that is closed by metal or
// by a mirror plane has none of its own. Of a section without strips, Left and Right
// count from x = 0.
type Bounds struct{ Left, Right, Bottom, Top float64 }

// Options says how fine a mesh is. A cell of width w has the order
// Order - Drop log(Size/w)/log(1/Ratio), rounded, between MinOrder and Order.
type Options struct {
	Bounds       Bounds
	Order        int     // highest polynomial order, 1 to 30; 0: 6
	MinOrder     int     // lowest, of the thinnest cells; 0: 1
	Drop         float64 // orders a cell loses for each power of Ratio it is thinner than Size; 0: 1
	CornerLayers int     // cells that become geometrically thinner toward a corner, 0 to 15; 0: none
	Ratio        float64 // of their widths, 0.01 to 0.9; 0: 0.15
	Size         float64 // largest width and height of a cell, m; 0: half the largest strip or layer with strips
	Growth       float64 // factor from cell to cell outward beyond the outermost walls, 1 to 10; 0: 2

	HalfX, HalfY bool // mesh the part right of, above the mirror plane only
	WallX, WallY Wall // what then stands in the plane
	Outer        Wall // computational walls; metal ones are electric always
}

// Validate says what is out of range, as a *solvers.InputError.
func (o *Options) Validate() error {
	ranges := []struct {
		name         string
		v, low, high float64
	}{
		{"order", float64(o.Order), 0, 30},
		{"lowest order", float64(o.MinOrder), 0, 30},
		{"drop", o.Drop, 0, 100},
		{"corner layers", float64(o.CornerLayers), 0, 15},
		{"ratio", o.Ratio, 0, 0.9},
		{"size", o.Size, 0, math.MaxFloat64},
		{"growth", o.Growth, 0, 10},
	}
	for _, r := range ranges {
		if !(r.v >= r.low && r.v <= r.high) {
			return &solvers.InputError{Where: "mesh", Found: fmt.Sprintf("%s %g", r.name, r.v), Expected: fmt.Sprintf("%g to %g", r.low, r.high)}
		}
	}
	if o.Ratio != 0 && o.Ratio < 0.01 || o.Growth != 0 && o.Growth < 1 {
		return &solvers.InputError{Where: "mesh", Found: fmt.Sprintf("ratio %g and growth %g", o.Ratio, o.Growth), Expected: "a ratio of at least 0.01 and a growth of at least 1"}
	}
	return nil
}

// filled puts the defaults in place; size is that of the section.
func (o Options) filled(size float64) Options {
	defaults := func(v *float64, d float64) {
		if *v == 0 {
			*v = d
		}
	}
	if o.Order == 0 {
		o.Order = 6
	}
	o.MinOrder = min(max(o.MinOrder, 1), o.Order)
	defaults(&o.Drop, 1)
	defaults(&o.Ratio, 0.15)
	defaults(&o.Size, size)
	defaults(&o.Growth, 2)
	return o
}
