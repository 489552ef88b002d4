package channel

import (
	"math"
	"math/cmplx"
	"sort"

	"gonum.org/v1/gonum/mat"

	"betaloom/solvers/internal/ldl"
	"betaloom/solvers/internal/ritz"
)

// project solves the pencil on the space of v: pairs from the highest Re N down, fewer where the
// vectors depend on each other.
func (fd *finder[T]) project(v [][]T) ([]pair[T], error) {
	v = independent(v)
	m := len(v)
	if m == 0 {
		return nil, nil
	}
	av, bv := make([][]T, m), make([][]T, m)
	for i, x := range v {
		av[i], bv[i] = make([]T, len(x)), make([]T, len(x))
		fd.s.multiplyBoth(av[i], bv[i], x)
	}
	a, b := make([][]complex128, m), make([][]complex128, m)
	for i := range m {
		a[i], b[i] = make([]complex128, m), make([]complex128, m)
		for j := range m {
			a[i][j], b[i][j] = -toComplex(bilinear(v[i], av[j])), toComplex(bilinear(v[i], bv[j]))
		}
	}
	y, err := coefficients[T](a, b)
	if err != nil {
		return nil, err
	}
	out := make([]pair[T], m)
	for i := range m {
		out[i] = fd.combine(v, av, bv, y, i)
	}
	sort.SliceStable(out, func(i, j int) bool { return realPart(out[i].n) > realPart(out[j].n) })
	return out, nil
}

// combine forms one pair of a projection and its residual.
func (fd *finder[T]) combine(v, av, bv [][]T, y [][]complex128, at int) pair[T] {
	p := pair[T]{x: make([]T, len(v[0])), bx: make([]T, len(v[0]))}
	ax := make([]T, len(v[0]))
	for i := range v {
		c := fromComplex[T](y[i][at])
		add(p.x, v[i], c)
		add(ax, av[i], c)
		add(p.bx, bv[i], c)
	}
	p.n = -bilinear(p.x, ax) / bilinear(p.x, p.bx)
	add(ax, p.bx, p.n)
	p.residual = fd.weighed(ax) / (fd.weighed(p.bx) * ldl.Abs1(p.n))
	return p
}

// weighed is the norm of a right-hand side that does not depend on the functions' scale.
func (fd *finder[T]) weighed(r []T) float64 {
	sum := 0.0
	for i, v := range r {
		a := ldl.Abs1(v)
		sum += a * a / fd.s.weight[i]
	}
	return math.Sqrt(sum)
}

// independent orthonormalises v, leaving out what depends on those before.
func independent[T ldl.Number](v [][]T) (out [][]T) {
	for _, x := range v {
		x = append([]T{}, x...)
		before := norm(x)
		for range 2 {
			for _, o := range out {
				add(x, o, -inner(o, x))
			}
		}
		if n := norm(x); n > 1e-10*before && !math.IsInf(n, 0) {
			scale(x, fromReal[T](1/n))
			out = append(out, x)
		}
	}
	return out
}

// coefficients solves the small pencil a y = N b y; y's columns are the vectors. Where b is real and positive
// definite, as for modes without loss, they are B-orthogonal whether the values repeat or not.
func coefficients[T ldl.Number](a, b [][]complex128) ([][]complex128, error) {
	if _, ok := any(*new(T)).(float64); ok {
		if y := definite(a, b); y != nil {
			return y, nil
		}
	}
	if y := rotated(a, b); y != nil {
		return y, nil
	}
	divide(b, a)
	_, y, err := ritz.Eigen(a)
	if err != nil {
		return nil, err
	}
	for i := range y {
		turn(y, i)
	}
	return y, nil
}

// rotated gives B-orthogonal coefficients by Jacobi's method with complex orthogonal rotations (no conjugates), which
// keeps the vectors of close values apart where an eigenvalue routine might give some with x'Bx near zero;
// nil where it does not settle (it need not, for such matrices).
func rotated(a, b [][]complex128) [][]complex128 {
	n := len(a)
	y := orthogonal(b)
	m := make([][]complex128, n)
	top := 0.0
	for i := range n {
		m[i] = make([]complex128, n)
		for j := range n {
			m[i][j] = form(y, a, i, j)
			top = max(top, cmplx.Abs(m[i][j]))
		}
	}
	for range 30 {
		off := 0.0
		for p := range n {
			for q := p + 1; q < n; q++ {
				off = max(off, cmplx.Abs(m[p][q]))
				jacobi(m, y, p, q)
			}
		}
		if off <= 1e-15*top {
			return y
		}
	}
	return nil
}

// jacobi turns columns p and q so that m[p][q] vanishes.
func jacobi(m, y [][]complex128, p, q int) {
	if m[p][q] == 0 {
		return
	}
	tau := (m[q][q] - m[p][p]) / (2 * m[p][q])
	r := cmplx.Sqrt(1 + tau*tau)
	if real(tau)*real(r)+imag(tau)*imag(r) < 0 {
		r = -r
	}
	t := 1 / (tau + r)
	c := 1 / cmplx.Sqrt(1+t*t)
	s := t * c
	for _, row := range y {
		row[p], row[q] = c*row[p]-s*row[q], s*row[p]+c*row[q]
	}
	for _, row := range m {
		row[p], row[q] = c*row[p]-s*row[q], s*row[p]+c*row[q]
	}
	rp, rq := m[p], m[q]
	for j := range rp {
		rp[j], rq[j] = c*rp[j]-s*rq[j], s*rp[j]+c*rq[j]
	}
}

// form is y_i' m y_j of two columns.
func form(y, m [][]complex128, i, j int) (sum complex128) {
	for r := range m {
		for c := range m {
			sum += y[r][i] * m[r][c] * y[c][j]
		}
	}
	return sum
}

// orthogonal gives columns with y_i' b y_j = 1 or 0, by Gram and Schmidt in the bilinear form, taking
// first what is farthest from being orthogonal to itself.
func orthogonal(b [][]complex128) [][]complex128 {
	n := len(b)
	y := make([][]complex128, n)
	for i := range y {
		y[i] = make([]complex128, n)
		y[i][i] = 1
	}
	for k := range n {
		best := k
		for i := k; i < n; i++ {
			if ldl.Abs1(form(y, b, i, i)) > ldl.Abs1(form(y, b, best, best)) {
				best = i
			}
		}
		s := 1 / cmplx.Sqrt(form(y, b, best, best))
		for _, row := range y {
			row[k], row[best] = row[best]*s, row[k]
		}
		for i := k + 1; i < n; i++ {
			c := form(y, b, k, i)
			for _, row := range y {
				row[i] -= c * row[k]
			}
		}
	}
	return y
}

// turn gives column i of y the phase that makes its largest entry real.
func turn(y [][]complex128, i int) {
	var top complex128
	for _, row := range y {
		if cmplx.Abs(row[i]) > 1.000001*cmplx.Abs(top) {
			top = row[i]
		}
	}
	phase := cmplx.Conj(top) / complex(cmplx.Abs(top), 0)
	for _, row := range y {
		row[i] *= phase
	}
}

// definite is coefficients for real a and b by way of b's Cholesky factor; nil if it has none.
func definite(a, b [][]complex128) [][]complex128 {
	n := len(a)
	sa, sb := mat.NewSymDense(n, nil), mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i + 1 {
			sa.SetSym(i, j, real(a[i][j]))
			sb.SetSym(i, j, real(b[i][j]))
		}
	}
	var chol mat.Cholesky
	if !chol.Factorize(sb) || chol.Cond() > 1e8 {
		return nil
	}
	var u mat.TriDense
	chol.UTo(&u)
	var left, both, back mat.Dense
	if left.Solve(u.T(), sa) != nil || both.Solve(u.T(), left.T()) != nil {
		return nil
	}
	sym := mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i + 1 {
			sym.SetSym(i, j, (both.At(i, j)+both.At(j, i))/2)
		}
	}
	var e mat.EigenSym
	if !e.Factorize(sym, true) {
		return nil
	}
	var v mat.Dense
	e.VectorsTo(&v)
	if back.Solve(&u, &v) != nil {
		return nil
	}
	y := make([][]complex128, n)
	for i := range y {
		y[i] = make([]complex128, n)
		for j := range y[i] {
			y[i][j] = complex(back.At(i, j), 0)
		}
	}
	return y
}

// divide puts b^-1 a in place of a by elimination with row exchanges; b is destroyed.
func divide(b, a [][]complex128) {
	n := len(b)
	for k := range n {
		p := k
		for i := k + 1; i < n; i++ {
			if ldl.Abs1(b[i][k]) > ldl.Abs1(b[p][k]) {
				p = i
			}
		}
		b[k], b[p], a[k], a[p] = b[p], b[k], a[p], a[k]
		for i := range n {
			if i == k {
				continue
			}
			c := b[i][k] / b[k][k]
			for j := k; j < n; j++ {
				b[i][j] -= c * b[k][j]
			}
			for j := range n {
				a[i][j] -= c * a[k][j]
			}
		}
	}
	for i := range n {
		for j := range n {
			a[i][j] /= b[i][i]
		}
	}
}
