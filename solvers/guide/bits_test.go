package guide

import (
	"context"
	"math"
	"reflect"
	"testing"

	"betaloom/solvers"
)

// The same point from the same neighbour has the same bits, whatever was asked in between, and in another Guide.
func TestSameBits(t *testing.T) {
	point := func(l, width, angle float64) solvers.Q {
		return solvers.Q{frequency(l * um), width * um, 0.22 * um, angle * math.Pi / 180}
	}
	walk := func(g *Guide) (out []solvers.Mode) {
		var near []solvers.Mode
		for _, q := range []solvers.Q{point(1.55, 0.5, 90), point(1.552, 0.5, 90), point(1.552, 0.46, 90), point(1.552, 0.46, 80), point(1.5, 0.7, 80)} {
			modes, _, err := g.Modes(context.Background(), q, 2, near)
			if err != nil {
				t.Fatal(err)
			}
			near = modes
			for _, m := range modes {
				m.State = nil
				out = append(out, m)
			}
		}
		return out
	}
	text := at(strip, "accuracy: {neff: 1e-5}")
	g := guide(t, text)
	first := walk(g)
	solve(t, g, point(1.3, 1.1, 70), 4)
	if again := walk(g); !reflect.DeepEqual(bits(first), bits(again)) {
		t.Error("other bits the second time")
	}
	if other := walk(guide(t, text)); !reflect.DeepEqual(bits(first), bits(other)) {
		t.Error("other bits in another guide")
	}
}

// bits are the numbers of modes, NaN made comparable.
func bits(modes []solvers.Mode) (out []uint64) {
	for _, m := range modes {
		for _, v := range append(append([]float64{m.Neff, m.Kappa, m.Ng, m.GVD, m.Beta3, m.NeffErr, m.NgErr, m.GVDErr, m.Beta3Err, m.ExShare, m.Aeff}, m.DNeff...), m.DNg...) {
			out = append(out, math.Float64bits(v))
		}
		for _, v := range m.Signature {
			out = append(out, uint64(math.Float32bits(v)))
		}
	}
	return out
}
