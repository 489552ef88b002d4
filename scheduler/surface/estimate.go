package surface

import (
	"math"
	"slices"
)

// The error of an interpolant is estimated on a line from those on fewer nodes. With nodes
// sorted by their distance, the interpolants on k and k+1 nodes differ by a divided difference times
// the product of (t - t_i) over k nodes (Stoer and Bulirsch, Introduction to Numerical Analysis, sections 2.1.3 and
// 2.1.4). So the differences give divided differences of several orders, their
// quotients the rate at which these change with the order, and the rate gives
// the one that belongs to the full interpolant's error.
//
// A divided difference may vanish by accident, which makes a rate too small
// or too large. Against the first, the rate is at least one that other
// quantities on the lane agree on, and more than one difference is carried on.

// levels is how many interpolants on fewer nodes an estimate looks at.
const levels = 4

// differences are the distances of an interpolant to those on one, two, ...
// nodes fewer.
type differences [levels]float64

const (
	// safety multiplies the estimate of the interpolation error.
	safety = 8
	// least is the least gain per node where there are few to tell it.
	least = 0.05
	// leastPair is the same between two nodes with derivatives, against the curvature.
	leastPair = 0.15
	// sharePair and shareIndex are the shares of the value that a pair without derivatives may miss
	// beside its rise, the latter for neff and ng.
	sharePair  = 0.16
	shareIndex = 0.02
	// doubtful and hopeless are the rates from which on a grid is taken to resolve a surface
	// badly, and not at all; steep is the same for neff and ng, whose derivatives help; peak is how far above its
	// nodes a quantity may rise between them, in their magnitudes. All four were set by
	// comparison with slabs solved between the nodes of coarse grids.
	doubtful = 0.4
	hopeless = 0.6
	steep    = 1.6
	peak     = 10
)

// errors sets next to the bounds after a lane: those of the data through the
// weights, rounding, and the estimates of the interpolation error.
func (x *tensor) errors(l *lane, out []float64, lines [2]int) {
	if l.n > 2 {
		x.compare(l, out, lines)
	}
	all := x.shared()
	for f := range x.count {
		r := &x.rules[f]
		s := l.scheme(r.kind)
		worst := 0.0
		for i, at := range lines {
			switch {
			case s.nodes > 2:
				worst = max(worst, x.apart[f][i].estimate(s, &all), x.unresolved(l, f, s, &all, at))
			default:
				worst = max(worst, x.pair(l, r, s, out[at*x.count+f], at))
			}
		}
		x.next[f] = x.through(x.noise, r, s) + worst
		x.lower[f] = x.through(x.floor, r, s)
	}
}

// compare fills in the differences and the rates of all quantities.
func (x *tensor) compare(l *lane, out []float64, lines [2]int) {
	for f := range x.count {
		r := &x.rules[f]
		s := l.scheme(r.kind)
		noise := 2 * x.through(x.floor, r, s)
		x.own[f] = 0
		for i, at := range lines {
			d := &x.apart[f][i]
			if i > 0 && at == lines[0] {
				*d = x.apart[f][0]
				continue
			}
			*d = differences{}
			clear := differences{} // of noise
			for k := 1; k <= min(levels, s.nodes-1); k++ {
				d[k-1] = math.Abs(out[at*x.count+f] - x.sum(l, r, s.w[k][:], s.nodes-k, s.data, at))
				clear[k-1] = max(0, d[k-1]-noise)
			}
			x.own[f] = max(x.own[f], root(clear.rate(s), s.data))
		}
	}
}

// shared is what the quantities on a lane have in common, as rates per datum:
// the larger of neff and ng, and of those without derivatives the second
// largest, since the largest may be an accident, and the median.
type shared struct{ index, second, median float64 }

func (x *tensor) shared() (all shared) {
	x.sorted = x.sorted[:0]
	for f := range x.count {
		switch r := x.own[f]; {
		case x.missing[f] || r == 0:
		case f == fNeff || f == fNg:
			all.index = max(all.index, r)
		case x.rules[f].kind == plain:
			x.sorted = append(x.sorted, r)
		}
	}
	slices.Sort(x.sorted)
	if n := len(x.sorted); n > 1 {
		all.second, all.median = x.sorted[n-2], x.sorted[(n-1)/2]
	}
	return all
}

// rate is the quotient of divided differences of successive orders, a node's data taken
// as one order, in units of the lane's spacing.
func (d *differences) rate(s *scheme) float64 {
	n := s.nodes
	switch n {
	case 3:
		return quotient(d[0], d[1]*s.far[1])
	case 4:
		return max(math.Sqrt(quotient(d[0], d[2]*s.far[2]*s.far[1])), quotient(d[1], d[2]*s.far[1]))
	}
	return math.Sqrt(max(quotient(d[0], d[2]*s.far[n-2]*s.far[n-3]), quotient(d[1], d[3]*s.far[n-3]*s.far[n-4])))
}

// estimate is the error of the interpolant, three nodes or more.
func (d *differences) estimate(s *scheme, all *shared) float64 {
	rate := d.rate(s)
	switch {
	case s.data == 1 && s.nodes == 3:
		rate = max(rate, all.index, all.second, least)
	case s.data == 1:
		rate = max(rate, all.index, all.median)
	case s.nodes == 3:
		rate = max(rate, power(max(all.index, all.median), s.data))
	default:
		rate = max(rate, power(all.median, s.data))
	}
	worst, gain := 0.0, 1.0
	for k := range min(3, s.nodes-1) {
		gain *= min(1, rate*s.far[s.nodes-1-k])
		worst = max(worst, d[k]*gain)
	}
	return safety * worst
}

// unresolved is what the estimate must not be below where the rates say that more nodes
// hardly help, as across an anti-crossing narrower than a cell: neff and ng may then lie anywhere between
// their neighbours, kappa likewise, and the others, which peak where neff bends, above all of them. Where the grid
// resolves the surface, the powers make it vanish against the estimate.
func (x *tensor) unresolved(l *lane, f int, s *scheme, all *shared, at int) float64 {
	rate := max(all.index, all.median)
	lo, hi := x.span(l, f, at)
	if f == fNeff || f == fNg {
		return (hi - lo) * math.Pow(min(1, steep*rate), float64(3*(s.data*s.nodes-1)))
	}
	share := min(1, max(0, (rate-doubtful)/(hopeless-doubtful)))
	size := hi - lo
	if f != fKappa {
		size += peak * max(math.Abs(lo), math.Abs(hi))
	}
	return share * share * share * size
}

// span is the range of a quantity at the four nearest nodes of a line.
func (x *tensor) span(l *lane, f, at int) (lo, hi float64) {
	line := x.values[at*l.n*x.count:]
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, p := range l.near[:min(4, l.n)] {
		v := line[p*x.count+f]
		lo, hi = min(lo, v), max(hi, v)
	}
	return lo, hi
}

// pair is the estimate between two nodes. With derivatives the straight line and the
// nearest node's Taylor polynomial against the value give the curvature, the curvature against the rise the
// rate. Without, nothing is known but the rise: the bound is that and a share of the value.
func (x *tensor) pair(l *lane, r *rule, s *scheme, full float64, at int) float64 {
	line := x.values[at*l.n*x.count:]
	a, b := line[r.from[0]], line[x.count+r.from[0]]
	rise := math.Abs(a - b)
	if s.data == 1 {
		share := sharePair
		if r.from[0] == fNeff || r.from[0] == fNg {
			share = shareIndex
		}
		return rise + share*max(math.Abs(a), math.Abs(b))
	}
	bend := max(math.Abs(full-x.sum(l, r, s.line[:], 2, 1, at)), math.Abs(full-x.sum(l, r, s.w[1][:], 1, s.data, at)))
	return safety * bend * max(min(1, quotient(bend, rise)), leastPair)
}

func power(v float64, n int) float64 {
	p := v
	for range n - 1 {
		p *= v
	}
	return p
}

func root(v float64, n int) float64 {
	switch n {
	case 1:
		return v
	case 2:
		return math.Sqrt(v)
	case 3:
		return math.Cbrt(v)
	}
	return math.Sqrt(math.Sqrt(v))
}

// quotient is a/b, 0 where both vanish.
func quotient(a, b float64) float64 {
	if a == 0 {
		return 0
	}
	return a / b
}
