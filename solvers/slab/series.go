package slab

import (
	"math"
	"math/cmplx"
)

// scalar is the field a problem is solved over: real where nothing is lossy,
// complex otherwise. One kernel serves both.
type scalar interface{ float64 | complex128 }

// series is a Taylor polynomial in t = (w - w0)/w0, lowest power first. The
// functions below keep terms up to order n only and leave the others zero.
type series[T scalar] [4]T

// constant is the series with the value v.
func constant[T scalar](v T) series[T] { return series[T]{v} }

func add[T scalar](a, b *series[T]) series[T] {
	return series[T]{a[0] + b[0], a[1] + b[1], a[2] + b[2], a[3] + b[3]}
}

func sub[T scalar](a, b *series[T]) series[T] {
	return series[T]{a[0] - b[0], a[1] - b[1], a[2] - b[2], a[3] - b[3]}
}

func scale[T scalar](a *series[T], s T) series[T] {
	return series[T]{a[0] * s, a[1] * s, a[2] * s, a[3] * s}
}

func mul[T scalar](a, b *series[T], n int) (c series[T]) {
	c[0] = a[0] * b[0]
	if n == 0 {
		return c
	}
	c[1] = a[0]*b[1] + a[1]*b[0]
	if n == 1 {
		return c
	}
	c[2] = a[0]*b[2] + a[1]*b[1] + a[2]*b[0]
	if n == 2 {
		return c
	}
	c[3] = a[0]*b[3] + a[1]*b[2] + a[2]*b[1] + a[3]*b[0]
	return c
}

func inverse[T scalar](a *series[T], n int) (c series[T]) {
	c[0] = 1 / a[0]
	for k := 1; k <= n; k++ {
		var s T
		for j := 1; j <= k; j++ {
			s += a[j] * c[k-j]
		}
		c[k] = -s * c[0]
	}
	return c
}

// root is the square root with the real part of its value not negative.
func root[T scalar](a *series[T], n int) (r series[T]) {
	r[0] = sqrt(a[0])
	if n == 0 {
		return r
	}
	half := 1 / (2 * r[0])
	r[1] = a[1] * half
	if n == 1 {
		return r
	}
	r[2] = (a[2] - r[1]*r[1]) * half
	if n == 2 {
		return r
	}
	r[3] = (a[3] - 2*r[1]*r[2]) * half
	return r
}

// sqrt is the principal square root. Its imaginary part is as accurate as
// the real one however small it is.
func sqrt[T scalar](a T) T {
	var r T
	switch p := any(&r).(type) {
	case *float64:
		*p = math.Sqrt(any(a).(float64))
	case *complex128:
		*p = csqrt(any(a).(complex128))
	}
	return r
}

func csqrt(a complex128) complex128 {
	x, y := real(a), imag(a)
	if x == 0 && y == 0 {
		return 0
	}
	m := math.Hypot(x, y)
	if x >= 0 {
		r := math.Sqrt((m + x) / 2)
		return complex(r, y/(2*r))
	}
	i := math.Copysign(math.Sqrt((m-x)/2), y)
	return complex(y/(2*i), i)
}

// modulus is the absolute value, of real and imaginary part together.
func modulus[T scalar](a T) float64 {
	switch v := any(a).(type) {
	case float64:
		return math.Abs(v)
	case complex128:
		return math.Hypot(real(v), imag(v))
	}
	return 0
}

// re is the real part.
func re[T scalar](a T) float64 {
	switch v := any(a).(type) {
	case float64:
		return v
	case complex128:
		return real(v)
	}
	return 0
}

// from turns a complex number into T; a real T drops the imaginary part,
// which is zero wherever a real problem is built.
func from[T scalar](v complex128) T {
	var r T
	switch p := any(&r).(type) {
	case *float64:
		*p = real(v)
	case *complex128:
		*p = v
	}
	return r
}

// widen turns T into a complex number.
func widen[T scalar](v T) complex128 {
	switch x := any(v).(type) {
	case float64:
		return complex(x, 0)
	case complex128:
		return x
	}
	return 0
}

// exp is the exponential.
func exp[T scalar](a T) T {
	var r T
	switch p := any(&r).(type) {
	case *float64:
		*p = math.Exp(any(a).(float64))
	case *complex128:
		*p = cmplx.Exp(any(a).(complex128))
	}
	return r
}

// power is the exponential of a series.
func power[T scalar](a *series[T], n int) (r series[T]) {
	r[0] = exp(a[0])
	if n > 0 {
		r[1] = a[1] * r[0]
	}
	if n > 1 {
		r[2] = (a[2] + a[1]*a[1]/2) * r[0]
	}
	if n > 2 {
		r[3] = (a[3] + a[1]*a[2] + a[1]*a[1]*a[1]/6) * r[0]
	}
	return r
}

// num is a real number as a T.
func num[T scalar](v float64) T {
	var r T
	switch p := any(&r).(type) {
	case *float64:
		*p = v
	case *complex128:
		*p = complex(v, 0)
	}
	return r
}
