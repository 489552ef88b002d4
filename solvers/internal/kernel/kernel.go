package kernel

// Number is a real or complex scalar.
type Number interface{ float64 | complex128 }

// View is a matrix in a slice: entry i, j stands at Data[i*Row + j*Step]. A Step of
// zero stands for one, and only the factor A of Sub may have another.
type View[T Number] struct {
	Data      []T
	Row, Step int
}

// from is the part from row i and column j on.
func (v *View[T]) from(i, j int) *View[T] {
	return &View[T]{Data: v.Data[i*v.Row+j:], Row: v.Row, Step: 1}
}

// last touches the last entry of a m x n matrix, as the vector code does not look.
func (v *View[T]) last(m, n int) { _ = v.Data[(m-1)*v.Row+(n-1)*max(v.Step, 1)] }

// Sub takes A B off C, where C is m x n, A is m x k and B is k x n.
func Sub[T Number](c, a, b View[T], m, n, k int) {
	if m <= 0 || n <= 0 || k <= 0 {
		return
	}
	c.last(m, n)
	a.last(m, k)
	b.last(k, n)
	a.Step = max(a.Step, 1)
	sub(best, &c, &a, &b, m, n, k)
}

func sub[T Number](l level, c, a, b *View[T], m, n, k int) {
	switch c := any(c).(type) {
	case *View[float64]:
		l.subReal(c, any(a).(*View[float64]), any(b).(*View[float64]), m, n, k)
	case *View[complex128]:
		l.subComplex(c, any(a).(*View[complex128]), any(b).(*View[complex128]), m, n, k)
	}
}

// SubRow takes a' B off y; row k of B stands at b[k*row].
func SubRow[T Number](y, a, b []T, row int) {
	if len(y) == 0 || len(a) == 0 {
		return
	}
	_ = b[(len(a)-1)*row+len(y)-1]
	switch y := any(&y).(type) {
	case *[]float64:
		best.rowReal(*y, *any(&a).(*[]float64), *any(&b).(*[]float64), row)
	case *[]complex128:
		c := View[complex128]{*y, len(*y), 1}
		best.subComplex(&c, &View[complex128]{*any(&a).(*[]complex128), len(a), 1}, &View[complex128]{*any(&b).(*[]complex128), row, 1}, 1, len(*y), len(a))
	}
}

// Solve puts L^-1 X into X, where L is m x m, lower triangular with ones on the
// diagonal (what stands on it and above is not read), and X is m x n.
func Solve[T Number](l, x View[T], m, n int) {
	if m <= 1 || n <= 0 {
		return
	}
	l.last(m, m-1)
	x.last(m, n)
	switch l := any(&l).(type) {
	case *View[float64]:
		best.solveReal(l, any(&x).(*View[float64]), m, n)
	case *View[complex128]:
		best.solveComplex(l, any(&x).(*View[complex128]), m, n)
	}
}

// Turn puts the transpose of src, which is n x m, into dst, m x n, with column t
// times scale[t] unless scale is nil.
func Turn[T Number](dst, src View[T], scale []T, m, n int) {
	if m <= 0 || n <= 0 {
		return
	}
	dst.last(m, n)
	src.last(n, m)
	if scale != nil {
		scale = scale[:n]
	}
	switch d := any(&dst).(type) {
	case *View[float64]:
		best.turnReal(d, any(&src).(*View[float64]), *any(&scale).(*[]float64), m, n)
	case *View[complex128]:
		best.turnComplex(d, any(&src).(*View[complex128]), *any(&scale).(*[]complex128), m, n)
	}
}

// SubDots takes the products of the first m rows of A with x off y.
func SubDots[T Number](y []T, a View[T], x []T, m int) {
	if m <= 0 || len(x) == 0 {
		return
	}
	y = y[:m]
	a.last(m, len(x))
	switch y := any(&y).(type) {
	case *[]float64:
		best.dotsReal(*y, any(&a).(*View[float64]), *any(&x).(*[]float64))
	case *[]complex128:
		a, x := any(&a).(*View[complex128]), *any(&x).(*[]complex128)
		for i := range *y {
			rr, ii, ri, ir := best.dotComplex(a.Data[i*a.Row:][:len(x)], x)
			(*y)[i] -= complex(rr-ii, ri+ir)
		}
	}
}

// Dot is x'y, without conjugation; y is as long as x or longer.
func Dot[T Number](x, y []T) (sum T) {
	y = y[:len(x)]
	switch s := any(&sum).(type) {
	case *float64:
		*s = dotReal(*any(&x).(*[]float64), *any(&y).(*[]float64))
	case *complex128:
		rr, ii, ri, ir := best.dotComplex(*any(&x).(*[]complex128), *any(&y).(*[]complex128))
		*s = complex(rr-ii, ri+ir)
	}
	return sum
}

func dotReal(x, y []float64) float64 {
	if len(x) == 0 {
		return 0
	}
	var s [1]float64
	best.dotsReal(s[:], &View[float64]{Data: x}, y)
	return 0 - s[0]
}

// Inner is the product of the conjugate of x with y; y is as long as x or longer.
func Inner[T Number](x, y []T) (sum T) {
	y = y[:len(x)]
	switch s := any(&sum).(type) {
	case *float64:
		*s = dotReal(*any(&x).(*[]float64), *any(&y).(*[]float64))
	case *complex128:
		rr, ii, ri, ir := best.dotComplex(*any(&x).(*[]complex128), *any(&y).(*[]complex128))
		*s = complex(rr+ii, ri-ir)
	}
	return sum
}

// Axpy adds c x to y; x is as long as y or longer.
func Axpy[T Number](y, x []T, c T) {
	a := [1]T{-c}
	SubRow(y, a[:], x, len(x))
}

// Pivots factors columns of a symmetric matrix of n columns, A = L D L', for as long as no pivot
// has to be looked for. Column t stands in row t of w, from the diagonal at place t on; w and u have
// row numbers a row. The columns before t are done: w holds those of L D, u those of L with D on
// its diagonal. Pivots goes on from t to end and stops at a column whose diagonal is zero, not
// finite or smaller than alpha times the largest number below; in w it holds what the columns
// before leave of that one. It gives the number of that column, or end.
func Pivots[T Number](w, u []T, row, n, t, end int, alpha float64) int {
	if t >= end {
		return t
	}
	_, _ = w[(end-1)*row+n-1], u[(end-1)*row+n-1]
	if w, ok := any(&w).(*[]float64); ok {
		return best.pivotsReal(*w, *any(&u).(*[]float64), row, n, t, end, alpha)
	}
	return plainPivots(best, w, u, row, n, t, end, alpha)
}

// Peak is the largest |Re| + |Im| among x, NaN if one of them is.
func Peak[T Number](x []T) float64 { return peak(best, x) }

func peak[T Number](l level, x []T) float64 {
	switch x := any(&x).(type) {
	case *[]float64:
		return l.peakReal(*x)
	case *[]complex128:
		return l.peakComplex(*x)
	}
	return 0
}
