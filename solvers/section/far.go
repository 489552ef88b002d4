package section

import (
	"math"

	"betaloom/solvers/slab"
)

// Far is the stack far left and far right of an open section: each layer
// with what fills it beside its strips. The two are one stack, since a fill stands on both sides. A mode
// of the section is guided only if its index is above those of the stack's modes that
// symmetry lets it couple to. Between side walls it has no meaning.
func (o *Outline) Far() slab.Stack {
	s := slab.Stack{GroundBottom: o.GroundBelow, GroundTop: o.GroundAbove}
	for _, l := range o.Layers {
		f := slab.Layer{Eps: o.Media[l.Fill].Eps, HalfSpace: math.IsInf(l.Bottom.V, 0) || math.IsInf(l.Top.V, 0)}
		if !f.HalfSpace {
			f.Thickness = l.Top.minus(l.Bottom).jet()
		}
		s.Layers = append(s.Layers, f)
	}
	return s
}

// Corners is the box of all ends of walls, in metres; ok is false for a
// section without walls.
func (o *Outline) Corners() (left, right, bottom, top float64, ok bool) {
	l, r, b, t, ok := o.plan.corners()
	return l.V, r.V, b.V, t.V, ok
}
