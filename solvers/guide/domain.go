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

// truncate bounds what the walls' distance does to a mode, in all and by side. The derivative of L in the distance is exact, and
// falls as exp(-2 g d): what is left beyond d is that over 2 g. Its derivatives in frequency grow with f = 2 d w dg/dw each
// time, the higher ones faster, as g bends.
func (p *point) truncate(c *class, m *solved, b *section.Bounds) (all bound, side [4]bound) {
	n, ng, cw := m.neff(), m.ng(), lightSpeed*p.w
	for i, open := range p.openSides() {
		if !open || i == left && c.halfX || i == bottom && c.halfY {
			continue
		}
		g, o := max(p.decay(i, c, n), 1e-9*p.k), p.outer(i, c)
		e := wary * absolute(m.d.Wall[i].L) / (2 * p.k * p.k * n) / (2 * g)
		f := 2 * *distance(b, i) * p.k * p.k / g * math.Abs(n*ng-o*o)
		side[i] = bound{neff: e, kappa: e, ng: e * (1 + f), gvd: 6 * e * f * (2 + f) / cw, beta3: 40 * e * f * (f*f + 3*f + 3) / (cw * p.w)}
		all.add(&side[i])
	}
	return all, side
}

// goal is the share of the accuracy asked that the walls may take.
const goal = 0.1

// wary is by how much the walls' effect is taken to be larger than its estimate, which knows one rate of decay on each side.
const wary = 3

// widen moves walls outward until the effect of each is below the goal; it reports whether any moved.
func (p *point) widen(b *section.Bounds, sets []classModes) bool {
	moved := false
	for i := range sets {
		c := sets[i].class
		far := p.farthest(c)
		for j := range sets[i].modes {
			m := &sets[i].modes[j]
			_, effect := p.truncate(c, m, b)
			for side := range effect {
				d, most := distance(b, side), *distance(&far, side)
				excess := p.against(&effect[side]) / (goal / 4)
				if excess <= 1 || *d >= most {
					continue
				}
				g := p.decay(side, c, m.neff())
				step := (math.Log(excess) + 2) / (2 * g)
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
