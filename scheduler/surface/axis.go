package surface

import (
	"cmp"
	"math"
	"slices"
	"sort"

	"betaloom/scheduler/grid"
	"betaloom/schema"
)

// most is the longest window along an axis, in nodes.
const most = 6

// slopeNodes is the most nodes of an interpolant that uses derivatives.
const slopeNodes = 4

// axis is one axis of the grid, its nodes sorted by value.
type axis struct {
	name      string
	dimension schema.Dimension
	x         []float64 // rising
	t         []float64 // the coordinate of interpolation: x, or the angular frequency
	node      []int     // what a node at position i adds to the node's number
	frequency bool      // it sets the frequency
	slopes    bool      // ng and so on are derivatives along it (frequency)
	parameter int       // index of the sensitivities to it; -1 where there is none
	perSI     float64   // of those sensitivities
}

func (s *Surfaces) makeAxes() {
	stride := s.meta.Nodes
	for _, m := range s.meta.Axes {
		stride /= len(m.Values)
		s.axes = append(s.axes, newAxis(m, stride, s.meta))
	}
	for i := range s.axes {
		s.order = append(s.order, i)
	}
	slices.SortStableFunc(s.order, func(i, j int) int {
		a, b := s.axes[i], s.axes[j]
		if a.slopes != b.slopes {
			return map[bool]int{true: -1, false: 1}[a.slopes]
		}
		return cmp.Compare(len(b.x), len(a.x))
	})
}

func newAxis(m MetaAxis, stride int, all Meta) *axis {
	a := &axis{name: m.Parameter, dimension: m.Dimension, parameter: -1}
	rank := make([]int, len(m.Values))
	for i := range rank {
		rank[i] = i
	}
	slices.SortFunc(rank, func(i, j int) int { return cmp.Compare(m.Values[i], m.Values[j]) })
	for _, i := range rank {
		a.x = append(a.x, m.Values[i])
		a.node = append(a.node, i*stride)
	}
	for k, p := range all.Sensitivities {
		if p.Parameter == m.Parameter {
			a.parameter, a.perSI = k, p.PerSI
		}
	}
	_, a.frequency = grid.AngularFrequency(a.name, 1)
	for _, x := range a.x {
		a.t = append(a.t, a.coordinate(x))
	}
	a.slopes = a.frequency && all.FrequencyTotal
	return a
}

// coordinate is what a value is on the scale of interpolation.
func (a *axis) coordinate(x float64) float64 {
	if w, ok := grid.AngularFrequency(a.name, x); ok {
		return w
	}
	return x
}

// cell is where a value lies on an axis: at node lo, or between lo and lo+1.
type cell struct {
	lo    int
	exact bool
	t     float64
}

func (c cell) nodes() int {
	if c.exact {
		return 1
	}
	return 2
}

func (a *axis) locate(v float64) (cell, error) {
	n := len(a.x)
	i := sort.SearchFloat64s(a.x, v) // the first node at or above v
	for _, k := range [2]int{i, i - 1} {
		if k >= 0 && k < n && same(a.x[k], v) {
			return cell{lo: k, exact: true, t: a.t[k]}, nil
		}
	}
	if i == 0 || i == n || v != v {
		return cell{}, &RangeError{Axis: a.name, Value: v, Lo: a.x[0], Hi: a.x[n-1], dimension: a.dimension}
	}
	return cell{lo: i - 1, t: a.coordinate(v)}, nil
}

// same forgives the rounding of a unit's conversion, a few units in the
// last place.
func same(node, v float64) bool {
	return node == v || math.Abs(node-v) <= 4*0x1p-52*math.Abs(node)
}
