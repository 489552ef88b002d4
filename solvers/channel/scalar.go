package channel

import (
	"math"

	"betaloom/solvers/internal/kernel"
	"betaloom/solvers/internal/ldl"
)

func fromReal[T ldl.Number](x float64) (v T) {
	switch p := any(&v).(type) {
	case *float64:
		*p = x
	case *complex128:
		*p = complex(x, 0)
	}
	return v
}

// fromComplex drops the imaginary part where T is real.
func fromComplex[T ldl.Number](x complex128) (v T) {
	switch p := any(&v).(type) {
	case *float64:
		*p = real(x)
	case *complex128:
		*p = x
	}
	return v
}

func toComplex[T ldl.Number](x T) complex128 {
	switch v := any(x).(type) {
	case float64:
		return complex(v, 0)
	case complex128:
		return v
	}
	return 0
}

func realPart[T ldl.Number](x T) float64 { return real(toComplex(x)) }

// conj is the conjugate.
func conj[T ldl.Number](x T) T {
	c := toComplex(x)
	return fromComplex[T](complex(real(c), -imag(c)))
}

// bilinear is x'y.
func bilinear[T ldl.Number](x, y []T) T { return kernel.Dot(x, y) }

// inner is conj(x)'y.
func inner[T ldl.Number](x, y []T) T { return kernel.Inner(x, y) }

func norm[T ldl.Number](x []T) float64 { return math.Sqrt(realPart(inner(x, x))) }

// add adds c x to y.
func add[T ldl.Number](y, x []T, c T) { kernel.Axpy(y, x[:len(y)], c) }

func scale[T ldl.Number](x []T, c T) {
	for i := range x {
		x[i] *= c
	}
}
