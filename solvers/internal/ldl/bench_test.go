package ldl

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"
)

// fronts are sizes as they occur: blocks of cells, then fronts of the tree.
func fronts() [][2]int {
	return [][2]int{{20, 10}, {36, 23}, {40, 20}, {56, 40}, {60, 30}, {120, 60}, {200, 80}, {400, 150}}
}

func benchmark[T Number](b *testing.B, flops float64, one func(x, y float64) T) {
	for _, c := range fronts() {
		benchmarkOne(b, c, flops, func(_, _ int, x, y float64) T { return one(x, y) })
	}
}

func benchmarkOne[T Number](b *testing.B, size [2]int, flops float64, one func(i, j int, x, y float64) T) {
	n, s := size[0], size[1]
	b.Run(fmt.Sprintf("%d/%d", n, s), func(b *testing.B) {
		rng := rand.New(rand.NewPCG(7, 8))
		x, y := random(rng, n), random(rng, n)
		f, rest := split(n, s, func(i, j int) T { return one(i, j, x.At(i, j), y.At(i, j)) })
		work := make([]T, (n+2)*s)
		p0, r0 := slices.Clone(f.Panel), slices.Clone(rest)
		for b.Loop() {
			copy(f.Panel, p0)
			copy(rest, r0)
			if _, err := f.Eliminate(rest, work); err != nil {
				b.Fatal(err)
			}
		}
		r := float64(n - s)
		total := flops * (float64(s*s*s)/3 + float64(s*s)*r + float64(s)*r*r)
		b.ReportMetric(total*float64(b.N)/b.Elapsed().Seconds()/1e9, "GFlop/s")
	})
}

// BenchmarkEliminate measures random fronts, a third of their diagonal zero; it
// counts a third of S^3, S^2 R and S R^2 operations, for R = N - S.
func BenchmarkEliminate(b *testing.B) {
	benchmark(b, 1, func(x, _ float64) float64 { return x })
}

// BenchmarkEliminateDefinite measures fronts whose diagonal dominates, so that no pivot is looked for.
func BenchmarkEliminateDefinite(b *testing.B) {
	for _, c := range fronts() {
		benchmarkOne(b, c, 1, func(i, j int, x, _ float64) float64 {
			if i == j {
				return x + float64(c[0])
			}
			return x
		})
	}
}

// BenchmarkEliminateComplex counts four times as many.
func BenchmarkEliminateComplex(b *testing.B) {
	benchmark(b, 4, func(x, y float64) complex128 { return complex(x, y) })
}

// BenchmarkSolve measures Down and Up together; it counts the bytes of the panel twice.
func BenchmarkSolve(b *testing.B) {
	for _, c := range fronts() {
		n, s := c[0], c[1]
		b.Run(fmt.Sprintf("%d/%d", n, s), func(b *testing.B) {
			a := random(rand.New(rand.NewPCG(7, 8)), n)
			f, rest := split(n, s, a.At)
			work := make([]float64, (n+2)*s)
			if _, err := f.Eliminate(rest, work); err != nil {
				b.Fatal(err)
			}
			x, below := make([]float64, s), make([]float64, n-s)
			b.SetBytes(int64(16 * n * s))
			for b.Loop() {
				f.Down(x, below, work)
				f.Up(x, below, work)
			}
		})
	}
}
