package slab

import (
	"math"
	"math/cmplx"
)

// scalar is the field a problem is solved over: real where nothing is lossy,
// complex otherwise. One kernel serves both.
type scalar interface{ float64 | complex128 }

// series is the Taylor polynomial a + b t + c t^2 + d t^3 in t = (w - w0)/w0. It is a
// structure, and its arithmetic is written out, so that the compiler keeps it in registers.
type series[T scalar] struct{ a, b, c, d T }

// constant is the series with the value v.
func constant[T scalar](v T) series[T] { return series[T]{a: v} }

func add[T scalar](x, y series[T]) series[T] {
	return series[T]{x.a + y.a, x.b + y.b, x.c + y.c, x.d + y.d}
}

func sub[T scalar](x, y series[T]) series[T] {
	return series[T]{x.a - y.a, x.b - y.b, x.c - y.c, x.d - y.d}
}

func scale[T scalar](x series[T], s T) series[T] {
	return series[T]{x.a * s, x.b * s, x.c * s, x.d * s}
}

func mul[T scalar](x, y series[T]) series[T] {
	return series[T]{
		x.a * y.a,
		x.a*y.b + x.b*y.a,
		x.a*y.c + x.b*y.b + x.c*y.a,
		x.a*y.d + x.b*y.c + x.c*y.b + x.d*y.a,
	}
}

func inverse[T scalar](x series[T]) (r series[T]) {
	r.a = 1 / x.a
	r.b = -x.b * r.a * r.a
	r.c = -(x.b*r.b + x.c*r.a) * r.a
	r.d = -(x.b*r.c + x.c*r.b + x.d*r.a) * r.a
	return r
}

// root is the square root with the real part of its value not negative.
func root[T scalar](x series[T]) (r series[T]) {
	r.a = sqrt(x.a)
	half := 0.5 / r.a
	r.b = x.b * half
	r.c = (x.c - r.b*r.b) * half
	r.d = (x.d - 2*r.b*r.c) * half
	return r
}

// power is the exponential of a series.
func power[T scalar](x series[T]) (r series[T]) {
	r.a = exp(x.a)
	r.b = x.b * r.a
	r.c = (x.c + x.b*x.b/2) * r.a
	r.d = (x.d + x.b*x.c + x.b*x.b*x.b/6) * r.a
	return r
}

// linear is a + b t: what integrals need, and derivatives in u at the point.
type linear[T scalar] struct{ a, b T }

// first is a series to first order.
func (x series[T]) first() linear[T] { return linear[T]{x.a, x.b} }

func (x linear[T]) plus(y linear[T]) linear[T] { return linear[T]{x.a + y.a, x.b + y.b} }

func (x linear[T]) less(y linear[T]) linear[T] { return linear[T]{x.a - y.a, x.b - y.b} }

func (x linear[T]) by(s T) linear[T] { return linear[T]{x.a * s, x.b * s} }

func (x linear[T]) times(y linear[T]) linear[T] {
	return linear[T]{x.a * y.a, x.a*y.b + x.b*y.a}
}

// over is the inverse.
func (x linear[T]) over() linear[T] {
	r := 1 / x.a
	return linear[T]{r, -x.b * r * r}
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
	m := length(x, y)
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
		return length(real(v), imag(v))
	}
	return 0
}

// length is the square root of x^2 + y^2.
func length(x, y float64) float64 {
	if s := x*x + y*y; s > 1e-280 && s < 1e280 {
		return math.Sqrt(s)
	}
	return math.Hypot(x, y)
}

// rough is a size, from the absolute value to 1.5 times that.
func rough[T scalar](a T) float64 {
	switch v := any(a).(type) {
	case float64:
		return math.Abs(v)
	case complex128:
		return math.Abs(real(v)) + math.Abs(imag(v))
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

// sincos is the sine and the cosine.
func sincos[T scalar](a T) (sin, cos T) {
	switch v := any(a).(type) {
	case float64:
		s, c := math.Sincos(v)
		return num[T](s), num[T](c)
	case complex128:
		c, s, factor := scaledSincos(v)
		c, s = c*complex(1/factor, 0), s*complex(1/factor, 0)
		return from[T](s), from[T](c)
	}
	return sin, cos
}
