package sweep

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

const pipePath = "section.pipe"

// checkPipe checks a tube's shape and what fills it.
func (c *checker) checkPipe(p *schema.Pipe) {
	if p.Coax != nil {
		c.checkCoax(p.Coax)
	}
	if p.Polygon != nil {
		c.checkPolygon(p.Polygon)
	}
	if p.FillAlong == "" || p.FillLayers == nil {
		return
	}
	if size, what, ok := c.across(p); ok {
		c.checkSum(pipePath+".fill.layers", p.FillLayers, size, "the pipe's "+what)
	}
}

func (c *checker) checkCoax(g *schema.Coax) {
	const path = pipePath + ".coax"
	inner, okInner := c.value(path+".inner", &g.Inner)
	outer, okOuter := c.value(path+".outer", &g.Outer)
	if !okInner || !okOuter {
		return
	}
	if inner >= outer {
		c.fault(path+".inner", "an inner diameter of "+quantity.Format(inner, length), "one below the outer, "+quantity.Format(outer, length))
		return
	}
	if o, ok := c.value(path+".offset", g.Offset); ok && math.Abs(o) >= (outer-inner)/2 {
		c.fault(path+".offset", "an offset of "+quantity.Format(o, length), "one below "+quantity.Format(rounded15((outer-inner)/2), length)+", where the conductors touch")
	}
}

// across is the pipe's size along the axis of its fill, where it is known.
func (c *checker) across(p *schema.Pipe) (size float64, what string, ok bool) {
	wide := p.FillAlong == "x"
	what = map[bool]string{true: "width", false: "height"}[wide]
	rectangle := func(path string, r *schema.Rectangle) {
		n := &r.Height
		if wide {
			n = &r.Width
		}
		size, ok = c.value(join(path, what), n)
	}
	switch {
	case p.Rectangle != nil:
		rectangle(pipePath+".rectangle", p.Rectangle)
	case p.Ellipse != nil:
		rectangle(pipePath+".ellipse", p.Ellipse)
	case p.Circle != nil:
		what = "diameter"
		size, ok = c.value(pipePath+".circle.diameter", &p.Circle.Diameter)
	case p.Coax != nil:
		what = "outer diameter"
		size, ok = c.value(pipePath+".coax.outer", &p.Coax.Outer)
	case p.Polygon != nil:
		size, ok = c.extent(p.Polygon, wide)
	}
	return size, what, ok
}

// extent is a polygon's width or height.
func (c *checker) extent(corners [][2]schema.Number, wide bool) (size float64, ok bool) {
	xy, ok := c.corners(corners)
	if !ok {
		return 0, false
	}
	axis := 1
	if wide {
		axis = 0
	}
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, p := range xy {
		lo, hi = min(lo, p[axis]), max(hi, p[axis])
	}
	return hi - lo, true
}

// corners gives the corners of a polygon, where all of them are known.
func (c *checker) corners(corners [][2]schema.Number) (xy [][2]float64, ok bool) {
	for i := range corners {
		var p [2]float64
		for j := range p {
			v, ok := c.value(index(index(pipePath+".polygon", i), j), &corners[i][j])
			if !ok {
				return nil, false
			}
			p[j] = v
		}
		xy = append(xy, p)
	}
	return xy, true
}

// checkPolygon refuses an outline that crosses or touches itself, or has no
// area.
func (c *checker) checkPolygon(corners [][2]schema.Number) {
	xy, ok := c.corners(corners)
	if !ok {
		return
	}
	n := len(xy)
	for i := range xy {
		if xy[i] == xy[(i+1)%n] {
			c.fault(index(pipePath+".polygon", (i+1)%n), "the corner before it again", "corners that differ")
			return
		}
		for j := range i {
			if next := j+1 == i || (i+1)%n == j; !next && meet(xy[i], xy[(i+1)%n], xy[j], xy[j+1]) {
				c.fault(index(pipePath+".polygon", i), fmt.Sprintf("a side from corner %d that meets the side from corner %d", i, j), "an outline that does not meet itself")
				return
			}
		}
	}
	if n == 3 && turn(xy[0], xy[1], xy[2]) == 0 {
		c.fault(pipePath+".polygon", "three corners on one line", "an outline with an area")
	}
}

// meet reports whether the segments ab and cd have a point in common, by the
// sides on which each one's ends lie (O'Rourke, Computational Geometry in C,
// 2nd ed., section 1.5).
func meet(a, b, c, d [2]float64) bool {
	if turn(a, b, c)*turn(a, b, d) < 0 && turn(c, d, a)*turn(c, d, b) < 0 {
		return true
	}
	return between(a, b, c) || between(a, b, d) || between(c, d, a) || between(c, d, b)
}

// turn is 1, -1 or 0: whether a, b, c turn left, turn right or lie on a
// line.
func turn(a, b, c [2]float64) int {
	area := (b[0]-a[0])*(c[1]-a[1]) - (c[0]-a[0])*(b[1]-a[1])
	switch {
	case area > 0:
		return 1
	case area < 0:
		return -1
	}
	return 0
}

// between reports whether p lies on the segment ab.
func between(a, b, p [2]float64) bool {
	return turn(a, b, p) == 0 &&
		min(a[0], b[0]) <= p[0] && p[0] <= max(a[0], b[0]) && min(a[1], b[1]) <= p[1] && p[1] <= max(a[1], b[1])
}
