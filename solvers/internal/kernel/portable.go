package kernel

import "math"

// lanes is the number of sums that a dot product runs side by side: number i goes to sum i mod lanes.
const lanes = 8

// plainSub defines Sub for real numbers: along k, from C itself on.
func plainSub(c, a, b *View[float64], m, n, k int) {
	for i := range m {
		row := c.Data[i*c.Row:][:n]
		for t := range k {
			l := -a.Data[i*a.Row+t*a.Step]
			u := b.Data[t*b.Row:][:len(row)]
			for j, v := range u {
				row[j] = math.FMA(l, v, row[j])
			}
		}
	}
}

// plainSubComplex defines Sub for complex numbers: the products with the real parts of A
// are taken off C one by one, those with the imaginary parts are summed apart.
func plainSubComplex(c, a, b *View[complex128], m, n, k int) {
	for i := range m {
		for j := range n {
			v := c.Data[i*c.Row+j]
			re, im := real(v), imag(v)
			var p, q float64
			for t := range k {
				l, u := a.Data[i*a.Row+t*a.Step], b.Data[t*b.Row+j]
				re, im = math.FMA(-real(l), real(u), re), math.FMA(-real(l), imag(u), im)
				p, q = math.FMA(imag(l), real(u), p), math.FMA(imag(l), imag(u), q)
			}
			c.Data[i*c.Row+j] = complex(re+q, im-p)
		}
	}
}

// rowSolve defines Solve: row by row, each with all before it.
func rowSolve[T Number](l level, a, x *View[T], m, n int) {
	for i := 1; i < m; i++ {
		sub(l, x.from(i, 0), a.from(i, 0), x, 1, n, i)
	}
}

// blockSolve does the same sums for real numbers four rows at a time.
func blockSolve(l level, a, x *View[float64], m, n int) {
	for i := 0; i < m; i += 4 {
		rows := min(4, m-i)
		if i > 0 {
			sub(l, x.from(i, 0), a.from(i, 0), x, rows, n, i)
		}
		for t := 1; t < rows; t++ {
			sub(l, x.from(i+t, 0), a.from(i+t, i), x.from(i, 0), 1, n, t)
		}
	}
}

// plainPivots defines Pivots.
func plainPivots[T Number](l level, w, u []T, row, n, t, end int, alpha float64) int {
	for ; t < end; t++ {
		x, y := w[t*row+t:t*row+n], u[t*row+t:t*row+n]
		if t > 0 {
			sub(l, &View[T]{x, n, 1}, &View[T]{u[t:], 1, row}, &View[T]{w[t:], row, 1}, 1, n-t, t)
		}
		own, col := peak(l, x[:1]), peak(l, x[1:])
		if !(own >= alpha*col && own > 0 && own <= math.MaxFloat64) {
			return t
		}
		inv := 1 / x[0]
		for i, v := range x {
			y[i] = times(v, inv)
		}
		y[0] = x[0]
	}
	return end
}

// plainTurn defines Turn.
func plainTurn[T Number](dst, src *View[T], scale []T, m, n int) {
	for i := range m {
		row := dst.Data[i*dst.Row:][:n]
		for t := range row {
			row[t] = src.Data[t*src.Row+i]
		}
		for t, c := range scale {
			row[t] = times(row[t], c)
		}
	}
}

// times is u v; a complex product rounds the product of the imaginary parts (the
// imaginary with the real one) before it adds the other.
func times[T Number](u, v T) T {
	switch u := any(&u).(type) {
	case *float64:
		*u *= *any(&v).(*float64)
	case *complex128:
		a, b := *u, *any(&v).(*complex128)
		p, q := imag(a)*imag(b), imag(a)*real(b)
		*u = complex(math.FMA(real(a), real(b), -p), math.FMA(real(a), imag(b), q))
	}
	return u
}

// fold adds the sums of a dot product in pairs; the even and the odd ones stay apart.
func fold(s *[lanes]float64) (even, odd float64) {
	return (s[0] + s[4]) + (s[2] + s[6]), (s[1] + s[5]) + (s[3] + s[7])
}

// plainDot defines Dot for real numbers; the last round is filled up with zeros.
func plainDot(x, y []float64) float64 {
	var s [lanes]float64
	for ; len(x) > 0; x, y = x[min(lanes, len(x)):], y[min(lanes, len(x)):] {
		for i := range s {
			var u, v float64
			if i < len(x) {
				u, v = x[i], y[i]
			}
			s[i] = math.FMA(u, v, s[i])
		}
	}
	even, odd := fold(&s)
	return even + odd
}

func plainDots(y []float64, a *View[float64], x []float64) {
	for i := range y {
		y[i] -= plainDot(a.Data[i*a.Row:][:len(x)], x)
	}
}

// plainDotComplex defines the four sums behind Dot and Inner: of the products of real parts, of
// imaginary parts, of real with imaginary and of imaginary with real parts.
func plainDotComplex(x, y []complex128) (rr, ii, ri, ir float64) {
	var s, c [lanes]float64
	for ; len(x) > 0; x, y = x[min(lanes/2, len(x)):], y[min(lanes/2, len(x)):] {
		for i := range lanes / 2 {
			var u, v complex128
			if i < len(x) {
				u, v = x[i], y[i]
			}
			s[2*i], s[2*i+1] = math.FMA(real(u), real(v), s[2*i]), math.FMA(imag(u), imag(v), s[2*i+1])
			c[2*i], c[2*i+1] = math.FMA(real(u), imag(v), c[2*i]), math.FMA(imag(u), real(v), c[2*i+1])
		}
	}
	rr, ii = fold(&s)
	ri, ir = fold(&c)
	return rr, ii, ri, ir
}

// plainPeak defines Peak for real numbers.
func plainPeak(x []float64) (top float64) {
	for _, v := range x {
		top = max(top, math.Abs(v))
	}
	return top
}

func plainPeakComplex(x []complex128) (top float64) {
	for _, v := range x {
		top = max(top, math.Abs(real(v))+math.Abs(imag(v)))
	}
	return top
}
