package surface

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// Crossing is where the GVD of a family vanishes along an axis.
type Crossing struct {
	Value float64 // of the axis, SI
	Bound float64 // on its error: that of the GVD over the slope
	Slope float64 // of the GVD in ps^2/km by the axis' SI value
}

// walk evaluates the GVD of a family at points that differ from values in
// one or two axes.
type walk struct {
	s      *Surfaces
	family string
	values []float64
	v      Value
}

func (s *Surfaces) walk(family string, values []float64, axes ...int) (*walk, error) {
	if _, err := s.family(family); err != nil {
		return nil, err
	}
	if len(values) != len(s.axes) {
		return nil, fmt.Errorf("surface: found %d values, expected one for each of %d axes", len(values), len(s.axes))
	}
	for i, a := range axes {
		if a < 0 || a >= len(s.axes) || slices.Contains(axes[:i], a) {
			return nil, fmt.Errorf("surface: found axis %d, expected 0 to %d, each once", a, len(s.axes)-1)
		}
	}
	return &walk{s: s, family: family, values: slices.Clone(values)}, nil
}

// at gives the GVD, NaN where the family is absent, and beta3.
func (w *walk) at() (gvd, beta3 float64, err error) {
	err = w.s.AtTo(&w.v, w.family, w.values)
	if absent := (*AbsentError)(nil); errors.As(err, &absent) {
		return math.NaN(), math.NaN(), nil
	}
	return w.v.GVD.Value, w.v.Beta3.Value, err
}

// ZeroPoints finds where the GVD of a family vanishes along an axis (an
// index into Axes), the others at values; that of the axis itself is ignored.
// Crossings come in rising order. Along the frequency axis beta3 also tells of two crossings
// between neighbouring nodes. Where the family is absent there is none.
func (s *Surfaces) ZeroPoints(family string, axis int, values []float64) ([]Crossing, error) {
	w, err := s.walk(family, values, axis)
	if err != nil {
		return nil, err
	}
	x := s.axes[axis].x
	var list []Crossing
	var last sample
	for i := range x {
		now, err := w.sample(axis, x[i])
		if err != nil {
			return nil, err
		}
		if i > 0 {
			found, err := w.between(axis, last, now)
			if err != nil {
				return nil, err
			}
			list = append(list, found...)
		}
		last = now
	}
	return list, nil
}

// sample is the GVD at a value of an axis.
type sample struct{ x, gvd, beta3 float64 }

func (w *walk) sample(axis int, x float64) (sample, error) {
	w.values[axis] = x
	gvd, beta3, err := w.at()
	return sample{x: x, gvd: gvd, beta3: beta3}, err
}

// between finds the crossings from a up to b, b itself left out.
func (w *walk) between(axis int, a, b sample) ([]Crossing, error) {
	if a.gvd != a.gvd || b.gvd != b.gvd {
		return nil, nil
	}
	if opposite(a.gvd, b.gvd) {
		return w.crossings(axis, a, b)
	}
	if !w.s.axes[axis].frequency || !opposite(a.beta3, b.beta3) {
		return nil, nil
	}
	middle, err := w.root(axis, a, b, func(s sample) float64 { return s.beta3 })
	if err != nil || !opposite(a.gvd, middle.gvd) {
		return nil, err
	}
	return w.crossings(axis, a, middle, b)
}

func opposite(a, b float64) bool { return (a < 0) != (b < 0) }

// crossings finds one between each two samples.
func (w *walk) crossings(axis int, samples ...sample) ([]Crossing, error) {
	var list []Crossing
	for i := 1; i < len(samples); i++ {
		a, b := samples[i-1], samples[i]
		r, err := w.root(axis, a, b, func(s sample) float64 { return s.gvd })
		if err != nil {
			return nil, err
		}
		bound := w.v.GVD.Bound
		step := 1e-3 * (b.x - a.x)
		lo, hi := max(a.x, r.x-step), min(b.x, r.x+step)
		below, err := w.sample(axis, lo)
		if err != nil {
			return nil, err
		}
		above, err := w.sample(axis, hi)
		if err != nil {
			return nil, err
		}
		slope := (above.gvd - below.gvd) / (hi - lo)
		list = append(list, Crossing{Value: r.x, Bound: bound / math.Abs(slope), Slope: slope})
	}
	return list, nil
}

// root narrows down a change of sign of f between a and b by the rule of
// false position with the Illinois correction (Dowell and Jarratt, BIT 11, 168 (1971)) and,
// where that stalls, by halving. w is left at the root.
func (w *walk) root(axis int, a, b sample, f func(sample) float64) (sample, error) {
	fa, fb := f(a), f(b)
	width := b.x - a.x
	side := 0
	var c sample
	for i := range 100 {
		x := a.x + (b.x-a.x)*fa/(fa-fb)
		if i%3 == 2 || !(x > a.x && x < b.x) {
			x = a.x + (b.x-a.x)/2
		}
		var err error
		if c, err = w.sample(axis, x); err != nil {
			return c, err
		}
		fc := f(c)
		if fc == 0 || b.x-a.x < 1e-12*width || x == a.x || x == b.x || fc != fc {
			break
		}
		if opposite(fa, fc) {
			b, fb = c, fc
			if side < 0 {
				fa /= 2
			}
			side = -1
		} else {
			a, fa = c, fc
			if side > 0 {
				fb /= 2
			}
			side = 1
		}
	}
	return c, nil
}
