package section

import "math"

// MirrorX finds the vertical mirror plane: every wall with its tilt, every
// medium and the side walls are their own image in it, to 64 roundings of the section's
// size. A section without walls has it at x = 0.
func (o *Outline) MirrorX() (x float64, ok bool) { return o.plan.mirrorX(o.tolX) }

// MirrorY finds the horizontal mirror plane, likewise. Walls that tilt have
// an image only in a layer of its own on the other side of the plane.
func (o *Outline) MirrorY() (y float64, ok bool) { return o.plan.mirrorY(o.tolX, o.tolY) }

func (p *plan) mirrorX(tol float64) (float64, bool) {
	x := 0.0
	if first, past := p.walled(); p.left == nil && past > 0 {
		w := p.rows[first].walls
		x = middle(w[0].Bottom.V, w[len(w)-1].Bottom.V)
	}
	for k := range p.rows {
		r := &p.rows[k]
		n := len(r.walls)
		for i := range n {
			u, v := r.walls[i], r.walls[n-1-i]
			if !opposite(u.Bottom, v.Bottom, x, tol) || !opposite(u.Top, v.Top, x, tol) {
				return 0, false
			}
		}
		for i := range r.cells {
			if r.cells[i].medium != r.cells[n-i].medium {
				return 0, false
			}
		}
	}
	return x, true
}

func (p *plan) mirrorY(tolX, tolY float64) (float64, bool) {
	n := len(p.rows)
	y := p.middle()
	for k := range p.levels {
		u, v := p.levels[k], p.levels[n-k]
		open := math.IsInf(u.V, -1) && math.IsInf(v.V, 1) || math.IsInf(u.V, 1) && math.IsInf(v.V, -1)
		if !open && !opposite(u, v, y, tolY) {
			return 0, false
		}
	}
	for k := range p.rows {
		u, v := &p.rows[k], &p.rows[n-1-k]
		if len(u.walls) != len(v.walls) {
			return 0, false
		}
		for i := range u.walls {
			if !near(u.walls[i].Bottom, v.walls[i].Top, tolX) || !near(u.walls[i].Top, v.walls[i].Bottom, tolX) {
				return 0, false
			}
		}
		for i := range u.cells {
			if u.cells[i].medium != v.cells[i].medium {
				return 0, false
			}
		}
	}
	return y, true
}

// middle is half way between the lowest and the highest finite level.
func (p *plan) middle() float64 {
	n := len(p.rows)
	if n == 1 && math.IsInf(p.levels[0].V, 0) {
		return 0
	}
	k := 0
	if math.IsInf(p.levels[0].V, 0) {
		k = 1
	}
	return middle(p.levels[k].V, p.levels[n-k].V)
}

func middle(a, b float64) float64 { return a + (b-a)/2 }

// opposite reports whether u and v are images in a plane.
func opposite(u, v Length, plane, tol float64) bool {
	return math.Abs((u.V-plane)+(v.V-plane)) <= tol
}

func near(u, v Length, tol float64) bool { return math.Abs(u.V-v.V) <= tol }

// rightOf is the part of a mirrored plan right of its plane. Walls move in it
// as the even part of their motion: what is odd changes no eigenvalue to
// first order.
func (p *plan) rightOf(x float64) plan {
	half := plan{levels: p.levels, left: &Length{V: x}}
	if p.right != nil {
		right := averaged(*p.right, *p.left, -1)
		half.right = &right
	}
	for k := range p.rows {
		r := &p.rows[k]
		n := len(r.walls)
		var h row
		for i := (n + 1) / 2; i <= n; i++ {
			h.cells = append(h.cells, r.cells[i].with(r.cells[n-i]))
			if i < n {
				u, v := r.walls[i], r.walls[n-1-i]
				h.walls = append(h.walls, Side{averaged(u.Bottom, v.Bottom, -1), averaged(u.Top, v.Top, -1)})
			}
		}
		half.rows = append(half.rows, h)
	}
	return half
}

// above is the part of a mirrored plan above its plane.
func (p *plan) above(y float64) plan {
	n := len(p.rows)
	half := plan{levels: []Length{{V: y}}, left: p.left, right: p.right}
	for k := n / 2; k < n; k++ {
		r, s := &p.rows[k], &p.rows[n-1-k]
		var h row
		for i := range r.cells {
			h.cells = append(h.cells, r.cells[i].with(s.cells[i]))
		}
		for i := range r.walls {
			u, v := r.walls[i], s.walls[i]
			h.walls = append(h.walls, Side{averaged(u.Bottom, v.Top, 1), averaged(u.Top, v.Bottom, 1)})
		}
		top := p.levels[k+1]
		if !math.IsInf(top.V, 0) {
			top = averaged(top, p.levels[n-1-k], -1)
		}
		half.rows, half.levels = append(half.rows, h), append(half.levels, top)
	}
	return half
}

// with is a cell that stands for its image too.
func (c cell) with(image cell) cell {
	c.parts = append(append(make([]int, 0, len(c.parts)+len(image.parts)), c.parts...), image.parts...)
	return c
}
