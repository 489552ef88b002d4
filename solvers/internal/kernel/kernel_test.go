package kernel

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// odd are numbers that arithmetic treats in its own way.
var odd = [...]float64{0, math.Copysign(0, -1), math.Inf(1), math.Inf(-1), math.NaN(), 5e-324, -1e-300, math.MaxFloat64}

// source gives numbers, one in thirty of them odd where it is told so.
type source struct {
	*rand.Rand
	odd bool
}

func (s source) one() float64 {
	if s.odd && s.IntN(30) == 0 {
		return odd[s.IntN(len(odd))]
	}
	return s.NormFloat64()
}

// numbers gives n numbers that do not begin at a multiple of a vector's length.
func numbers[T Number](s source, n int) []T {
	x := make([]T, n+3)
	for i := range x {
		switch p := any(&x[i]).(type) {
		case *float64:
			*p = s.one()
		case *complex128:
			*p = complex(s.one(), s.one())
		}
	}
	return x[1 : n+1 : n+1]
}

// same says whether two numbers have the same bits, or are both none.
func same(a, b float64) bool {
	return math.Float64bits(a) == math.Float64bits(b) || math.IsNaN(a) && math.IsNaN(b)
}

func compare[T Number](t *testing.T, what string, got, want []T) {
	t.Helper()
	for i := range want {
		g, w := any(got[i]), any(want[i])
		ok := false
		switch g := g.(type) {
		case float64:
			ok = same(g, w.(float64))
		case complex128:
			ok = same(real(g), real(w.(complex128))) && same(imag(g), imag(w.(complex128)))
		}
		if !ok {
			t.Fatalf("%s: place %d: %v, defined as %v", what, i, g, w)
		}
	}
}

func clone[T Number](x []T) []T { return append([]T(nil), x...) }

// levels runs a check for every set of instructions that this machine has, with
// plain numbers and with odd ones among them.
func levels(t *testing.T, do func(t *testing.T, l level, s source)) {
	for l := plain; l <= best; l++ {
		for _, odd := range []bool{false, true} {
			t.Run(fmt.Sprintf("level %d, odd numbers %v", l, odd), func(t *testing.T) {
				do(t, l, source{rand.New(rand.NewPCG(1, uint64(l))), odd})
			})
		}
	}
}

// shapes calls do with all small sizes and some larger ones.
func shapes(do func(m, n, k int)) {
	some := []int{1, 2, 3, 4, 5, 7, 8, 9, 13, 16, 17, 23, 31, 33, 64, 67, 131}
	for _, m := range some[:14] {
		for _, n := range some {
			for _, k := range []int{1, 2, 17} {
				do(m, n, k)
			}
		}
	}
}

// The definition of Sub against sums in extended precision (two parts each, by
// the exact products of FMA): k+1 roundings, each of half a unit of 2^-52 of the sum of sizes.
func TestSubDefinition(t *testing.T) {
	s := source{rand.New(rand.NewPCG(3, 4)), false}
	m, n, k := 5, 9, 40
	a, b, c := numbers[float64](s, m*k), numbers[float64](s, k*n), numbers[float64](s, m*n)
	got := clone(c)
	plainSub(&View[float64]{got, n, 1}, &View[float64]{a, k, 1}, &View[float64]{b, n, 1}, m, n, k)
	for i := range m {
		for j := range n {
			sum, low, size := c[i*n+j], 0.0, math.Abs(c[i*n+j])
			for q := range k {
				p := -a[i*k+q] * b[q*n+j]
				low += math.FMA(-a[i*k+q], b[q*n+j], -p)
				next := sum + p
				low += p - (next - sum) - (sum - (next - (next - sum)))
				sum = next
				size += math.Abs(p)
			}
			if d := math.Abs(got[i*n+j] - (sum + low)); !(d <= float64(k+1)*0x1p-53*size) {
				t.Errorf("%d, %d: off by %g", i, j, d)
			}
		}
	}
}

func checkSub[T Number](t *testing.T, l level, s source) {
	shapes(func(m, n, k int) {
		for _, step := range []int{1, 3} {
			row := (k-1)*step + 1
			a := View[T]{numbers[T](s, m*row), row, step}
			b := View[T]{numbers[T](s, k*(n+2)), n + 2, 1}
			c := numbers[T](s, m*(n+1))
			want := clone(c)
			sub(l, &View[T]{c, n + 1, 1}, &a, &b, m, n, k)
			sub(plain, &View[T]{want, n + 1, 1}, &a, &b, m, n, k)
			compare(t, fmt.Sprint(m, n, k, step), c, want)
		}
	})
}

func TestSub(t *testing.T)        { levels(t, checkSub[float64]) }
func TestSubComplex(t *testing.T) { levels(t, checkSub[complex128]) }

func TestSolve(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) {
		shapes(func(m, n, k int) {
			a, x := View[float64]{numbers[float64](s, m*(m+k)), m + k, 1}, numbers[float64](s, m*(n+k))
			got, want, rows := clone(x), clone(x), clone(x)
			l.solveReal(&a, &View[float64]{got, n + k, 1}, m, n)
			plain.solveReal(&a, &View[float64]{want, n + k, 1}, m, n)
			rowSolve(plain, &a, &View[float64]{rows, n + k, 1}, m, n)
			compare(t, fmt.Sprint(m, n, k), got, want)
			compare(t, fmt.Sprint("row by row ", m, n, k), got, rows)
		})
	})
}

func TestSolveComplex(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) {
		shapes(func(m, n, k int) {
			a, x := View[complex128]{numbers[complex128](s, m*(m+k)), m + k, 1}, numbers[complex128](s, m*(n+k))
			want := clone(x)
			l.solveComplex(&a, &View[complex128]{x, n + k, 1}, m, n)
			plain.solveComplex(&a, &View[complex128]{want, n + k, 1}, m, n)
			compare(t, fmt.Sprint(m, n, k), x, want)
		})
	})
}

func checkTurn[T Number](t *testing.T, s source, turn func(l level, dst, src *View[T], scale []T, m, n int), l level) {
	shapes(func(m, n, k int) {
		src, scale := View[T]{numbers[T](s, n*(m+k)), m + k, 1}, numbers[T](s, n)
		if k == 2 {
			scale = nil
		}
		got := numbers[T](s, m*(n+k))
		want := clone(got)
		turn(l, &View[T]{got, n + k, 1}, &src, scale, m, n)
		turn(plain, &View[T]{want, n + k, 1}, &src, scale, m, n)
		compare(t, fmt.Sprint(m, n, k), got, want)
	})
}

func TestTurn(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) { checkTurn(t, s, level.turnReal, l) })
}

func TestTurnComplex(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) { checkTurn(t, s, level.turnComplex, l) })
}

func TestDots(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) {
		shapes(func(m, n, k int) {
			a, x, y := View[float64]{numbers[float64](s, m*(n+k)), n + k, 1}, numbers[float64](s, n), numbers[float64](s, m)
			want := clone(y)
			l.dotsReal(y, &a, x)
			plain.dotsReal(want, &a, x)
			compare(t, fmt.Sprint(m, n, k), y, want)
		})
	})
}

func TestDotComplex(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) {
		for n := range 70 {
			x, y := numbers[complex128](s, n), numbers[complex128](s, n)
			a, b, c, d := l.dotComplex(x, y)
			p, q, r, v := plain.dotComplex(x, y)
			compare(t, fmt.Sprint(n), []float64{a, b, c, d}, []float64{p, q, r, v})
		}
	})
}

func TestPeak(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) {
		for n := range 70 {
			x, y := numbers[float64](s, n), numbers[complex128](s, n)
			got, want := []float64{l.peakReal(x), l.peakComplex(y)}, []float64{plain.peakReal(x), plain.peakComplex(y)}
			compare(t, fmt.Sprint(n), got, want)
		}
	})
}

// One row, by its own entry.
func TestSubRow(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) {
		shapes(func(k, n, more int) {
			y, a, b := numbers[float64](s, n), numbers[float64](s, k), numbers[float64](s, k*(n+more))
			want := clone(y)
			l.rowReal(y, a, b, n+more)
			plain.rowReal(want, a, b, n+more)
			compare(t, fmt.Sprint(k, n, more), y, want)
		})
	})
}

// The diagonal grows so that some columns pass and some do not, from the first on and from later ones.
func TestPivots(t *testing.T) {
	levels(t, func(t *testing.T, l level, s source) {
		for _, n := range []int{1, 2, 7, 16, 31, 32, 33, 40, 64, 65, 100} {
			for round := range 12 {
				row, end := n+round%3, min(n, 16)
				w, u := numbers[float64](s, end*row+n), numbers[float64](s, end*row+n)
				for i := range end {
					w[i*row+i] += float64(round) * s.NormFloat64()
				}
				wantW, wantU := clone(w), clone(u)
				got := l.pivotsReal(w, u, row, n, 0, end, 0.6)
				want := plain.pivotsReal(wantW, wantU, row, n, 0, end, 0.6)
				if at := got + 1; got < end && got == want { // go on behind the one that failed, as a search for pivots does
					got = l.pivotsReal(w, u, row, n, at, end, 0.6)
					want = plain.pivotsReal(wantW, wantU, row, n, at, end, 0.6)
				}
				if got != want {
					t.Fatalf("%d columns: the first left is %d, defined as %d", n, got, want)
				}
				compare(t, fmt.Sprint("w ", n, round), w, wantW)
				compare(t, fmt.Sprint("u ", n, round), u, wantU)
			}
		}
	})
}

// Products with small whole numbers are exact, so any order of summation gives what a
// textbook's double loop gives.
func TestVectors(t *testing.T) {
	for n := range 40 {
		x, y, z := make([]complex128, n), make([]complex128, n), make([]complex128, n)
		u, v := make([]float64, n), make([]float64, n)
		var dot, inner complex128
		var flat float64
		for i := range n {
			x[i], y[i] = complex(float64(i%7-3), float64(i%5)), complex(float64(i%4), float64(i%3-1))
			u[i], v[i] = real(x[i]), real(y[i])
			dot += x[i] * y[i]
			inner += complex(real(x[i]), -imag(x[i])) * y[i]
			flat += u[i] * v[i]
			z[i] = y[i] + (2-3i)*x[i]
		}
		if d, i, f := Dot(x, y), Inner(x, y), Dot(u, v); d != dot || i != inner || f != flat || Inner(u, v) != flat {
			t.Errorf("%d numbers: products %v, %v, %v, want %v, %v, %v", n, d, i, f, dot, inner, flat)
		}
		Axpy(y, x, 2-3i)
		compare(t, fmt.Sprint(n), y, z)
	}
}

func TestNothing(t *testing.T) {
	Sub(View[float64]{}, View[float64]{}, View[float64]{}, 0, 3, 3)
	Solve(View[complex128]{}, View[complex128]{}, 0, 4)
	Turn(View[float64]{}, View[float64]{}, nil, 0, 0)
	SubDots(nil, View[float64]{}, nil, 0)
	if d := Dot[float64](nil, nil); d != 0 {
		t.Error("the product of nothing is", d)
	}
}

// The vector code must not be reached with a matrix that is shorter than its shape.
func TestShort(t *testing.T) {
	full := func() View[float64] { return View[float64]{Data: make([]float64, 16), Row: 4} }
	for name, do := range map[string]func(short View[float64]){
		"C":      func(v View[float64]) { Sub(v, full(), full(), 4, 4, 4) },
		"A":      func(v View[float64]) { Sub(full(), v, full(), 4, 4, 4) },
		"B":      func(v View[float64]) { Sub(full(), full(), v, 4, 4, 4) },
		"L":      func(v View[float64]) { v.Data = v.Data[:14]; Solve(v, full(), 4, 4) },
		"X":      func(v View[float64]) { Solve(full(), v, 4, 4) },
		"source": func(v View[float64]) { Turn(full(), v, make([]float64, 4), 4, 4) },
		"rows":   func(v View[float64]) { SubDots(make([]float64, 4), v, make([]float64, 4), 4) },
	} {
		t.Run(name, func(t *testing.T) {
			defer func() {
				if recover() == nil {
					t.Error("a short matrix is read beyond its end")
				}
			}()
			v := full()
			v.Data = v.Data[:15]
			do(v)
		})
	}
}

func TestAllocates(t *testing.T) {
	x, y := make([]float64, 400), make([]complex128, 400)
	v, w := View[float64]{Data: x, Row: 20}, View[complex128]{Data: y, Row: 20}
	if n := testing.AllocsPerRun(10, func() {
		Sub(v, v, v, 20, 20, 20)
		Sub(w, w, w, 20, 20, 20)
		Solve(v, v, 20, 20)
		Solve(w, w, 20, 20)
		Turn(v, v, x[:20], 20, 20)
		Turn(w, w, y[:20], 20, 20)
		SubDots(x, v, x[:20], 20)
		SubDots(y, w, y[:20], 20)
		Axpy(y, y, 1)
		Dot(x, x)
		Inner(y, y)
		Peak(x)
		Peak(y)
		Pivots(x, x, 20, 20, 0, 10, 0.6)
		Pivots(y, y, 20, 20, 0, 10, 0.6)
	}); n != 0 {
		t.Errorf("%g allocations", n)
	}
}

// BenchmarkSub measures n x n by n x n.
func BenchmarkSub(b *testing.B) {
	for l := plain; l <= best; l++ {
		for _, n := range []int{16, 32, 64, 128, 256, 400} {
			b.Run(fmt.Sprintf("level=%d/n=%d", l, n), func(b *testing.B) {
				m := View[float64]{make([]float64, n*n), n, 1}
				c := View[float64]{make([]float64, n*n), n, 1}
				for b.Loop() {
					sub(l, &c, &m, &m, n, n, n)
				}
				b.ReportMetric(2*float64(n*n*n)*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFlop/s")
			})
		}
	}
}
