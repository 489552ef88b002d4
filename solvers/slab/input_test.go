package slab

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"betaloom/solvers"
)

// TestBoundsCoverInputs: the permittivities come from evaluating materials and carry a few roundings. With
// errors of that size, 4 x 2^-53 of every number and 2^-53 of every thickness, outputs move less than their
// bounds; with errors 1e4 times that, which shows the movement apart from the solver's own rounding, less
// than 1e4 bounds.
func TestBoundsCoverInputs(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 9))
	models := layeredModels()
	for i := range 12 {
		w := frequency(0.7e-6 + 0.017e-6*float64(i))
		models = append(models, &model{name: fmt.Sprintf("low contrast %d", i), w0: w, layers: []medium{half(1.401), filmOf(1.41, 3.2e-6), half(1.4)}})
	}
	for _, m := range models {
		t.Run(m.name, func(t *testing.T) {
			exact, _ := solveModel(t, New(2), m, 40)
			if len(exact) == 0 {
				t.Fatal("no mode")
			}
			for _, size := range []float64{1, 1e4} {
				for range 8 {
					stack := m.stack()
					disturb(r, stack, size*0x1p-53)
					moved, _, err := New(2).Solve(context.Background(), m.w0, stack, 40)
					if err != nil || len(moved) != len(exact) {
						t.Fatalf("%d modes, then %d: %v", len(exact), len(moved), err)
					}
					compareMoved(t, exact, moved, size)
				}
			}
		})
	}
}

// disturb gives every number of a stack an error of the largest size, of either sign.
func disturb(r *rand.Rand, s *Stack, size float64) {
	off := func(by float64) complex128 { return complex(1+by*size*float64(2*r.IntN(2)-1), 0) }
	for i := range s.Layers {
		l := &s.Layers[i]
		l.Thickness.V *= off(1)
		by := [4]complex128{off(4), off(4), off(4), off(4)}
		for c := range l.Eps {
			e := &l.Eps[c]
			e.V, e.W, e.WW, e.WWW = e.V*by[0], e.W*by[1], e.WW*by[2], e.WWW*by[3]
		}
	}
}

func compareMoved(t *testing.T, exact, moved []solvers.Mode, size float64) {
	t.Helper()
	for i := range exact {
		for k := range moved {
			a, b := &exact[i], &moved[k]
			if a.Family != b.Family {
				continue
			}
			for j, v := range [][3]float64{
				{a.Neff, b.Neff, a.NeffErr}, {a.Ng, b.Ng, a.NgErr}, {a.GVD, b.GVD, a.GVDErr}, {a.Beta3, b.Beta3, a.Beta3Err}, {a.Kappa, b.Kappa, a.KappaErr},
			} {
				if off := math.Abs(v[0] - v[1]); off > size*v[2] {
					t.Errorf("%s, size %g: output %d moved by %g, bound %g", a.Family, size, j, off, v[2])
				}
			}
		}
	}
}
