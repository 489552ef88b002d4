package channel

import "betaloom/solvers/internal/ldl"

// ruled is the tables of one cell's functions at the points of a quadrature rule, and the cell's geometry there.
type ruled struct {
	fx, fy *factors
	g, c   []float64 // half width at each row of points, half shift at each column
	h      float64   // half height
}

// rule gives a cell's tables; positions are in the units of q. They are kept with the topology.
func (t *Topology) rule(o orders, q quadrilateral) *ruled {
	r := &ruled{
		fx: t.table(o.px, o.px+2), h: q.height / 2,
		fy: t.table(o.py, o.py+1+extra(q.right[0]-q.left[0], q.right[1]-q.left[1])),
	}
	ny := len(r.fy.x)
	room := make([]float64, ny+len(r.fx.x))
	r.g, r.c = room[:0:ny], room[ny:ny]
	for _, v := range r.fy.x {
		r.g = append(r.g, ((q.right[0]-q.left[0])*(1-v)+(q.right[1]-q.left[1])*(1+v))/4)
	}
	dl, dr := (q.left[1]-q.left[0])/2, (q.right[1]-q.right[0])/2
	for _, u := range r.fx.x {
		r.c = append(r.c, (dl*(1-u)+dr*(1+u))/2)
	}
	return r
}

func (t *Topology) table(p, points int) *factors {
	key := [2]int{p, points}
	if t.tables[key] == nil {
		t.tables[key] = newFactors(p, points)
	}
	return t.tables[key]
}

// field is what a vector stands for in one cell, at the points of a rule (row by row), in
// the cell's own coordinates: the components of e and of s = e + grad e_z along u and v, e_z and curl e.
type field[T ldl.Number] struct {
	eu, ev, su, sv, z, curl []T
}

// evaluator turns vectors into fields and back; it keeps work space.
type evaluator[T ldl.Number] struct {
	t     *Topology
	coef  [3][]T // of each kind: rows b of columns a
	half  []T
	wide  int // columns of coef
	lists map[orders]*class[T]
}

func newEvaluator[T ldl.Number](t *Topology, kit *kit[T]) *evaluator[T] {
	v := &evaluator[T]{t: t, lists: map[orders]*class[T]{}}
	for o, s := range kit.shapes {
		v.lists[o] = s.mapped[0]
	}
	return v
}

// at gives the index in a vector of function i of a cell; -1 on a wall. Straight and mapped cells have the same inner functions.
func (v *evaluator[T]) at(c *cell, k *class[T], i int) int {
	if i < k.inner {
		return c.start + i
	}
	return int(c.skel[k.ends[i-k.inner][0].at])
}

// gather reads a cell's coefficients.
func (v *evaluator[T]) gather(c *cell, x []T) {
	v.clear(c)
	k := v.lists[c.orders]
	for i, f := range k.list {
		if at := v.at(c, k, i); at >= 0 {
			v.coef[f.kind][f.b*v.wide+f.a] = x[at]
		}
	}
}

func (v *evaluator[T]) clear(c *cell) {
	v.wide = c.px + 1
	for i := range v.coef {
		v.coef[i] = grow(v.coef[i], v.wide*(c.py+1))
		clear(v.coef[i])
	}
}

// scatter adds a cell's coefficients to a vector.
func (v *evaluator[T]) scatter(c *cell, x []T) {
	k := v.lists[c.orders]
	for i, f := range k.list {
		if at := v.at(c, k, i); at >= 0 {
			x[at] += v.coef[f.kind][f.b*v.wide+f.a]
		}
	}
}

// evaluate fills the fields of x in cell c.
func (v *evaluator[T]) evaluate(c *cell, r *ruled, x []T, f *field[T]) {
	v.gather(c, x)
	n := len(r.fx.x) * len(r.fy.x)
	for _, s := range []*[]T{&f.eu, &f.ev, &f.su, &f.sv, &f.z, &f.curl} {
		*s = grow(*s, n)
		clear(*s)
	}
	fx, fy := r.fx, r.fy
	v.along(fx, fx.l, kindX)
	v.across(fy, fy.h, f.eu, 1, 0)
	v.across(fy, fy.d, f.curl, -1, 0)
	v.along(fx, fx.h, kindY)
	v.across(fy, fy.l, f.ev, 1, 1)
	v.along(fx, fx.d, kindY)
	v.across(fy, fy.l, f.curl, 1, 1)
	copy(f.su, f.eu)
	copy(f.sv, f.ev)
	v.along(fx, fx.h, kindZ)
	v.across(fy, fy.h, f.z, 1, 0)
	v.across(fy, fy.d, f.sv, 1, 0)
	v.along(fx, fx.d, kindZ)
	v.across(fy, fy.h, f.su, 1, 0)
}

// along contracts the functions of x: half has a row of points for each b.
func (v *evaluator[T]) along(fx *factors, row func(int) int, k kind) {
	points := len(fx.x)
	rows := len(v.coef[k]) / v.wide
	v.half = grow(v.half, rows*points)
	clear(v.half)
	for b := range rows {
		out := v.half[b*points : (b+1)*points]
		for a, c := range v.coef[k][b*v.wide : (b+1)*v.wide] {
			if c != 0 {
				accumulate(out, fx.values[row(a)], c)
			}
		}
	}
}

// across contracts the functions of y from b = first on, adding sign times the result to out.
func (v *evaluator[T]) across(fy *factors, row func(int) int, out []T, sign float64, first int) {
	points := len(out) / len(fy.x)
	rows := len(v.half) / points
	for b := first; b < rows; b++ {
		in := v.half[b*points : (b+1)*points]
		for r, w := range fy.values[row(b)] {
			if w != 0 {
				add(out[r*points:(r+1)*points], in, fromReal[T](sign*w))
			}
		}
	}
}

// accumulate adds c times real numbers.
func accumulate[T ldl.Number](y []T, x []float64, c T) {
	switch y := any(y).(type) {
	case []float64:
		c, _ := any(c).(float64)
		add(y, x, c)
	case []complex128:
		c, _ := any(c).(complex128)
		x = x[:len(y)]
		for i := range y {
			y[i] += complex(x[i]*real(c), x[i]*imag(c))
		}
	}
}
