package section

import (
	"fmt"
	"math"

	"betaloom/solvers"
)

// open says on which sides a plan has no end.
func (p *plan) open() sides {
	return sides{
		left: p.left == nil, right: p.right == nil,
		bottom: math.IsInf(p.levels[0].V, 0), top: math.IsInf(p.levels[len(p.rows)].V, 0),
	}
}

// domain is the plan within its computational walls: every side has a place.
// They move with the outermost wall ends.
func (p plan) domain(bounds Bounds) (plan, error) {
	open := p.open()
	left, right, _, _, ok := p.corners()
	bottom, top := p.interfaces()
	if !ok {
		left, right = Length{}, Length{}
		if p.left != nil {
			left, right = *p.left, *p.left
		}
	}
	for _, side := range []struct {
		name             string
		open             bool
		bound, low, high float64
	}{
		{"left", open.left, bounds.Left, left.V, right.V}, {"right", open.right, bounds.Right, left.V, right.V},
		{"bottom", open.bottom, bounds.Bottom, bottom.V, top.V}, {"top", open.top, bounds.Top, bottom.V, top.V},
	} {
		floor := least([]float64{side.low, side.high}) // nearer than this a wall would coincide with the section
		if side.open && !(side.bound > floor && side.bound <= math.MaxFloat64) {
			return p, &solvers.InputError{Where: "mesh", Found: fmt.Sprintf("a bound of %g m at the %s", side.bound, side.name), Expected: fmt.Sprintf("a finite one above %g m", floor)}
		}
	}
	if p.left == nil {
		x := left.shifted(-bounds.Left)
		p.left = &x
	}
	if p.right == nil {
		x := right.shifted(bounds.Right)
		p.right = &x
	}
	p.cut(bottom.shifted(-bounds.Bottom), top.shifted(bounds.Top), 1e-6*bounds.Bottom, 1e-6*bounds.Top)
	return p, nil
}

// interfaces are the outermost finite levels.
func (p *plan) interfaces() (bottom, top Length) {
	n := len(p.rows)
	bottom, top = p.levels[0], p.levels[n]
	if math.IsInf(bottom.V, 0) && n > 1 {
		bottom = p.levels[1]
	}
	if math.IsInf(top.V, 0) && n > 1 {
		top = p.levels[n-1]
	}
	if math.IsInf(bottom.V, 0) {
		bottom = Length{}
	}
	if math.IsInf(top.V, 0) {
		top = Length{}
	}
	return bottom, top
}

// cut ends the open sides at y. Rows beyond it, or within a hair of it, fall
// away.
func (p *plan) cut(low, high Length, hairLow, hairHigh float64) {
	n := len(p.rows)
	from, to := 0, n
	levels := append([]Length{}, p.levels...)
	if math.IsInf(levels[0].V, 0) {
		for from+1 < n && levels[from+1].V <= low.V+hairLow {
			from++
		}
		levels[from] = low
	}
	if math.IsInf(levels[n].V, 0) {
		for to-1 > from && levels[to-1].V >= high.V-hairHigh {
			to--
		}
		levels[to] = high
	}
	p.levels, p.rows = levels[from:to+1], p.rows[from:to]
}
