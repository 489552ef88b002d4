package guide

import (
	"math"

	"betaloom/solvers/section"
)

// closest is how far above the lowest guided index a mode must be to be looked for, where the
// section is open.
const closest = 1e-5

// sides of a section, in the order of channel.Derivatives.
const (
	left = iota
	right
	bottom
	top
)

// openSides says which sides have a computational wall.
func (p *point) openSides() (open [4]bool) {
	closed := p.outline.SideWalls != nil
	return [4]bool{!closed, !closed, !p.outline.GroundBelow, !p.outline.GroundAbove}
}

// outer is the index beyond a side: that of its half-space, or of the modes far left and right.
func (p *point) outer(side int, c *class) float64 {
	switch side {
	case bottom:
		return p.half(0)
	case top:
		return p.half(len(p.outline.Layers) - 1)
	}
	return c.low
}

// decay is the rate (1/m) at which a mode of index n falls off beyond a side.
func (p *point) decay(side int, c *class, n float64) float64 {
	o := p.outer(side, c)
	return p.k * math.Sqrt(max(n*n-o*o, 0))
}

// farthest is the distance of the walls at which modes closest to their cut-off are still seen.
func (p *point) farthest(c *class) (b section.Bounds) {
	n := c.low + closest
	for side, open := range p.openSides() {
		if open {
			*distance(&b, side) = 2 / p.decay(side, c, n)
			if p.outer(side, c) < c.low-closest {
				*distance(&b, side) = 10 / p.decay(side, c, n)
			}
		}
	}
	return b
}

// distance is the bound of one side.
func distance(b *section.Bounds, side int) *float64 {
	return [4]*float64{&b.Left, &b.Right, &b.Bottom, &b.Top}[side]
}

// guess is where walls are put first.
func (p *point) guess() (b section.Bounds) {
	for side, open := range p.openSides() {
		if open {
			*distance(&b, side) = 0.5 * 2 * math.Pi / p.k
		}
	}
	return b
}

// truncation is what the walls' distance does to a mode, as bounds.
type truncation struct{ neff, ng, gvd, beta3 float64 }

// truncate estimates the walls' effect from the derivative in their distance: it falls as exp(-2 g d), so that what
// is left beyond d is that over 2 g. Its derivatives in frequency grow with 2 d dg/dw each time.
func (p *point) truncate(c *class, m *solved, b *section.Bounds) (t truncation, more [4]float64) {
	n, ng := m.neff(), m.ng()
	for side, open := range p.openSides() {
		if !open || side == left && c.halfX || side == bottom && c.halfY {
			continue
		}
		g, o := p.decay(side, c, n), p.outer(side, c)
		if g == 0 {
			g = 1e-9 * p.k
		}
		slope := m.d.Wall[side]
		dn := absolute(slope.L) / (2 * p.k * p.k * n)
		e := dn / (2 * g)
		f := 2 * *distance(b, side) * p.k * p.k / g * math.Abs(n*ng-o*o)
		t.neff += e
		t.ng += e * (1 + f)
		t.gvd += e * f * (2 + f) / (lightSpeed * p.w)
		t.beta3 += e * f * (f*f + 3*f + 3) / (lightSpeed * p.w * p.w)
		more[side] = e
	}
	return t, more
}

// goal is the share of the accuracy asked that the walls may take.
const goal = 0.05

// widen moves walls outward until the effect of each is below the goal; it reports whether any moved.
func (p *point) widen(b *section.Bounds, sets []classModes) bool {
	moved := false
	limit := goal * p.accuracy.Neff / 4
	for i := range sets {
		c := sets[i].class
		far := p.farthest(c)
		for j := range sets[i].modes {
			m := &sets[i].modes[j]
			_, effect := p.truncate(c, m, b)
			for side, e := range effect {
				d, most := distance(b, side), *distance(&far, side)
				if e <= limit || *d >= most {
					continue
				}
				g := p.decay(side, c, m.neff())
				step := (math.Log(e/limit) + 2) / (2 * g)
				*d = min(*d+max(step, 0.2**d), max(most, *d), 3**d+1/g)
				moved = true
			}
		}
	}
	p.level(b)
	return moved
}

// level gives both sides of a mirror plane the same distance.
func (p *point) level(b *section.Bounds) {
	if p.classes[0].halfX {
		b.Left = max(b.Left, b.Right)
		b.Right = b.Left
	}
	if p.classes[0].halfY {
		b.Bottom = max(b.Bottom, b.Top)
		b.Top = b.Bottom
	}
}

func absolute(c complex128) float64 { return math.Hypot(real(c), imag(c)) }
