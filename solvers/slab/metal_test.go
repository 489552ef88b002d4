package slab

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"betaloom/solvers"
)

// slot is a film of index n between two metals of 0.14 - 5.88i.
func slot(n complex128, d float64) *model {
	n1 := 0.14 - 5.88i
	out := medium{eps: isotropic(n1 * n1), open: true}
	film := medium{eps: isotropic(n * n), d: d, stretch: 1}
	return &model{name: fmt.Sprintf("slot of %g m", d), w0: frequency(1.55e-6), layers: []medium{out, film, out}}
}

// residual says how far a mode is from tanh(g2 d/2) = -e2 g1/(e1 g2), or coth for the odd
// ones, with g1 and g2 the decay over k in metal and film (Economou, Phys. Rev. 182, 539 (1969)); TE
// is the same with both permittivities taken as one, even and odd those of Ex.
func residual(m *model, mode *solvers.Mode) float64 {
	n := complex(mode.Neff, -mode.Kappa)
	e1, e2 := m.layers[0].eps[0], m.layers[1].eps[0]
	g1, g2 := cmplx.Sqrt(n*n-e1), cmplx.Sqrt(n*n-e2)
	th := cmplx.Tanh(g2 * complex(m.w0/lightSpeed*m.layers[1].d/2, 0))
	if mode.Type == "TE" {
		e1, e2 = 1, 1
	}
	left, right := g2*e1*th, -e2*g1
	if mode.Symmetry == "odd" {
		left, right = g2*e1, -e2*g1*th
	}
	return cmplx.Abs(left-right) / (cmplx.Abs(left) + cmplx.Abs(right))
}

// TestSlotBetweenMetals sweeps the width of a slot: the half-spaces' index, 0.14, lets modes
// come in at low effective index, past the many evanescent ones that crowd there.
// Every mode obeys the closed form, their number is that of winding in small
// steps, and each family moves as its own derivative in the width says.
func TestSlotBetweenMetals(t *testing.T) {
	for _, n := range []complex128{2.14 - 0.008i, 1.45} {
		s := New(2)
		before := map[string]solvers.Mode{}
		for i := range 99 {
			m := slot(n, 0.02e-6+0.01e-6*float64(i))
			t.Run(fmt.Sprint(n, m.name), func(t *testing.T) {
				modes, count := solveModel(t, s, m, 40)
				if i%14 == 0 && count.N != m.winding(false)+m.winding(true) {
					t.Errorf("%d modes, expected %d", count.N, m.winding(false)+m.winding(true))
				}
				if count.N < len(before) || modes[0].Family != "TM0" {
					t.Errorf("%d modes after %d, the first %s", count.N, len(before), modes[0].Family)
				}
				for _, mode := range modes {
					if e := residual(m, &mode); e > 1e-11 { // rounding, times n^2/g2^2
						t.Errorf("%s: residual %g", mode.Family, e)
					}
					slopeAgrees(t, m, before, &mode)
				}
			})
		}
		if len(before) < 3 {
			t.Errorf("%v: %d families", n, len(before))
		}
	}
}

// slopeAgrees compares a family's step with the trapezoidal rule on dneff/dp0, away from its start
// (p0 is the logarithm of the width). The rule's error is a share of how much the slope changes.
func slopeAgrees(t *testing.T, m *model, before map[string]solvers.Mode, mode *solvers.Mode) {
	t.Helper()
	d := m.layers[1].d
	now := *mode
	now.DNeff = []float64{mode.DNeff[0] / d}
	last, seen := before[mode.Family]
	before[mode.Family] = now
	if !seen {
		return
	}
	step := now.Neff - last.Neff
	a, b := 0.01e-6*last.DNeff[0], 0.01e-6*now.DNeff[0]
	if math.Abs(step-(a+b)/2) > math.Abs(a-b)/2 {
		t.Errorf("%s: step %g, slopes %g and %g", mode.Family, step, a, b)
	}
}

// TestFarPlasmons: the two faces of an opaque metal carry plasmons 4e-6 apart, far from the film of the
// highest permittivity. Each is a root of the characteristic equation in 420 bits, within its bound.
func TestFarPlasmons(t *testing.T) {
	square := func(n complex128) [3]complex128 { return isotropic(n * n) }
	low := square(1.0131119104191721)
	lossy := square(0.574603425160236 - 1.6344107365659803i)
	m := &model{name: "far plasmons", w0: frequency(1.55e-6), top: true, layers: []medium{
		{eps: low, open: true}, {eps: lossy, d: 1.79309e-6}, {eps: low, d: 2.81449e-6}, {eps: lossy, d: 0.0506559e-6},
		{eps: square(2.2548553503221058), d: 0.0373958e-6}, {eps: square(0.13968533992739424 - 1.5675455767558368i), d: 0.383207e-6},
	}}
	modes, count, err := New(2).Solve(context.Background(), m.w0, m.stack(), 40)
	if err != nil || count.N != 4 {
		t.Fatalf("%+v, %v", count, err)
	}
	for _, mode := range modes {
		t.Run(mode.Family, func(t *testing.T) {
			n := cx(complex(mode.Neff, -mode.Kappa))
			want := m.refine(t, true, n.mul(n), shift{zero(), zero(), zero()}).sqrt().float()
			if off := math.Abs(mode.Neff - real(want)); !(off <= mode.NeffErr) || off > 1e-10 {
				t.Errorf("neff %.17g, off by %g, bound %g", mode.Neff, off, mode.NeffErr)
			}
			if off := math.Abs(mode.Kappa + imag(want)); !(off <= mode.KappaErr) || off > 1e-10 {
				t.Errorf("kappa %.17g, off by %g, bound %g", mode.Kappa, off, mode.KappaErr)
			}
		})
	}
}
