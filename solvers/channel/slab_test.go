package channel

import (
	"context"
	"math"
	"testing"

	"betaloom/solvers/jet"
	"betaloom/solvers/section"
	"betaloom/solvers/slab"
)

// Between side walls of the right kind a film has the modes of the slab of solvers/slab, another equation and
// another method: TE (E along x) with electric side walls, TM with magnetic ones. The grounds are the mesh's electric
// walls above and below, so nothing is cut off. 0.2 um between the side walls admit no variation
// along x above N = low. Tolerance: discretisation, with the film's edges on mesh lines.
func TestSlabAsLimit(t *testing.T) {
	k := 2 * math.Pi / 1.55e-6
	const d, gap, low = 0.5e-6, 1.5e-6, 1.2
	film := [3]complex128{12.1, 11.2, 10.4}
	clad := [3]complex128{2.1, 2.2, 2.3}
	for _, c := range []struct {
		name string
		film [3]complex128
		side section.Wall
	}{
		{"TE", film, section.Electric},
		{"TM", film, section.Magnetic},
		{"TE", [3]complex128{12.1 - 0.1i, 11, 10}, section.Electric},
		{"TM", [3]complex128{12.1, 11 - 0.1i, 10 - 0.2i}, section.Magnetic},
	} {
		t.Run(c.name, func(t *testing.T) {
			ys := []float64{0, gap - 0.5*um, gap, gap + d/2, gap + d, gap + d + 0.5*um, 2*gap + d}
			m := straightMesh(uniform(0.2*um, 1), ys, always(11), func(x, y float64) int {
				if y > gap && y < gap+d {
					return 0
				}
				return 1
			})
			walls(m, c.side, c.side, section.Electric, section.Electric)
			layer := func(e [3]complex128, h float64) slab.Layer {
				return slab.Layer{Eps: [3]jet.Jet{jet.Const(e[0]), jet.Const(e[1]), jet.Const(e[2])}, Thickness: jet.Const(complex(h, 0))}
			}
			stack := &slab.Stack{Layers: []slab.Layer{layer(clad, gap), layer(c.film, d), layer(clad, gap)}, GroundBottom: true, GroundTop: true}
			list, _, err := slab.New(0).Solve(context.Background(), k*299792458, stack, 40)
			if err != nil {
				t.Fatal(err)
			}
			var want []complex128
			for _, s := range list {
				n := complex(s.Neff, -s.Kappa)
				if s.Type == c.name && real(n*n) > low {
					want = append(want, n*n)
				}
			}
			if len(want) < 2 {
				t.Fatalf("%d modes to compare", len(want))
			}
			agree(t, pencil(t, m, k, c.film, clad), low, want, 1e-8)
		})
	}
}
