package surface

import (
	"math"

	"betaloom/schema"
)

// kind says which interpolant a quantity has along an axis: which derivatives
// of it are known at the nodes, and as which columns.
type kind int

const (
	plain      kind = iota // none
	slope                  // along a parameter: the first, its sensitivity
	alongNeff              // along frequency, from neff, ng, GVD, beta3: the first three
	alongNg                // from ng, GVD, beta3: the first two
	alongGVD               // from GVD, beta3: the first
	alongSlope             // of dneff/dp, from dneff/dp and dng/dp: the first
	kinds
)

// data counts the numbers a node gives: the value and the derivatives.
func (k kind) data() int { return [kinds]int{1, 2, 4, 3, 2, 2}[k] }

// rule says how a quantity is interpolated along an axis: the interpolant
// and the quantities that are its data.
type rule struct {
	kind kind
	from [4]int
}

// rules lists, for one axis, the rule of each quantity: neff, ng, GVD, beta3,
// kappa, then every dneff/dp and every dng/dp.
func (a *axis) rules(sensitivities int) []rule {
	list := make([]rule, fErr+2*sensitivities)
	for f := range list {
		list[f] = rule{kind: plain, from: [4]int{f}}
	}
	first := fErr // of the dneff/dp; the dng/dp follow
	switch {
	case a.slopes:
		list[fNeff] = rule{alongNeff, [4]int{fNeff, fNg, fGVD, fBeta3}}
		list[fNg] = rule{alongNg, [4]int{fNg, fGVD, fBeta3}}
		list[fGVD] = rule{alongGVD, [4]int{fGVD, fBeta3}}
		for k := range sensitivities {
			list[first+k] = rule{alongSlope, [4]int{first + k, first + sensitivities + k}}
		}
	case a.parameter >= 0:
		list[fNeff] = rule{slope, [4]int{fNeff, first + a.parameter}}
		list[fNg] = rule{slope, [4]int{fNg, first + sensitivities + a.parameter}}
	}
	return list
}

// scheme is the interpolant of one kind at one value of an axis: weights for
// the nearest nodes, as many as it uses and as few as the estimate asks for.
type scheme struct {
	ready bool
	data  int // numbers a node gives
	nodes int // nearest nodes it uses
	w     [levels + 1][slopeNodes * 4]float64
	far   [most]float64 // distances of the nearest nodes to the power data, in spacings
	line  [2]float64    // two nodes, derivatives unused; with nodes == 2 only
	sums  [4]float64    // sum over nodes of |w[0]|, by datum
}

// lane is the window of one axis: its nodes from the nearest to the value.
type lane struct {
	axis    *axis
	cell    cell
	lo, n   int
	near    [most]int     // positions in the window, nearest first
	t       [most]float64 // their coordinates
	schemes [kinds]scheme
}

// prepare orders the nodes of the window by their distance.
func (l *lane) prepare() {
	for i := range l.n {
		t := l.axis.t[l.lo+i]
		j := i
		for j > 0 && math.Abs(l.t[j-1]-l.cell.t) > math.Abs(t-l.cell.t) {
			l.t[j], l.near[j] = l.t[j-1], l.near[j-1]
			j--
		}
		l.t[j], l.near[j] = t, i
	}
	for k := range l.schemes {
		l.schemes[k].ready = false
	}
}

// scheme gives the interpolant of a kind.
func (l *lane) scheme(k kind) *scheme {
	s := &l.schemes[k]
	if s.ready {
		return s
	}
	s.ready, s.data, s.nodes = true, k.data(), l.n
	if k != plain {
		s.nodes = min(l.n, slopeNodes)
	}
	for level := range min(levels+1, s.nodes) {
		l.weigh(k, s.nodes-level, s.w[level][:])
	}
	if s.nodes == 2 {
		hermite(l.t[:2], l.cell.t, 1, s.line[:])
	}
	spacing := math.Abs(l.t[1] - l.t[0])
	for i := range s.nodes {
		s.far[i] = power(math.Abs(l.t[i]-l.cell.t)/spacing, s.data)
	}
	s.sums = [4]float64{}
	for i := range s.nodes * s.data {
		s.sums[i%s.data] += math.Abs(s.w[0][i])
	}
	return s
}

// weigh sets w to the weights of the columns at the nearest nodes.
func (l *lane) weigh(k kind, nodes int, w []float64) {
	m := k.data()
	hermite(l.t[:nodes], l.cell.t, m, w)
	for i := range nodes {
		l.toColumns(k, l.t[i], w[i*m:i*m+m])
	}
}

// Units of the columns in SI: GVD in ps^2/km, beta3 in ps^3/km.
const (
	siGVD   = 1e-27
	siBeta3 = 1e-39
)

// toColumns turns weights of a value and its derivatives by the axis'
// coordinate into weights of the columns. With beta = n w/c and n(w) the effective index,
//
//	n' = (ng - n)/w,  n'' = (c beta2 - 2 n')/w,  n''' = (c beta3 - 3 n'')/w,
//	ng' = c beta2,  ng'' = c beta3.
func (l *lane) toColumns(k kind, w float64, u []float64) {
	const c = schema.LightSpeed
	switch k {
	case slope:
		u[1] *= l.axis.perSI
	case alongNeff:
		u[2] -= 3 * u[3] / w
		u[1] -= 2 * u[2] / w
		u[0] -= u[1] / w
		u[1], u[2], u[3] = u[1]/w, u[2]*c*siGVD/w, u[3]*c*siBeta3/w
	case alongNg:
		u[1], u[2] = u[1]*c*siGVD, u[2]*c*siBeta3
	case alongGVD:
		u[1] *= siBeta3 / siGVD
	case alongSlope:
		u[0] -= u[1] / w
		u[1] /= w
	}
}
