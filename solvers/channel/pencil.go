package channel

import (
	"fmt"
	"math/cmplx"

	"betaloom/solvers"
)

// MulA sets dst to A x, A in 1/m^2. A vector has Unknowns entries.
func (p *Pencil) MulA(dst, x []complex128) { p.multiply(dst, x, p.k*p.k, 0) }

// MulB sets dst to B x.
func (p *Pencil) MulB(dst, x []complex128) { p.multiply(dst, x, 0, 1) }

func (p *Pencil) multiply(dst, x []complex128, ca, cb float64) {
	if !p.lossless {
		p.cplx.multiply(dst, x, complex(ca, 0), complex(cb, 0))
		return
	}
	eachPart(dst, x, func(d, v []float64) { p.real.multiply(d, v, ca, cb) })
}

// eachPart applies a real operation to the real and the imaginary part.
func eachPart(dst, x []complex128, do func(dst, x []float64)) {
	v, re, im := make([]float64, len(x)), make([]float64, len(x)), make([]float64, len(x))
	for i, c := range x {
		v[i] = real(c)
	}
	do(re, v)
	for i, c := range x {
		v[i] = imag(c)
	}
	do(im, v)
	for i := range dst {
		dst[i] = complex(re[i], im[i])
	}
}

// Factor is F = A + L B factored at one L.
type Factor struct {
	p    *Pencil
	real *factor[float64]
	cplx *factor[complex128]
}

// Factor factors F at L, in 1/m^2. It fails where a part of the section is singular
// there by itself, to the last digit; a slightly different L will do.
func (p *Pencil) Factor(l complex128) (*Factor, error) {
	if cmplx.IsNaN(l) || cmplx.IsInf(l) {
		return nil, &solvers.InputError{Where: "factor", Found: fmt.Sprintf("L = %v", l), Expected: "a finite number"}
	}
	n := l / complex(p.k*p.k, 0)
	f := &Factor{p: p}
	if p.lossless && imag(n) == 0 {
		f.real = newFactor(p.real)
		return f, f.real.fill(p.real, real(n))
	}
	if p.cplx == nil {
		p.cplx = newSystem(p.t, &p.t.cplx, p.mesh, p.k, p.eps)
	}
	f.cplx = newFactor(p.cplx)
	return f, f.cplx.fill(p.cplx, n)
}

// Solve sets dst to F^-1 b.
func (f *Factor) Solve(dst, b []complex128) {
	c := complex(1/(f.p.k*f.p.k), 0)
	if f.cplx != nil {
		copy(dst, b)
		f.cplx.solve(dst)
	} else {
		eachPart(dst, b, func(d, v []float64) {
			copy(d, v)
			f.real.solve(d)
		})
	}
	for i := range dst {
		dst[i] *= c
	}
}

// Negative is the number of negative eigenvalues of F (Sylvester's law of inertia); lossless is
// false, and n without meaning, where F is not real.
func (f *Factor) Negative() (n int, lossless bool) {
	if f.real == nil {
		return 0, false
	}
	return f.real.negative, true
}

// Above is the number of modes with L above that of the factor: Negative less the number of unknowns of e_z. It holds for
// positive permittivities and L > 0.
func (f *Factor) Above() (n int, proven bool) {
	if f.real == nil || !f.p.positive {
		return 0, false
	}
	return f.real.negative - f.p.t.potentials, true
}
