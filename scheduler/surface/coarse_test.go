package surface

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"betaloom/schema"
	"betaloom/solvers/jet"
	"betaloom/solvers/slab"
)

// pairTE solves the TE modes of two coupled films in the place of slabSweep's
// parameters: thickness is that of one film, the other is 0.4 um thick, and index_shift
// is what the gap is wider than 2 um by, in um.
func pairTE(t testing.TB, solver *slab.Solver, q slabPoint) []slabValues {
	t.Helper()
	layer := func(n float64, thickness jet.Jet) slab.Layer {
		e := jet.Const(complex(n*n, 0))
		return slab.Layer{Eps: [3]jet.Jet{e, e, e}, Thickness: thickness}
	}
	film := jet.Parameter(q.d, 0, 2)
	gap := jet.Add(jet.Const(2e-6), jet.Scale(jet.Parameter(q.shift, 1, 2), 1e-6))
	stack := slab.Stack{Layers: []slab.Layer{
		layer(1.45, jet.Jet{}), layer(2, jet.Const(0.4e-6)), layer(1.45, gap), layer(2, film), layer(1.45, jet.Jet{}),
	}}
	stack.Layers[0].HalfSpace, stack.Layers[4].HalfSpace = true, true
	modes, _, err := solver.Solve(context.Background(), q.w, &stack, 8)
	if err != nil {
		t.Fatal(err)
	}
	list := make([]slabValues, 2)
	for _, m := range modes {
		for i := range list {
			if m.Family == fmt.Sprintf("TE%d", i) {
				list[i] = slabValues{
					neff: m.Neff, ng: m.Ng, gvd: m.GVD / siGVD, beta3: m.Beta3 / siBeta3,
					dneffD: m.DNeff[0], dneffS: m.DNeff[1], dngD: m.DNg[0], dngS: m.DNg[1], guided: true,
				}
			}
		}
	}
	return list
}

// coarse compares every quantity of TE0 and TE1 with the solution at random points of a box.
func coarse(t *testing.T, axes []schema.AxisBlock, n int, solve func(q slabPoint) []slabValues) {
	p := slabSweep(axes)
	s := writeRows(t, p, axes, func(values []float64) []slabValues { return solve(at(p, axes, values)) })
	r := rand.New(rand.NewPCG(7, 9))
	compared := 0
	for range n {
		values := anywhere(r, axes)
		for m, exact := range solve(at(p, axes, values)) {
			v, err := s.At(fmt.Sprintf("TE%d", m), values)
			if absent := (*AbsentError)(nil); errors.As(err, &absent) {
				continue
			} else if err != nil {
				t.Fatal(err)
			}
			compared++
			for k, b := range []Bounded{v.Neff, v.Ng, v.GVD, v.Beta3, v.DNeff[0], v.DNeff[1], v.DNg[0], v.DNg[1]} {
				name := [...]string{"neff", "ng", "gvd", "beta3", "dneff/dthickness", "dneff/dshift", "dng/dthickness", "dng/dshift"}[k]
				want := [...]float64{exact.neff, exact.ng, exact.gvd, exact.beta3, exact.dneffD, exact.dneffS, exact.dngD, exact.dngS}[k]
				if e := math.Abs(b.Value - want); !(e <= b.Bound+1e-9*math.Abs(want)) { // the solvers' own error, amplified by differences
					t.Errorf("TE%d %s at %v: found %g with bound %.3g, expected %g", m, name, values, b.Value, b.Bound, want)
				}
			}
		}
	}
	if compared < n {
		t.Errorf("found %d values inside the surfaces, expected at least %d", compared, n)
	}
}

// The bounds hold where the grid does not resolve the surface: across the anti-crossing of two
// films, much narrower than a cell, against solutions at the points themselves, and near
// cut-off on a handful of nodes, against the slab's closed form.
func TestBoundsOnCoarseGrids(t *testing.T) {
	films := func(lo, hi float64, n int) schema.AxisBlock { return span("thickness", lo, hi, n) }
	gaps := span("index_shift", -0.5, 0.5, 5)
	pairs := map[string][]schema.AxisBlock{
		"node at the crossing":   {wavelengths(9), gaps, films(0.37e-6, 0.43e-6, 7)},
		"crossing inside a cell": {wavelengths(9), gaps, films(0.36e-6, 0.43e-6, 6)},
		"two axes":               {wavelengths(5), films(0.37e-6, 0.43e-6, 8)},
	}
	for name, axes := range pairs {
		t.Run(name, func(t *testing.T) {
			solver := slab.New(2)
			coarse(t, axes, 300, func(q slabPoint) []slabValues { return pairTE(t, solver, q) })
		})
	}
	for name, axes := range map[string][]schema.AxisBlock{
		"cut-off 5x4": {span("wavelength", 1.2e-6, 1.7e-6, 5), films(0.3e-6, 0.9e-6, 4)},
		"cut-off 6x6": {span("wavelength", 1.2e-6, 1.9e-6, 6), films(0.3e-6, 1.1e-6, 6)},
	} {
		t.Run(name, func(t *testing.T) {
			coarse(t, axes, 1500, func(q slabPoint) []slabValues { return []slabValues{slabTE(0, q), slabTE(1, q)} })
		})
	}
}
