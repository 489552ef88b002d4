package section

import "math"

// worstTaper is how much more a cell may taper than the strip or gap of its
// section that tapers most, before fewer lines are shared.
const worstTaper = 0.2

// web weaves a plan, with lines shared as far as that leaves the cells
// well-shaped.
func (p *plan) web(split []bool, tol float64) *web {
	var best *web
	most := -1.0
	for _, lean := range []float64{1, 0.3, 0.1, 0.03, 0} {
		w := weave(p, split, tol, lean)
		if t := w.taper(); t > most {
			best, most = w, t
		}
		if most >= worstTaper*p.taper() {
			break
		}
	}
	return best
}

// taper is the least ratio of the lower and upper widths of strips and gaps.
func (p *plan) taper() float64 {
	least := 1.0
	for k := range p.rows {
		w := p.rows[k].walls
		for i := 1; i < len(w); i++ {
			least = min(least, ratio(w[i].Bottom.V-w[i-1].Bottom.V, w[i].Top.V-w[i-1].Top.V))
		}
	}
	return least
}

// taper is the least ratio of the lower and upper widths between lines.
func (w *web) taper() float64 {
	least := 1.0
	for k := range w.plan.rows {
		for i := 1; i < len(w.lines); i++ {
			a, b := w.lines[i-1], w.lines[i]
			least = min(least, ratio(b.x[k].V-a.x[k].V, b.x[k+1].V-a.x[k+1].V))
		}
	}
	return least
}

// ratio is the lesser of two widths over the greater, from 0 to 1: 0 where
// a width is not above zero, or not a number.
func ratio(a, b float64) float64 {
	low, high := min(a, b), max(a, b)
	if !(low > 0 && high <= math.MaxFloat64) {
		return 0
	}
	return low / high
}
