package channel

import (
	"math"

	"betaloom/solvers/internal/ldl"
)

// The functions of a cell, from integrated Legendre polynomials H_a (two
// linear ones, then H_a with a derivative L_a of unit norm, L_a the Legendre polynomial of degree a-1):
//
//	z(a,b) = H_a(x) H_b(y)    e_z
//	x(a,b) = L_a(x) H_b(y)    e_x, a >= 1
//	y(a,b) = H_a(x) L_b(y)    e_y, b >= 1
//
// In a straight cell the two linear ones are taken as their sum and difference
// (modal), so that the functions fall into four classes by parity that do not see each other.
type kind uint8

const (
	kindZ kind = iota
	kindX
	kindY
)

type function struct {
	kind kind
	a, b int
}

// inner says whether a function is zero, or has no tangential part, on all four sides.
func (f function) inner() bool {
	switch f.kind {
	case kindX:
		return f.b >= 2
	case kindY:
		return f.a >= 2
	}
	return f.a >= 2 && f.b >= 2
}

// functions lists those of orders px, py.
func functions(px, py int) (f []function) {
	for b := 0; b <= py; b++ {
		for a := 0; a <= px; a++ {
			f = append(f, function{kindZ, a, b})
			if a >= 1 {
				f = append(f, function{kindX, a, b})
			}
			if b >= 1 {
				f = append(f, function{kindY, a, b})
			}
		}
	}
	return f
}

// term is one of the pieces that a straight cell's matrices are sums of.
type term uint8

const (
	termCurl  term = iota // curl e . curl f
	termX                 // e_x f_x
	termY                 // e_y f_y
	termGradX             // e_x df_z/dx and its mirror image, de_z/dx df_z/dx
	termGradY             // the same in y
	termZ                 // e_z f_z
	terms
)

// entry is one number of a class's lower triangle: value times the cell's factor of the term.
type entry[T ldl.Number] struct {
	row, col int32
	term     term
	value    T
}

// end ties a function on the outline to one of the cell's skeleton unknowns.
type end[T ldl.Number] struct {
	at    int32
	value T
}

// class is a set of functions of one cell that see only each other, the inner ones first.
type class[T ldl.Number] struct {
	inner   int
	list    []function
	ends    [][]end[T] // of the functions after the inner ones
	entries []entry[T] // of straight cells
}

func (c *class[T]) size() int { return len(c.list) }

// orders are those of a cell.
type orders struct{ px, py int }

// skeleton and inner count the unknowns of a cell on its outline and inside.
func (o orders) skeleton() int { return 4 + 2*(2*o.px-1) + 2*(2*o.py-1) }
func (o orders) inner() int {
	return (o.px-1)*(o.py-1) + o.px*(o.py-1) + (o.px-1)*o.py
}

// place numbers the skeleton unknowns of a cell: four corners, then the lower, upper,
// left and right edges, on each the tangential functions before those of e_z. sx, sy are the sides (0, 1).
func (o orders) place(f function, sx, sy int) int {
	lower := 4 + sy*(2*o.px-1)
	left := 4 + 2*(2*o.px-1) + sx*(2*o.py-1)
	switch {
	case f.kind == kindX:
		return lower + f.a - 1
	case f.kind == kindY:
		return left + f.b - 1
	case f.a < 2 && f.b < 2:
		return sx + 2*sy
	case f.b < 2:
		return lower + o.px + f.a - 2
	}
	return left + o.py + f.b - 2
}

// shape is the reference cell of two orders: four classes where it is straight, one where it is mapped.
type shape[T ldl.Number] struct {
	orders
	straight []*class[T]
	mapped   []*class[T]
}

func newShape[T ldl.Number](o orders) *shape[T] {
	s := &shape[T]{orders: o}
	sorted := make([][]function, 4)
	for _, f := range functions(o.px, o.py) {
		k := f.a%2 + 2*(f.b%2)
		sorted[k] = append(sorted[k], f)
	}
	mx, my := modalMass(o.px), modalMass(o.py)
	whole := &class[T]{inner: o.inner()}
	var outline []function
	for _, list := range sorted {
		c := &class[T]{}
		inner, outer := part(list)
		c.list, c.inner = append(inner, outer...), len(inner)
		for _, f := range outer {
			c.ends = append(c.ends, modalEnds[T](o, f))
			whole.ends = append(whole.ends, []end[T]{{int32(o.place(f, f.a, f.b)), 1}})
		}
		whole.list = append(whole.list, inner...)
		outline = append(outline, outer...)
		c.entries = entries[T](c.list, mx, my)
		s.straight = append(s.straight, c)
	}
	whole.list = append(whole.list, outline...)
	s.mapped = []*class[T]{whole}
	return s
}

// part splits functions into inner ones and those on the outline.
func part(list []function) (inner, outer []function) {
	for _, f := range list {
		if f.inner() {
			inner = append(inner, f)
		} else {
			outer = append(outer, f)
		}
	}
	return inner, outer
}

// modalEnds splits a modal function into the functions of the sides.
func modalEnds[T ldl.Number](o orders, f function) (e []end[T]) {
	along := func(n int) (sides []float64) {
		switch n {
		case 0:
			return []float64{math.Sqrt2 / 2, math.Sqrt2 / 2}
		case 1:
			return []float64{-math.Sqrt2 / 2, math.Sqrt2 / 2}
		}
		return []float64{1}
	}
	xs, ys := along(f.a), along(f.b)
	if f.kind == kindX {
		xs = []float64{1}
	}
	if f.kind == kindY {
		ys = []float64{1}
	}
	for sy, v := range ys {
		for sx, u := range xs {
			e = append(e, end[T]{int32(o.place(f, sx, sy)), fromReal[T](u * v)})
		}
	}
	return e
}

// entries forms the terms of one class. Orthonormal derivatives leave few numbers.
func entries[T ldl.Number](list []function, mx, my [][]float64) (e []entry[T]) {
	for r, f := range list {
		for c, g := range list[:r+1] {
			for t, v := range products(f, g, mx, my) {
				if v != 0 {
					e = append(e, entry[T]{int32(r), int32(c), term(t), fromReal[T](v)})
				}
			}
		}
	}
	return e
}

// products gives the terms of two modal functions on the reference square. The gradient of
// z(a,b) is x(a,b) along x (for a >= 1) and y(a,b) along y (for b >= 1).
func products(f, g function, mx, my [][]float64) (p [terms]float64) {
	alongX := f.kind != kindY && g.kind != kindY && f.a == g.a && f.a >= 1
	alongY := f.kind != kindX && g.kind != kindX && f.b == g.b && f.b >= 1
	switch {
	case f.kind == kindZ && g.kind == kindZ:
		p[termZ] = mx[f.a][g.a] * my[f.b][g.b]
	case f.kind == kindX && g.kind == kindX:
		if f.a == g.a {
			p[termX] = my[f.b][g.b]
		}
		alongX = false
	case f.kind == kindY && g.kind == kindY:
		if f.b == g.b {
			p[termY] = mx[f.a][g.a]
		}
		alongY = false
	}
	if alongX {
		p[termGradX] = my[f.b][g.b]
	}
	if alongY {
		p[termGradY] = mx[f.a][g.a]
	}
	if f.kind != kindZ && g.kind != kindZ && f.a == g.a && f.b == g.b && f.a >= 1 && f.b >= 1 {
		p[termCurl] = 1
		if f.kind != g.kind {
			p[termCurl] = -1
		}
	}
	return p
}

// modalMass is the mass matrix of H_0 .. H_p on [-1, 1] with the modal linear functions.
func modalMass(p int) [][]float64 {
	x, w := gauss(p + 2)
	m := make([][]float64, p+1)
	for a := range m {
		m[a] = make([]float64, p+1)
	}
	for q, at := range x {
		h, _ := legendre(p, at)
		h[0], h[1] = (h[0]+h[1])*math.Sqrt2/2, (h[1]-h[0])*math.Sqrt2/2
		for a := range m {
			for b := range m {
				if (a+b)%2 == 0 {
					m[a][b] += w[q] * h[a] * h[b]
				}
			}
		}
	}
	for a := range m {
		for b := range m { // H_a is a difference of P_a and P_(a-2): no others meet
			if a >= 2 && b >= 2 && max(a-b, b-a) > 2 || min(a, b) < 2 && max(a, b) > 3 {
				m[a][b] = 0
			}
		}
	}
	return m
}

// legendre gives H_0 .. H_p (the linear ones nodal) and L_1 .. L_p (at their index) at x.
func legendre(p int, x float64) (h, l []float64) {
	h, l = make([]float64, p+1), make([]float64, p+1)
	h[0], h[1] = (1-x)/2, (1+x)/2
	before, now := 1.0, x // P_(a-2), P_(a-1)
	l[1] = math.Sqrt2 / 2
	for a := 2; a <= p; a++ {
		n := float64(a)
		next := ((2*n-1)*x*now - (n-1)*before) / n
		h[a] = (next - before) / math.Sqrt(2*(2*n-1))
		l[a] = math.Sqrt((2*n-1)/2) * now
		before, now = now, next
	}
	return h, l
}
