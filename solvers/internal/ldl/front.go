package ldl

import (
	"errors"
	"math"
)

// Number is a real or complex scalar.
type Number interface{ float64 | complex128 }

// ErrSingular says that a pivot is zero or not a number.
var ErrSingular = errors.New("front: no usable pivot")

// alpha is Bunch and Kaufman's threshold, (1 + sqrt 17)/8.
const alpha = 0.6403882032022076

// Front is a dense symmetric matrix of N unknowns, the first S to be eliminated.
type Front[T Number] struct {
	N, S  int
	Panel []T     // N rows of S
	Off   []T     // S: Off[k] couples k and k+1 where these are one 2 x 2 pivot, else 0
	Perm  []int32 // S: Perm[i] is the unknown at place i
}

// Gauge is what an elimination shows: the negative eigenvalues of D (counted
// for real fronts) and the largest entry of L21.
type Gauge struct {
	Negative int
	Growth   float64
}

// Abs1 is |x|, or |Re x| + |Im x|.
func Abs1[T Number](x T) float64 {
	switch v := any(x).(type) {
	case float64:
		return math.Abs(v)
	case complex128:
		return math.Abs(real(v)) + math.Abs(imag(v))
	}
	return 0
}

// Eliminate factors the front; rest is its trailing block, work has room for
// (N+2) S numbers. Both are overwritten.
func (f *Front[T]) Eliminate(rest, work []T) (Gauge, error) {
	if f.S == 0 {
		return Gauge{}, nil
	}
	for i := range f.S {
		f.Perm[i], f.Off[i] = int32(i), 0
	}
	neg, err := f.pivot(work)
	if err != nil {
		return Gauge{}, err
	}
	g := f.couple(work)
	update(rest, f.Panel[f.S*f.S:f.N*f.S], work, f.N-f.S, f.S)
	return Gauge{neg, g}, nil
}

// pivot factors the leading block.
func (f *Front[T]) pivot(work []T) (negative int, err error) {
	s, a := f.S, f.Panel
	for k := 0; k < s; {
		kp, two := f.choose(k)
		if kp < 0 {
			return 0, ErrSingular
		}
		at := k
		if two {
			at = k + 1
		}
		if kp != at {
			f.swap(at, kp)
		}
		if !two {
			d := a[k*s+k]
			if v, ok := any(d).(float64); ok && v < 0 {
				negative++
			}
			f.single(k, work)
			k++
			continue
		}
		negative++ // such a pivot has a negative determinant
		f.double(k, work)
		k += 2
	}
	return negative, nil
}

// choose gives the place to take the next pivot from; -1 if there is none.
func (f *Front[T]) choose(k int) (at int, two bool) {
	s, a := f.S, f.Panel
	own := Abs1(a[k*s+k])
	col, im := 0.0, k
	for i := k + 1; i < s; i++ {
		if v := Abs1(a[i*s+k]); v > col {
			col, im = v, i
		}
	}
	if top := max(own, col); top == 0 || math.IsNaN(own) || math.IsNaN(col) || math.IsInf(top, 0) {
		return -1, false
	}
	if own >= alpha*col {
		return k, false
	}
	row := 0.0
	for j := k; j < im; j++ {
		row = max(row, Abs1(a[im*s+j]))
	}
	for i := im + 1; i < s; i++ {
		row = max(row, Abs1(a[i*s+im]))
	}
	switch {
	case own >= alpha*col*(col/row):
		return k, false
	case Abs1(a[im*s+im]) >= alpha*row:
		return im, false
	}
	return im, true
}

// swap exchanges unknowns p < q of the leading block, with the rows of L that stand.
func (f *Front[T]) swap(p, q int) {
	s, a := f.S, f.Panel
	rp, rq := a[p*s:p*s+p], a[q*s:q*s+p]
	for c := range rp {
		rp[c], rq[c] = rq[c], rp[c]
	}
	a[p*s+p], a[q*s+q] = a[q*s+q], a[p*s+p]
	for m := p + 1; m < q; m++ {
		a[m*s+p], a[q*s+m] = a[q*s+m], a[m*s+p]
	}
	for m := q + 1; m < s; m++ {
		a[m*s+p], a[m*s+q] = a[m*s+q], a[m*s+p]
	}
	f.Perm[p], f.Perm[q] = f.Perm[q], f.Perm[p]
}

// single takes the 1 x 1 pivot k out of the leading block.
func (f *Front[T]) single(k int, c []T) {
	s, a := f.S, f.Panel
	inv := 1 / a[k*s+k]
	for i := k + 1; i < s; i++ {
		c[i] = a[i*s+k]
		l := c[i] * inv
		a[i*s+k] = l
		axpy(a[i*s+k+1:i*s+i+1], c[k+1:i+1], l)
	}
}

func axpy[T Number](y, x []T, l T) {
	x = x[:len(y)]
	for j := range y {
		y[j] -= l * x[j]
	}
}

// double takes the 2 x 2 pivot k, k+1 out of the leading block.
func (f *Front[T]) double(k int, work []T) {
	s, a := f.S, f.Panel
	c, d := work[:s], work[s:2*s]
	i11, i21, i22 := invert2(a[k*s+k], a[(k+1)*s+k], a[(k+1)*s+k+1])
	f.Off[k] = a[(k+1)*s+k]
	a[(k+1)*s+k] = 0
	for i := k + 2; i < s; i++ {
		c[i], d[i] = a[i*s+k], a[i*s+k+1]
		l, m := c[i]*i11+d[i]*i21, c[i]*i21+d[i]*i22
		a[i*s+k], a[i*s+k+1] = l, m
		row := a[i*s+k+2 : i*s+i+1]
		cc, dd := c[k+2:][:len(row)], d[k+2:][:len(row)]
		for j := range row {
			row[j] -= l*cc[j] + m*dd[j]
		}
	}
}

// invert2 inverts [[a, b], [b, c]] with b the largest entry.
func invert2[T Number](a, b, c T) (i11, i21, i22 T) {
	p, q := a/b, c/b
	t := 1 / (b * (p*q - 1))
	return q * t, -t, p * t
}
