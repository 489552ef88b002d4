package channel

import (
	"math"

	"betaloom/solvers/internal/ldl"
)

// A cell between two level lines is mapped by x = left(v)(1-u)/2 + right(v)(1+u)/2
// with both ends linear in v. Then dx/du =: g depends on v only, dx/dv =: c on u only, and
// the pulled-back integrals
//
//	curl e curl f     1/(g h)
//	e_x f_x           eps_x h/g on the u components
//	e_y f_y           eps_y (c^2/(g h) uu - c/h (uv + vu) + g/h vv)
//	e_z f_z           eps_z g h
//
// (h = dy/dv; covariant Piola map) are sums of products of two one-dimensional ones.

// factors is one-dimensional functions at quadrature points: H_0 .. H_p nodal, then L_1 .. L_p, then the derivatives of H.
type factors struct {
	p      int
	values [][]float64 // [function][point]
	x, w   []float64

	powers [3][][]float64 // integrals with the weights 1, x, x^2, made when first needed
}

func (f *factors) h(a int) int { return a }
func (f *factors) l(a int) int { return f.p + a }
func (f *factors) d(a int) int { return 2*f.p + 1 + a }

func newFactors(p, points int) *factors {
	f := &factors{p: p, values: make([][]float64, 3*p+2)}
	f.x, f.w = gauss(points)
	for i := range f.values {
		f.values[i] = make([]float64, points)
	}
	for q, at := range f.x {
		h, l := legendre(p, at)
		for a := range p + 1 {
			f.values[f.h(a)][q] = h[a]
			f.values[f.d(a)][q] = l[a]
			if a > 0 {
				f.values[f.l(a)][q] = l[a]
			}
		}
		f.values[f.d(0)][q], f.values[f.d(1)][q] = -0.5, 0.5
	}
	return f
}

// gram gives all integrals of two functions and a weight.
func (f *factors) gram(weight func(x float64) float64) [][]float64 {
	m := make([][]float64, len(f.values))
	w := make([]float64, len(f.x))
	for q, x := range f.x {
		w[q] = f.w[q] * weight(x)
	}
	for i := range m {
		m[i] = make([]float64, len(m))
		for j := range i + 1 {
			sum := 0.0
			for q := range w {
				sum += w[q] * f.values[i][q] * f.values[j][q]
			}
			m[i][j], m[j][i] = sum, sum
		}
	}
	return m
}

// polynomial gives all integrals with the weight a + b x + c x^2.
func (f *factors) polynomial(a, b, c float64) [][]float64 {
	for k := range f.powers {
		if f.powers[k] == nil {
			f.powers[k] = f.gram(func(x float64) float64 { return math.Pow(x, float64(k)) })
		}
	}
	if b == 0 && c == 0 && a == 1 {
		return f.powers[0]
	}
	m := make([][]float64, len(f.values))
	numbers := make([]float64, len(m)*len(m))
	for i := range m {
		m[i] = numbers[i*len(m) : (i+1)*len(m)]
		one, x, xx := f.powers[0][i], f.powers[1][i], f.powers[2][i]
		for j := range m[i] {
			m[i][j] = a*one[j] + b*x[j] + c*xx[j]
		}
	}
	return m
}

// pull is the one-dimensional integrals of a mapped cell.
type pull struct {
	fx, fy       *factors
	h            float64
	u1, uc, uc2  [][]float64 // weights 1, c, c^2
	vInv, v1, vg [][]float64 // weights 1/g, 1, g
}

// mostExtra bounds the points beyond those of a polynomial; with ends in the ratio 40 it does not yet.
const mostExtra = 60

// extra is the number of points beyond those of a polynomial that integrate the weight 1/g to rounding: the
// error falls as rho^(-2 points), rho the ellipse around [-1, 1] that reaches the pole (Trefethen, Approximation Theory
// and Approximation Practice, chapter 19).
func extra(g0, g1 float64) int {
	if g0 == g1 {
		return 1
	}
	pole := math.Abs((g1 + g0) / (g1 - g0))
	rho := pole + math.Sqrt(pole*pole-1)
	return int(min(math.Ceil(37/(2*math.Log(rho))), mostExtra-1)) + 1
}

func newPull(t *Topology, o orders, q quadrilateral) *pull {
	points := o.py + 1 + extra(q.right[0]-q.left[0], q.right[1]-q.left[1])
	p := &pull{fx: t.table(o.px, o.px+2), fy: t.table(o.py, points), h: q.height / 2}
	low, high := q.right[0]-q.left[0], q.right[1]-q.left[1]
	g0, g1 := (high+low)/4, (high-low)/4 // g = g0 + g1 v
	dl, dr := (q.left[1]-q.left[0])/2, (q.right[1]-q.right[0])/2
	c0, c1 := (dr+dl)/2, (dr-dl)/2 // c = c0 + c1 u
	p.u1, p.uc, p.uc2 = p.fx.polynomial(1, 0, 0), p.fx.polynomial(c0, c1, 0), p.fx.polynomial(c0*c0, 2*c0*c1, c1*c1)
	p.vInv = p.fy.gram(func(v float64) float64 { return 1 / (g0 + g1*v) })
	p.v1, p.vg = p.fy.polynomial(1, 0, 0), p.fy.polynomial(g0, g1, 0)
	return p
}

// product is a product of two one-dimensional functions; no is none at all.
type product struct {
	x, y int
	no   bool
}

// parts are the components of a function: along u, along v, as e_z, and the sign and factors of its curl.
type parts struct {
	u, v, z, curl product
	sign          float64
}

func (p *pull) parts(f function) parts {
	x, y, no := p.fx, p.fy, product{no: true}
	switch f.kind {
	case kindX:
		return parts{u: product{x.l(f.a), y.h(f.b), false}, v: no, z: no, curl: product{x.l(f.a), y.d(f.b), false}, sign: -1}
	case kindY:
		return parts{u: no, v: product{x.h(f.a), y.l(f.b), false}, z: no, curl: product{x.d(f.a), y.l(f.b), false}, sign: 1}
	}
	return parts{u: product{x.d(f.a), y.h(f.b), false}, v: product{x.h(f.a), y.d(f.b), false},
		z: product{x.h(f.a), y.h(f.b), false}, curl: no}
}

func times(f, g product, mx, my [][]float64) float64 {
	if f.no || g.no {
		return 0
	}
	return mx[f.x][g.x] * my[f.y][g.y]
}

// mappedMatrices gives A and B of a mapped cell.
func mappedMatrices[T ldl.Number](t *Topology, s *shape[T], q quadrilateral, eps [3]T) (a, b []T) {
	p := newPull(t, s.orders, q)
	list := s.mapped[0].list
	n := len(list)
	all := make([]parts, n)
	for i, f := range list {
		all[i] = p.parts(f)
	}
	a, b = make([]T, n*n), make([]T, n*n)
	for i := range n {
		for j := range i + 1 {
			f, g := &all[i], &all[j]
			x := p.h * times(f.u, g.u, p.u1, p.vInv)
			y := times(f.u, g.u, p.uc2, p.vInv) - times(f.u, g.v, p.uc, p.v1) - times(f.v, g.u, p.uc, p.v1) + times(f.v, g.v, p.u1, p.vg)
			y /= p.h
			b[i*n+j] = fromReal[T](x+y) - eps[2]*fromReal[T](p.h*times(f.z, g.z, p.u1, p.vg))
			if f.z.no && g.z.no {
				curl := f.sign * g.sign * times(f.curl, g.curl, p.u1, p.vInv) / p.h
				a[i*n+j] = fromReal[T](curl) - eps[0]*fromReal[T](x) - eps[1]*fromReal[T](y)
			}
		}
	}
	return a, b
}
