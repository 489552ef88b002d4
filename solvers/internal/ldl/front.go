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
	f.update(rest, work)
	return Gauge{neg, g}, nil
}
