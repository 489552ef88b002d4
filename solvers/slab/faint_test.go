package slab

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"betaloom/solvers"
)

// TestFaintFilm: a film so thin that its one TE mode hardly leaves the cut-off has the decay u = (ef - es) k d/2 over
// k (the sheet limit of tan(q d/2) = u/q), so power exp(-2 u k |y|) of width 2/(u k), and neff - ns = u^2/2ns.
func TestFaintFilm(t *testing.T) {
	for _, d := range []float64{1e-18, 1e-24, 1e-30, 1e-100} {
		t.Run(fmt.Sprintf("%g m", d), func(t *testing.T) {
			m := &model{name: "faint", w0: frequency(testWavelength), layers: []medium{half(1.444), filmOf(2, d), half(1.444)}}
			modes, count := solveModel(t, New(2), m, 4)
			if count.N != 2 || modes[0].Family != "TE0" {
				t.Fatalf("%+v", count)
			}
			k := m.w0 / lightSpeed
			u := (4 - 1.444*1.444) * k * d / 2
			te := &modes[0]
			if !near(te.Weff*u*k/2, 1, 1e-12) || !near(te.DNeff[0]*1.444/(u*u), 1, 1e-12) {
				t.Errorf("width %g, expected %g; dneff %g, expected %g", te.Weff, 2/(u*k), te.DNeff[0], u*u/1.444)
			}
			for i := range modes {
				x := &modes[i]
				if !near(x.Confinement[0], 0.5, 1e-12) || !slices.Equal(x.Flags, flagNearCutoff) || !(x.NeffErr < 1e-12) || !(x.NgErr < 1e-12) {
					t.Errorf("%s: shares %v, flags %v, bounds %g %g", x.Family, x.Confinement, x.Flags, x.NeffErr, x.NgErr)
				}
			}
		})
	}
	t.Run("no doubt without a twin", func(t *testing.T) {
		x := solvers.Mode{NgErr: math.NaN()}
		unsure(&pick{}, &x)
		if len(x.Flags) != 0 {
			t.Errorf("flags %v", x.Flags)
		}
	})
}
