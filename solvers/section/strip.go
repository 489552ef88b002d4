package section

import (
	"fmt"
	"math"
	"slices"

	"betaloom/schema"
	"betaloom/solvers"
)

// strips sets the media of all layers and the walls of their strips, as they
// are given.
func (b *builder) strips() error {
	for k := range b.o.Layers {
		l := &b.o.Layers[k]
		given := b.layers.Layers[l.Index]
		fill := given.Material
		if len(given.Strips) > 0 {
			fill = given.Fill
		}
		var err error
		if l.Fill, err = b.dielectric(b.where(l.Index), fill); err != nil {
			return err
		}
		for j := range given.Strips {
			s, err := b.strip(l, j)
			if err != nil {
				return err
			}
			l.Strips = append(l.Strips, s)
		}
	}
	return nil
}

// strip resolves one strip of a layer.
func (b *builder) strip(l *Layer, j int) (Strip, error) {
	given := b.layers.Layers[l.Index].Strips[j]
	where := b.whereStrip(l.Index, j)
	s := Strip{Index: j, Medium: Metal}
	if name := b.stripMaterial(l.Index, given); !b.metal(name) {
		var err error
		if s.Medium, err = b.medium(name); err != nil {
			return s, err
		}
	}
	left, err := b.angle(where, "left", given.SidewallLeft)
	if err != nil {
		return s, err
	}
	right, err := b.angle(where, "right", given.SidewallRight)
	if err != nil {
		return s, err
	}
	width := fromJet(b.r.Dimension(given.Width))
	if !(width.V >= 0) || !finite(width) {
		return s, &solvers.InputError{Where: where, Found: fmt.Sprintf("a width of %g m", width.V), Expected: "zero or more"}
	}
	if err := s.place(l, given, fromJet(b.r.Dimension(given.Centre)), width, lean(left), lean(right)); err != nil {
		return s, &solvers.InputError{Where: where, Found: err.Error(), Expected: "top, foot or middle"}
	}
	if !finite(s.Left.Bottom, s.Left.Top, s.Right.Bottom, s.Right.Top) {
		return s, &solvers.InputError{Where: where, Found: fmt.Sprintf("walls from %g to %g m", s.Left.Bottom.V, s.Right.Bottom.V), Expected: "finite ones, with finite derivatives"}
	}
	for _, x := range []Length{s.Left.Bottom, s.Left.Top, s.Right.Bottom, s.Right.Top} {
		b.o.tolX = max(b.o.tolX, rounding*math.Abs(x.V))
	}
	return s, nil
}

// angle is a wall's angle from the horizontal.
func (b *builder) angle(where, which string, n *schema.Number) (Length, error) {
	if n == nil {
		return Length{V: math.Pi / 2}, nil
	}
	a := fromJet(b.r.Dimension(*n))
	if !(a.V > 0 && a.V < math.Pi) || !finite(a) {
		return a, &solvers.InputError{Where: where, Found: fmt.Sprintf("a %s wall at %g deg", which, a.V*180/math.Pi), Expected: "between 0 and 180 deg from the horizontal"}
	}
	return a, nil
}

// place sets the walls from the width where it is meant. The centre is the
// middle of the width there.
func (s *Strip) place(l *Layer, given schema.Strip, centre, width, leanLeft, leanRight Length) error {
	height := l.Top.minus(l.Bottom)
	var up float64 // share of the height above the place of the width
	switch given.WidthAt {
	case "", "top":
		up = 0
	case "middle":
		up = 0.5
	case "foot":
		up = 1
	default:
		return fmt.Errorf("the width at %q", given.WidthAt)
	}
	left, right := centre.minus(width.scaled(0.5)), centre.plus(width.scaled(0.5))
	inLeft, inRight := height.times(leanLeft), height.times(leanRight) // how far a wall comes in from foot to top
	s.Left = Side{left.minus(inLeft.scaled(1 - up)), left.plus(inLeft.scaled(up))}
	s.Right = Side{right.plus(inRight.scaled(1 - up)), right.minus(inRight.scaled(up))}
	return nil
}

// tidy leaves out strips of no width, sorts the others and refuses those
// that are no quadrilaterals or overlap.
func (b *builder) tidy() error {
	for k := range b.o.Layers {
		l := &b.o.Layers[k]
		kept := l.Strips[:0]
		for _, s := range l.Strips {
			shut, err := b.shut(b.whereStrip(l.Index, s.Index), "walls that meet or cross inside the layer", "walls apart", s.Left, s.Right)
			if err != nil {
				return err
			}
			if !shut {
				kept = append(kept, s)
			}
		}
		slices.SortStableFunc(kept, func(s, t Strip) int {
			return compare(s.Left.Bottom.V, t.Left.Bottom.V)
		})
		l.Strips = kept
		if err := b.neighbours(l); err != nil {
			return err
		}
	}
	return nil
}

func compare(a, b float64) int {
	switch {
	case a < b:
		return -1
	case a > b:
		return 1
	}
	return 0
}

// shut reports whether nothing stands between two walls. Walls that meet at
// one end only, or cross, are refused.
func (b *builder) shut(where, found, expected string, left, right Side) (bool, error) {
	foot, top := right.Bottom.V-left.Bottom.V, right.Top.V-left.Top.V
	if foot > b.o.tolX && top > b.o.tolX {
		return false, nil
	}
	if math.Abs(foot) > b.o.tolX || math.Abs(top) > b.o.tolX {
		return false, &solvers.InputError{
			Where: where, Found: fmt.Sprintf("%s: %g m apart at its bottom, %g m at its top", found, foot, top),
			Expected: expected + " throughout the layer",
		}
	}
	b.split(right.Bottom, left.Bottom)
	b.split(right.Top, left.Top)
	return true, nil
}

// neighbours checks the gaps of a layer, those to side walls with them.
func (b *builder) neighbours(l *Layer) error {
	for i := range l.Strips {
		where := b.whereStrip(l.Index, l.Strips[i].Index)
		if i > 0 {
			left := b.whereStrip(l.Index, l.Strips[i-1].Index)
			if _, err := b.shut(where, "an overlap with "+left, "a gap, or none", l.Strips[i-1].Right, l.Strips[i].Left); err != nil {
				return err
			}
		}
	}
	if b.o.SideWalls == nil || len(l.Strips) == 0 {
		return nil
	}
	first, last := &l.Strips[0], &l.Strips[len(l.Strips)-1]
	wall := func(i int) Side { return Side{b.o.SideWalls[i], b.o.SideWalls[i]} }
	if _, err := b.shut(b.whereStrip(l.Index, first.Index), "a strip beyond the left side wall", "a strip between the side walls", wall(0), first.Left); err != nil {
		return err
	}
	_, err := b.shut(b.whereStrip(l.Index, last.Index), "a strip beyond the right side wall", "a strip between the side walls", last.Right, wall(1))
	return err
}
