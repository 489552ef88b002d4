package channel

import (
	"betaloom/solvers/internal/kernel"
	"betaloom/solvers/internal/ldl"
	"betaloom/solvers/section"
)

// system is the pencil in units of 1/k, A + N B with N = L/k^2, real or
// complex. With the fields' unknowns as they are (circulations along edges,
// values at corners) it is the pencil of the package comment over k^2, and B is the same.
type system[T ldl.Number] struct {
	t      *Topology
	kit    *kit[T]
	cells  []local[T]
	weight []float64 // of each unknown: its diagonal in |A| + |B|
}

// local holds a cell's factors of the terms, or its whole matrices (rows, lower triangle) where it is mapped.
type local[T ldl.Number] struct {
	classes []*class[T]
	a, b    [terms]T
	ma, mb  []T
}

func newSystem[T ldl.Number](t *Topology, kit *kit[T], m *section.Mesh, k float64, eps [][3]T) *system[T] {
	s := &system[T]{t: t, kit: kit, cells: make([]local[T], len(t.cells))}
	for n, c := range t.cells {
		q, shape := corners(m, c.i, c.j, k), kit.shapes[c.orders]
		if q.straight() {
			s.cells[n] = straight(q, eps[c.medium])
			s.cells[n].classes = shape.straight
			continue
		}
		a, b := mappedMatrices(t, shape, q, eps[c.medium])
		s.cells[n] = local[T]{classes: shape.mapped, ma: a, mb: b}
	}
	s.weigh()
	return s
}

// quadrilateral has the left and right ends of its lower and upper edge, and its height, in units of 1/k.
type quadrilateral struct {
	left, right [2]float64
	height      float64
}

func corners(m *section.Mesh, i, j int, k float64) quadrilateral {
	lo, hi := m.X[j], m.X[j+1]
	o := lo[i] // positions from here: differences keep their digits
	return quadrilateral{
		left:   [2]float64{0, k * (hi[i] - o)},
		right:  [2]float64{k * (lo[i+1] - o), k * (hi[i+1] - o)},
		height: k * (m.Y[j+1] - m.Y[j]),
	}
}

// straight says whether it is a rectangle, to rounding.
func (q quadrilateral) straight() bool {
	const tiny = 1e-13
	w := tiny * (q.right[0] - q.left[0])
	d, e := q.left[1]-q.left[0], q.right[1]-q.right[0]
	return max(d, -d) <= w && max(e, -e) <= w
}

// straight gives the factors of a rectangle.
func straight[T ldl.Number](q quadrilateral, eps [3]T) (l local[T]) {
	w, h := q.right[0]-q.left[0], q.height
	x, y, z := fromReal[T](h/w), fromReal[T](w/h), fromReal[T](w*h/4)
	l.a[termCurl] = fromReal[T](4 / (w * h))
	l.a[termX], l.b[termX] = -eps[0]*x, x
	l.a[termY], l.b[termY] = -eps[1]*y, y
	l.b[termGradX], l.b[termGradY] = x, y
	l.b[termZ] = -eps[2] * z
	return l
}

// gather reads a class's values: the inner ones from x at inner, the others from the cell's skeleton.
func (k *class[T]) gather(dst, x []T, inner int, skel []int32) {
	copy(dst[:k.inner], x[inner:])
	for i, ends := range k.ends {
		var sum T
		for _, e := range ends {
			if at := skel[e.at]; at >= 0 {
				sum += e.value * x[at]
			}
		}
		dst[k.inner+i] = sum
	}
}

// scatter adds a class's values to those of the unknowns.
func (k *class[T]) scatter(x, src []T, inner int, skel []int32) {
	for i, v := range src[:k.inner] {
		x[inner+i] += v
	}
	k.scatterEnds(x, src[k.inner:], skel)
}

// scatterEnds adds the values of the outline functions.
func (k *class[T]) scatterEnds(x, src []T, skel []int32) {
	for i, ends := range k.ends {
		for _, e := range ends {
			if at := skel[e.at]; at >= 0 {
				x[at] += e.value * src[i]
			}
		}
	}
}

// multiply sets dst to (ca A + cb B) x.
func (s *system[T]) multiply(dst, x []T, ca, cb T) {
	clear(dst)
	var in, out []T
	for n := range s.cells {
		c, l := &s.t.cells[n], &s.cells[n]
		f := l.mix(ca, cb)
		at := c.start
		for _, k := range l.classes {
			in, out = grow(in, k.size()), grow(out, k.size())
			k.gather(in, x, at, c.skel)
			clear(out)
			switch {
			case l.ma != nil && ca == 0:
				scale(in, cb)
				symmetric(out, l.mb, in)
			case l.ma != nil:
				l.product(out, in, ca, cb)
			default:
				k.product(out, in, &f)
			}
			k.scatter(dst, out, at, c.skel)
			at += k.inner
		}
	}
}

// multiplyBoth sets da to A x and db to B x.
func (s *system[T]) multiplyBoth(da, db, x []T) {
	clear(da)
	clear(db)
	var in, a, b []T
	for n := range s.cells {
		c, l := &s.t.cells[n], &s.cells[n]
		at := c.start
		for _, k := range l.classes {
			in, a, b = grow(in, k.size()), grow(a, k.size()), grow(b, k.size())
			k.gather(in, x, at, c.skel)
			clear(a)
			clear(b)
			if l.ma != nil {
				symmetric(a, l.ma, in)
				symmetric(b, l.mb, in)
			} else {
				k.product(a, in, &l.a)
				k.product(b, in, &l.b)
			}
			k.scatter(da, a, at, c.skel)
			k.scatter(db, b, at, c.skel)
			at += k.inner
		}
	}
}

// symmetric adds the product of a lower triangle's matrix.
func symmetric[T ldl.Number](y, m, x []T) {
	n := len(x)
	for i, xi := range x {
		row := m[i*n : i*n+i]
		y[i] += kernel.Dot(row, x[:i]) + m[i*n+i]*xi
		kernel.Axpy(y[:i], row, xi)
	}
}

func grow[T any](b []T, n int) []T {
	if cap(b) < n {
		return make([]T, n)
	}
	return b[:n]
}

// mix gives the factors of ca A + cb B.
func (l *local[T]) mix(ca, cb T) (f [terms]T) {
	for t := range f {
		f[t] = ca*l.a[t] + cb*l.b[t]
	}
	return f
}

// product adds the product of a straight class's matrix.
func (k *class[T]) product(y, x []T, f *[terms]T) {
	for i := range k.entries {
		e := &k.entries[i]
		v := e.value * f[e.term]
		y[e.row] += v * x[e.col]
		if e.row != e.col {
			y[e.col] += v * x[e.row]
		}
	}
}

// product adds the product of a mapped cell's matrix.
func (l *local[T]) product(y, x []T, ca, cb T) {
	n := len(x)
	for i, xi := range x {
		a, b := l.ma[i*n:i*n+i], l.mb[i*n:i*n+i]
		lower, out := x[:i], y[:i]
		sum := (ca*l.ma[i*n+i] + cb*l.mb[i*n+i]) * xi
		for j, v := range a {
			w := ca*v + cb*b[j]
			sum += w * lower[j]
			out[j] += w * xi
		}
		y[i] += sum
	}
}

// weigh sets the weights.
func (s *system[T]) weigh() {
	s.weight = make([]float64, s.t.unknowns)
	for n := range s.cells {
		c, l := &s.t.cells[n], &s.cells[n]
		at := c.start
		for _, k := range l.classes {
			d := l.diagonal(k)
			for i, v := range d[:k.inner] {
				s.weight[at+i] += v
			}
			for i, ends := range k.ends {
				for _, e := range ends {
					if u := c.skel[e.at]; u >= 0 {
						s.weight[u] += ldl.Abs1(e.value*e.value) * d[k.inner+i]
					}
				}
			}
			at += k.inner
		}
	}
}

// diagonal gives that of |A| + |B|.
func (l *local[T]) diagonal(k *class[T]) []float64 {
	n := k.size()
	d := make([]float64, n)
	if l.ma != nil {
		for i := range n {
			d[i] = ldl.Abs1(l.ma[i*n+i]) + ldl.Abs1(l.mb[i*n+i])
		}
		return d
	}
	for _, e := range k.entries {
		if e.row == e.col {
			d[e.row] += ldl.Abs1(e.value) * (ldl.Abs1(l.a[e.term]) + ldl.Abs1(l.b[e.term]))
		}
	}
	return d
}
