package surface

// tensor is the quantities at the nodes of a window: count a node, the lane
// that collapses first varying fastest. Beside the values stand, by
// quantity, the bound so far (noise), the largest magnitude, and whether the
// quantity or its bound is missing.
type tensor struct {
	count   int
	values  []float64
	spare   []float64
	noise   []float64
	floor   []float64 // the part of noise that is the nodes' own bounds and rounding
	next    []float64
	lower   []float64 // floor as next is noise
	scale   []float64
	missing []bool
	unbound []bool

	rules  []rule           // of the lane in hand
	plain  []int            // the quantities among them without derivatives
	apart  [][2]differences // by quantity and line
	own    []float64        // rates, by quantity
	sorted []float64
}

func newTensor(count int) *tensor {
	return &tensor{
		count: count, noise: make([]float64, count), floor: make([]float64, count), lower: make([]float64, count), next: make([]float64, count),
		scale: make([]float64, count), missing: make([]bool, count), unbound: make([]bool, count),
		rules: make([]rule, count), apart: make([][2]differences, count), own: make([]float64, count),
	}
}

// rounding bounds the relative error of one collapse's sums.
const rounding = 16 * 0x1p-53

// collapse interpolates along a lane; rest is how many nodes of the window
// remain, and lines are two of them, nearest to the point, where the error is estimated.
func (x *tensor) collapse(l *lane, rules []rule, rest int, lines [2]int) {
	if l.n == 1 {
		return
	}
	out := x.spare[:rest*x.count]
	x.plain = x.plain[:0]
	for f := range x.count {
		r := x.usable(rules[f], f)
		x.rules[f] = r
		if r.kind == plain {
			x.plain = append(x.plain, f)
			continue
		}
		s := l.scheme(r.kind)
		for at := range rest {
			out[at*x.count+f] = x.sum(l, &r, s.w[0][:], s.nodes, s.data, at)
		}
	}
	for at := range rest {
		x.plainly(l, out[at*x.count:(at+1)*x.count], at)
	}
	x.errors(l, out, lines)
	x.values, x.spare = out, x.values[:cap(x.values)]
	x.noise, x.next = x.next, x.noise
	x.floor, x.lower = x.lower, x.floor
}

// plainly is sum for all quantities without derivatives at once.
func (x *tensor) plainly(l *lane, out []float64, at int) {
	s := l.scheme(plain)
	for _, f := range x.plain {
		out[f] = 0
	}
	line := x.values[at*l.n*x.count:]
	for i, p := range l.near[:l.n] {
		node, w := line[p*x.count:(p+1)*x.count], s.w[0][i]
		for _, f := range x.plain {
			out[f] += w * node[f]
		}
	}
}

// usable falls back to plain where a datum of the rule is missing.
func (x *tensor) usable(r rule, f int) rule {
	for _, from := range r.from[:r.kind.data()] {
		if x.missing[from] {
			return rule{kind: plain, from: [4]int{f}}
		}
	}
	return r
}

// sum applies weights to the nearest nodes of a line.
func (x *tensor) sum(l *lane, r *rule, w []float64, nodes, data, at int) float64 {
	total := 0.0
	line := x.values[at*l.n*x.count:]
	for i, p := range l.near[:nodes] {
		base := p * x.count
		total += w[i*data] * line[base+r.from[0]]
		for j := 1; j < data; j++ {
			total += w[i*data+j] * line[base+r.from[j]]
		}
	}
	return total
}

// through is the bound of the data through the weights, with rounding.
func (x *tensor) through(noise []float64, r *rule, s *scheme) float64 {
	bound := 0.0
	for j, from := range r.from[:s.data] {
		bound += s.sums[j] * (noise[from] + rounding*x.scale[from])
	}
	return bound
}
