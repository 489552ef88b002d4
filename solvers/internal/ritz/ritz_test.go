package ritz

import (
	"errors"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"sort"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// The pairs satisfy their definition, A v = v lambda; 1e-11: rounding of matrices up to 40.
func TestPairs(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{1, 2, 3, 5, 12, 40} {
		a, keep := identity(n), identity(n)
		for i := range n {
			for j := range n {
				a[i][j] = complex(rng.NormFloat64(), rng.NormFloat64())
				keep[i][j] = a[i][j]
			}
		}
		values, v, err := Eigen(a)
		if err != nil {
			t.Fatal(err)
		}
		for k := range n {
			for i := range n {
				r := -values[k] * v[i][k]
				for j := range n {
					r += keep[i][j] * v[j][k]
				}
				if cmplx.Abs(r) > 1e-11 {
					t.Fatalf("n = %d, pair %d: residual %g", n, k, cmplx.Abs(r))
				}
			}
		}
	}
}

// The values are those of a library for a real matrix.
func TestAgainstLibrary(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	n := 25
	d, a := mat.NewDense(n, n, nil), identity(n)
	for i := range n {
		for j := range n {
			x := rng.NormFloat64()
			d.Set(i, j, x)
			a[i][j] = complex(x, 0)
		}
	}
	var e mat.Eigen
	if !e.Factorize(d, mat.EigenNone) {
		t.Fatal("library failed")
	}
	want := e.Values(nil)
	got, _, err := Eigen(a)
	if err != nil {
		t.Fatal(err)
	}
	order := func(v []complex128) {
		sort.Slice(v, func(i, j int) bool {
			if math.Abs(real(v[i])-real(v[j])) > 1e-9 {
				return real(v[i]) < real(v[j])
			}
			return imag(v[i]) < imag(v[j])
		})
	}
	order(got)
	order(want)
	for i := range want {
		if cmplx.Abs(got[i]-want[i]) > 1e-11 { // rounding
			t.Errorf("value %d: %g, library %g", i, got[i], want[i])
		}
	}
}

func TestRepeatedAndDefective(t *testing.T) {
	a := identity(4)
	a[0][1] = 1 // a Jordan block and a double value
	values, v, err := Eigen(a)
	if err != nil {
		t.Fatal(err)
	}
	for i, x := range values {
		if cmplx.Abs(x-1) > 1e-7 || cmplx.IsNaN(v[0][i]) { // the root of rounding, for a defective value
			t.Errorf("value %d = %g, vector %g", i, x, v[0][i])
		}
	}
}

func TestNotFinite(t *testing.T) {
	a := identity(3)
	a[1][2] = cmplx.NaN()
	a[2][1] = 1
	if _, _, err := Eigen(a); !errors.Is(err, ErrIteration) {
		t.Errorf("err = %v", err)
	}
}
