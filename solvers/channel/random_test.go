package channel

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/section"
)

// randomMesh is a small mesh of any topology, bent at random, with up to three media and metal.
func randomMesh(rng *rand.Rand) *section.Mesh {
	line := func(n int) []float64 {
		x := []float64{rng.NormFloat64() * um}
		for range n {
			x = append(x, x[len(x)-1]+um*math.Pow(10, rng.Float64()*2-2))
		}
		return x
	}
	nx, ny := 1+rng.IntN(5), 1+rng.IntN(4)
	wall := func() section.Wall { return section.Wall(rng.IntN(2)) }
	m := walls(straightMesh(line(nx), line(ny), func(float64) int { return 1 + rng.IntN(5) }, func(x, y float64) int {
		return max(rng.IntN(8)-5, section.Metal+rng.IntN(3))
	}), wall(), wall(), wall(), wall())
	if rng.IntN(2) == 0 {
		for j := 1; j < ny; j++ {
			for i := 1; i < nx; i++ {
				step := min(m.X[j][i]-m.X[j][i-1], m.X[j][i+1]-m.X[j][i])
				m.X[j][i] += step * 0.6 * (rng.Float64() - 0.5)
			}
		}
	}
	return m
}

// Random sections without loss are solved with proof, whatever their cells, walls and axes; the modes have distinct
// vectors: x'By vanishes between them (for different L of a symmetric pencil).
func TestRandomSections(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	solved, found := 0, 0
	for n := range 150 {
		m := randomMesh(rng)
		var eps [][3]complex128
		for range 3 {
			e := 1 + 11*rng.Float64()
			eps = append(eps, [3]complex128{complex(e, 0), complex(e*(0.8+0.4*rng.Float64()), 0), complex(e*(0.8+0.4*rng.Float64()), 0)})
		}
		top, err := New(m)
		if err != nil {
			wantInput(t, err) // metal only
			continue
		}
		p, err := top.Assemble(m, 2*math.Pi/1.55e-6*schema.LightSpeed, media(eps...))
		if err != nil {
			t.Fatal(n, err)
		}
		pairs, count, err := p.Modes(context.Background(), Options{Low: 0.7})
		if err != nil || count.N != len(pairs) || count.N > 0 && count.Proof != "inertia" {
			t.Errorf("section %d: %d pairs, %v, %v", n, len(pairs), count, err)
			continue
		}
		solved++
		found += len(pairs)
		b := make([]complex128, top.Unknowns())
		for i, x := range pairs {
			p.MulB(b, x.X)
			for j, y := range pairs[:i] {
				if c := abs(bilinear(y.X, b)); c > 1e-6 { // residuals over the least distance of two L
					t.Errorf("section %d: modes %d and %d have x'By = %g", n, i, j, c)
				}
			}
		}
	}
	if solved < 100 || found < 200 {
		t.Errorf("only %d sections solved, with %d modes", solved, found)
	}
}

// FuzzSection: nothing panics or hangs, whatever the media; an error is one of the declared kinds.
func FuzzSection(f *testing.F) {
	for i := range uint64(12) {
		f.Add(i, 2.0, -0.1, 9.0, 0.0, -5.0, -2.0, 0.5)
	}
	f.Fuzz(func(t *testing.T, seed uint64, a, ai, b, bi, c, ci, low float64) {
		m := randomMesh(rand.New(rand.NewPCG(seed, 1)))
		top, err := New(m)
		if err != nil {
			wantInput(t, err)
			return
		}
		p, err := top.Assemble(m, 2*math.Pi/1.55e-6*schema.LightSpeed, media(isotropic(complex(a, ai)), isotropic(complex(b, bi)), [3]complex128{complex(c, ci), complex(a, ci), complex(b, ai)}))
		if err != nil {
			wantInput(t, err)
			return
		}
		_, _, err = p.Modes(context.Background(), Options{Low: low, Want: 4})
		var input *solvers.InputError
		var late *solvers.ConvergenceError
		if err != nil && !errors.As(err, &input) && !errors.As(err, &late) {
			t.Errorf("an error of no declared kind: %v", err)
		}
	})
}
