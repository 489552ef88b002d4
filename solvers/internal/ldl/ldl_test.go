package ldl

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
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
	for _, n := range []int{1, 2, 3, 7, 16, 17, 18, 30, 61, 150} {
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
	for _, c := range [][2]int{{5, 2}, {14, 8}, {23, 9}, {40, 21}, {64, 17}, {150, 70}} {
		n, s := c[0], c[1]
		a := random(rng, n)
		f, rest := split(n, s, a.At)
		if _, err := f.Eliminate(rest, make([]float64, (n+2)*s)); err != nil {
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

// Each solution is checked by multiplying back.
func TestSolve(t *testing.T) {
	for _, c := range [][2]int{{1, 1}, {19, 12}, {50, 17}, {90, 41}} {
		t.Run(fmt.Sprint("real ", c), func(t *testing.T) {
			solve(t, c[0], c[1], func(x, _ float64) float64 { return x })
		})
		t.Run(fmt.Sprint("complex ", c), func(t *testing.T) {
			solve(t, c[0], c[1], func(x, y float64) complex128 { return complex(x, y) })
		})
	}
}

func solve[T Number](t *testing.T, n, s int, one func(x, y float64) T) {
	rng := rand.New(rand.NewPCG(5, 6))
	re, im := random(rng, n), random(rng, n)
	re.SetSym(0, 0, 1) // the single number of the smallest front
	at := func(i, j int) T { return one(re.At(i, j), im.At(i, j)) }
	f, rest := split(n, s, at)
	if _, err := f.Eliminate(rest, make([]T, (n+2)*s)); err != nil {
		t.Fatal(err)
	}
	r := n - s
	top, _ := split(r, r, func(i, j int) T { return rest[i*r+j] })
	if _, err := top.Eliminate(nil, make([]T, (r+2)*r)); err != nil {
		t.Fatal(err)
	}
	x, b := make([]T, n), make([]T, n)
	for i := range x {
		x[i] = one(rng.NormFloat64(), rng.NormFloat64())
	}
	for i := range n {
		for j := range n {
			b[i] += at(i, j) * x[j]
		}
	}
	work := make([]T, 3*n)
	f.Down(b[:s], b[s:], work[:3*s])
	top.Down(b[s:], nil, work)
	top.Up(b[s:], nil, work)
	f.Up(b[:s], b[s:], work[:3*s])
	for i := range x { // 1e-9: rounding times the condition of such a matrix
		if d := Abs1(b[i] - x[i]); !(d <= 1e-9) {
			t.Fatalf("x[%d] = %v, want %v", i, b[i], x[i])
		}
	}
}

// The factors multiplied give the matrix back, entry by entry, within n + 10 roundings of |L| |D| |L'|
// (each entry is one sum along the pivots; ten more for the inverse of D), and |L| |D| |L'| itself
// stays below 36 n max |A|: the theorem that makes Bunch and Kaufman's choice of pivots stable
// (Higham, SIAM J. Matrix Anal. Appl. 18 (1997) 52-65, from memory; his bound has the growth of the pivots as a further factor).
func TestBackward(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 10))
	for _, n := range []int{5, 15, 16, 17, 33, 90, 150} {
		t.Run(fmt.Sprint(n), func(t *testing.T) {
			a := random(rng, n)
			f, rest := split(n, n, a.At)
			if _, err := f.Eliminate(rest, make([]float64, (n+2)*n)); err != nil {
				t.Fatal(err)
			}
			l, d := unpack(f)
			var ld, back, sizes mat.Dense
			ld.Mul(l, d)
			back.Mul(&ld, l.T())
			size := func(_, _ int, v float64) float64 { return math.Abs(v) }
			l.Apply(size, l)
			d.Apply(size, d)
			ld.Mul(l, d)
			sizes.Mul(&ld, l.T())
			if s, top := mat.Max(&sizes), max(mat.Max(a), -mat.Min(a)); s > 36*float64(n)*top {
				t.Errorf("|L| |D| |L'| grows from %g to %g", top, s)
			}
			for i := range n {
				for j := range n {
					off := math.Abs(back.At(i, j) - a.At(int(f.Perm[i]), int(f.Perm[j])))
					if !(off <= float64(n+10)*0x1p-52*sizes.At(i, j)) {
						t.Fatalf("%d, %d: off by %g of %g", i, j, off, sizes.At(i, j))
					}
				}
			}
		})
	}
}

// unpack gives L11 and D of a front.
func unpack(f *Front[float64]) (l, d *mat.Dense) {
	s := f.S
	l, d = mat.NewDense(s, s, nil), mat.NewDense(s, s, nil)
	for i := range s {
		for j := range i {
			l.Set(i, j, f.Panel[i*s+j])
		}
		l.Set(i, i, 1)
		d.Set(i, i, f.Panel[i*s+i])
		if f.Off[i] != 0 {
			d.Set(i, i+1, f.Off[i])
			d.Set(i+1, i, f.Off[i])
		}
	}
	return l, d
}

// Gauge gives the largest entry of L21, and Perm stays a permutation.
func TestGauge(t *testing.T) {
	rng := rand.New(rand.NewPCG(13, 14))
	for _, c := range fronts() {
		n, s := c[0], c[1]
		f, rest := split(n, s, random(rng, n).At)
		g, err := f.Eliminate(rest, make([]float64, (n+2)*s))
		if err != nil {
			t.Fatal(err)
		}
		top := 0.0
		for _, v := range f.Panel[s*s:] {
			top = max(top, math.Abs(v))
		}
		if g.Growth != top || top == 0 {
			t.Errorf("%v: growth %g, largest entry %g", c, g.Growth, top)
		}
		for i, p := range f.Perm {
			if p < 0 || int(p) >= s || slices.Index(f.Perm, p) != i {
				t.Fatalf("%v: no permutation: %v", c, f.Perm)
			}
		}
	}
}

func TestAllocates(t *testing.T) {
	n, s := 60, 25
	f, rest := split(n, s, random(rand.New(rand.NewPCG(11, 12)), n).At)
	p0, r0 := slices.Clone(f.Panel), slices.Clone(rest)
	work, x := make([]float64, (n+2)*s), make([]float64, 3*n)
	if a := testing.AllocsPerRun(10, func() {
		copy(f.Panel, p0)
		copy(rest, r0)
		if _, err := f.Eliminate(rest, work); err != nil {
			t.Fatal(err)
		}
		f.Down(x[:s], x[s:n], work)
		f.Up(x[:s], x[s:n], work)
	}); a != 0 {
		t.Errorf("%g allocations", a)
	}
}

// A front with a number that is none in its leading block has no pivots, wherever that number stands.
func TestSingular(t *testing.T) {
	for name, v := range map[string]float64{"zero": 0, "not a number": math.NaN(), "infinite": math.Inf(1)} {
		t.Run(name, func(t *testing.T) {
			f, rest := split(3, 2, func(i, j int) float64 { return v })
			if _, err := f.Eliminate(rest, make([]float64, 20)); !errors.Is(err, ErrSingular) {
				t.Error("the error is", err)
			}
		})
	}
	a := random(rand.New(rand.NewPCG(15, 16)), 21)
	for row := range 20 {
		for col := range row + 1 {
			f, rest := split(21, 20, func(i, j int) float64 {
				if i == row && j == col {
					return math.NaN()
				}
				return a.At(i, j)
			})
			if _, err := f.Eliminate(rest, make([]float64, 23*20)); !errors.Is(err, ErrSingular) {
				t.Errorf("not a number at %d, %d: the error is %v", row, col, err)
			}
		}
	}
}
