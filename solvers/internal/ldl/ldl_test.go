package ldl

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"
)

// random gives a symmetric matrix; a hole in its diagonal forces 2 x 2 pivots.
func random(rng *rand.Rand, n int) *mat.SymDense {
	a := mat.NewSymDense(n, nil)
	for i := range n {
		for j := range i + 1 {
			a.SetSym(i, j, rng.NormFloat64())
		}
		if i%3 == 0 {
			a.SetSym(i, i, 0)
		}
	}
	return a
}

// split puts a matrix into a front.
func split[T Number](n, s int, at func(i, j int) T) (*Front[T], []T) {
	f := &Front[T]{N: n, S: s, Panel: make([]T, n*s), Off: make([]T, s), Perm: make([]int32, s)}
	r := n - s
	rest := make([]T, r*r)
	for i := range n {
		for j := range i + 1 {
			if j < s {
				f.Panel[i*s+j] = at(i, j)
			} else {
				rest[(i-s)*r+j-s] = at(i, j)
			}
		}
	}
	return f, rest
}

// The negative pivots are the negative eigenvalues (Sylvester's law), against
// the eigenvalues of a library; the solution is checked by multiplying back.
func TestWholeMatrix(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{1, 2, 3, 7, 30, 61} {
		a := random(rng, n)
		a.SetSym(0, 0, 1)
		f, rest := split(n, n, a.At)
		g, err := f.Eliminate(rest, make([]float64, n*n+2*n))
		if err != nil {
			t.Fatal(n, err)
		}
		var e mat.EigenSym
		e.Factorize(a, false)
		want := 0
		for _, v := range e.Values(nil) {
			if v < 0 {
				want++
			}
		}
		if g.Negative != want {
			t.Errorf("n = %d: %d negative pivots, %d negative eigenvalues", n, g.Negative, want)
		}
		x := make([]float64, n)
		for i := range x {
			x[i] = rng.NormFloat64()
		}
		b := mat.NewVecDense(n, nil)
		b.MulVec(a, mat.NewVecDense(n, x))
		got := append([]float64{}, b.RawVector().Data...)
		work := make([]float64, 3*n)
		f.Down(got, nil, work)
		f.Up(got, nil, work)
		for i := range x { // 1e-9: rounding times the condition of such a matrix
			if math.Abs(got[i]-x[i]) > 1e-9 {
				t.Fatalf("n = %d: x[%d] = %g, want %g", n, i, got[i], x[i])
			}
		}
	}
}

// The Schur complement is that of its definition, C - B A^-1 B', formed by a library.
func TestSchurComplement(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	for _, c := range [][2]int{{5, 2}, {14, 8}, {23, 9}, {40, 21}} {
		n, s := c[0], c[1]
		a := random(rng, n)
		f, rest := split(n, s, a.At)
		if _, err := f.Eliminate(rest, make([]float64, n*s+2*s)); err != nil {
			t.Fatal(err)
		}
		var want, inner mat.Dense
		lead, low := a.SliceSym(0, s), mat.DenseCopyOf(a).Slice(s, n, 0, s)
		if err := inner.Solve(lead, low.T()); err != nil {
			t.Fatal(err)
		}
		want.Mul(low, &inner)
		for i := s; i < n; i++ {
			for j := s; j <= i; j++ { // 1e-9: as above
				w := a.At(i, j) - want.At(i-s, j-s)
				if g := rest[(i-s)*(n-s)+j-s]; math.Abs(g-w) > 1e-9*(1+math.Abs(w)) {
					t.Fatalf("%d, %d of %v: %g, want %g", i, j, c, g, w)
				}
			}
		}
	}
}

func TestComplexSolve(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	n, s := 19, 12
	re, im := random(rng, n), random(rng, n)
	at := func(i, j int) complex128 { return complex(re.At(i, j), im.At(i, j)) }
	f, rest := split(n, s, at)
	if _, err := f.Eliminate(rest, make([]complex128, n*n+2*n)); err != nil {
		t.Fatal(err)
	}
	r := n - s
	top, err := split2(rest, r)
	if err != nil {
		t.Fatal(err)
	}
	x, b := make([]complex128, n), make([]complex128, n)
	for i := range x {
		x[i] = complex(rng.NormFloat64(), rng.NormFloat64())
	}
	for i := range n {
		for j := range n {
			b[i] += at(i, j) * x[j]
		}
	}
	work := make([]complex128, 3*n)
	f.Down(b[:s], b[s:], work)
	top.Down(b[s:], nil, work)
	top.Up(b[s:], nil, work)
	f.Up(b[:s], b[s:], work)
	for i := range x {
		if cmplx.Abs(b[i]-x[i]) > 1e-9 {
			t.Fatalf("x[%d] = %g, want %g", i, b[i], x[i])
		}
	}
}

// split2 factors a Schur complement whole.
func split2(c []complex128, r int) (*Front[complex128], error) {
	f, rest := split(r, r, func(i, j int) complex128 { return c[i*r+j] })
	_, err := f.Eliminate(rest, make([]complex128, r*r+2*r))
	return f, err
}

func TestSingular(t *testing.T) {
	for name, v := range map[string]float64{"zero": 0, "not a number": math.NaN(), "infinite": math.Inf(1)} {
		t.Run(name, func(t *testing.T) {
			f, rest := split(3, 2, func(i, j int) float64 { return v })
			if _, err := f.Eliminate(rest, make([]float64, 20)); err == nil {
				t.Error("no error")
			}
		})
	}
}

// BenchmarkEliminate measures a front of 120 unknowns, half of them eliminated.
func BenchmarkEliminate(b *testing.B) {
	rng := rand.New(rand.NewPCG(7, 8))
	n, s := 120, 60
	a := random(rng, n)
	work := make([]float64, n*n+2*n)
	f, rest := split(n, s, a.At)
	p0, r0 := append([]float64{}, f.Panel...), append([]float64{}, rest...)
	for b.Loop() {
		copy(f.Panel, p0)
		copy(rest, r0)
		if _, err := f.Eliminate(rest, work); err != nil {
			b.Fatal(err)
		}
	}
	r := float64(n - s)
	flops := float64(s*s*s)/3 + float64(s*s)*r + float64(s)*r*r
	b.ReportMetric(flops*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFlop/s")
}
