package ritz

import (
	"errors"
	"math"
	"math/cmplx"
)

// ErrIteration says that the QR iteration did not settle, or met a number that is not finite.
var ErrIteration = errors.New("ritz: the QR iteration did not settle")

const epsilon = 0x1p-52

// Eigen destroys the square matrix a (rows) and gives its eigenvalues with
// the eigenvectors as columns of v, each of unit norm: a v[.][i] = values[i] v[.][i].
func Eigen(a [][]complex128) (values []complex128, v [][]complex128, err error) {
	n := len(a)
	q := identity(n)
	hessenberg(a, q)
	if err := triangle(a, q); err != nil {
		return nil, nil, err
	}
	values = make([]complex128, n)
	for i := range n {
		values[i] = a[i][i]
	}
	return values, vectors(a, q), nil
}

func identity(n int) [][]complex128 {
	q := make([][]complex128, n)
	for i := range q {
		q[i] = make([]complex128, n)
		q[i][i] = 1
	}
	return q
}

// hessenberg reduces a by reflections and gathers them in q.
func hessenberg(a, q [][]complex128) {
	n := len(a)
	u := make([]complex128, n)
	for k := 0; k+2 < n; k++ {
		norm, low := 0.0, 0.0
		for i := k + 1; i < n; i++ {
			u[i] = a[i][k]
			norm = math.Hypot(norm, cmplx.Abs(u[i]))
			if i > k+1 {
				low = max(low, cmplx.Abs(u[i]))
			}
		}
		if low == 0 {
			continue
		}
		phase := complex(1, 0)
		if m := cmplx.Abs(u[k+1]); m > 0 {
			phase = u[k+1] / complex(m, 0)
		}
		u[k+1] += phase * complex(norm, 0)
		reflect(a, q, u, k+1)
	}
}

// reflect applies 1 - 2 u u^H/|u|^2, u from place k on, to both sides of a and to q's right.
func reflect(a, q [][]complex128, u []complex128, k int) {
	n := len(a)
	uu := 0.0
	for i := k; i < n; i++ {
		uu += real(u[i])*real(u[i]) + imag(u[i])*imag(u[i])
	}
	f := complex(2/uu, 0)
	for j := range n {
		var s complex128
		for i := k; i < n; i++ {
			s += cmplx.Conj(u[i]) * a[i][j]
		}
		for i := k; i < n; i++ {
			a[i][j] -= f * s * u[i]
		}
	}
	for _, m := range [][][]complex128{a, q} {
		for i := range n {
			var s complex128
			for j := k; j < n; j++ {
				s += m[i][j] * u[j]
			}
			for j := k; j < n; j++ {
				m[i][j] -= f * s * cmplx.Conj(u[j])
			}
		}
	}
}

// triangle makes the Hessenberg matrix h upper triangular; q gathers the rotations.
func triangle(h, q [][]complex128) error {
	hi, tries := len(h)-1, 0
	for hi > 0 {
		lo := hi
		for ; lo > 0; lo-- {
			s := cmplx.Abs(h[lo][lo]) + cmplx.Abs(h[lo-1][lo-1])
			if cmplx.Abs(h[lo][lo-1]) <= epsilon*s {
				h[lo][lo-1] = 0
				break
			}
		}
		if lo == hi {
			hi, tries = hi-1, 0
			continue
		}
		if tries++; tries > 60 {
			return ErrIteration
		}
		sweep(h, q, lo, hi, shift(h, hi, tries))
	}
	for i := range h {
		if cmplx.IsNaN(h[i][i]) || cmplx.IsInf(h[i][i]) {
			return ErrIteration
		}
	}
	return nil
}

// shift is Wilkinson's, now and then an exceptional one.
func shift(h [][]complex128, hi, tries int) complex128 {
	if tries%12 == 0 {
		return h[hi][hi] + complex(cmplx.Abs(h[hi][hi-1]), 0)
	}
	a, b, c, d := h[hi-1][hi-1], h[hi-1][hi], h[hi][hi-1], h[hi][hi]
	m := (a - d) / 2
	r := cmplx.Sqrt(m*m + b*c)
	if real(m)*real(r)+imag(m)*imag(r) < 0 {
		r = -r
	}
	if m+r == 0 {
		return d
	}
	return d - b*c/(m+r)
}

// sweep is one QR step with shift s on rows lo to hi.
func sweep(h, q [][]complex128, lo, hi int, s complex128) {
	n := len(h)
	for i := lo; i <= hi; i++ {
		h[i][i] -= s
	}
	cs, sn := make([]complex128, hi), make([]complex128, hi)
	for k := lo; k < hi; k++ {
		a, b := h[k][k], h[k+1][k]
		r := math.Hypot(cmplx.Abs(a), cmplx.Abs(b))
		cs[k], sn[k] = 1, 0
		if r > 0 {
			cs[k], sn[k] = a/complex(r, 0), b/complex(r, 0)
		}
		c, d := cmplx.Conj(cs[k]), cmplx.Conj(sn[k])
		for j := k; j < n; j++ {
			x, y := h[k][j], h[k+1][j]
			h[k][j], h[k+1][j] = c*x+d*y, cs[k]*y-sn[k]*x
		}
	}
	for k := lo; k < hi; k++ {
		rotate(h[:min(k+2, hi)+1], k, cs[k], sn[k])
		rotate(q, k, cs[k], sn[k])
	}
	for i := lo; i <= hi; i++ {
		h[i][i] += s
	}
}

// rotate turns columns k and k+1 of m.
func rotate(m [][]complex128, k int, c, s complex128) {
	cc, sc := cmplx.Conj(c), cmplx.Conj(s)
	for i := range m {
		x, y := m[i][k], m[i][k+1]
		m[i][k], m[i][k+1] = x*c+y*s, y*cc-x*sc
	}
}

// vectors substitutes back in the triangle h and turns the results by q.
func vectors(h, q [][]complex128) [][]complex128 {
	n := len(h)
	v, top := identity(n), 0.0
	for i := range n {
		for j := i; j < n; j++ {
			top = max(top, cmplx.Abs(h[i][j]))
		}
	}
	y := make([]complex128, n)
	for k := range n {
		clear(y)
		y[k] = 1
		for i := k - 1; i >= 0; i-- {
			var s complex128
			for j := i + 1; j <= k; j++ {
				s += h[i][j] * y[j]
			}
			d := h[k][k] - h[i][i]
			if cmplx.Abs(d) < epsilon*top {
				d = complex(epsilon*top, 0)
			}
			if s != 0 {
				y[i] = s / d
			}
		}
		place(v, q, y, k)
	}
	return v
}

// place writes q y, normed, as column k of v.
func place(v, q [][]complex128, y []complex128, k int) {
	norm := 0.0
	for i := range v {
		var s complex128
		for j := 0; j <= k; j++ {
			s += q[i][j] * y[j]
		}
		v[i][k] = s
		norm = math.Hypot(norm, cmplx.Abs(s))
	}
	for i := range v {
		v[i][k] /= complex(norm, 0)
	}
}
