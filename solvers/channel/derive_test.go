package channel

import (
	"context"
	"math"
	"testing"

	"betaloom/schema"
	"betaloom/solvers/jet"
	"betaloom/solvers/section"
)

// dispersive is a lossless or lossy core and a cladding with indices that depend on w (in units of w0) and on
// parameter 1; parameter 0 moves the mesh.
func dispersive(w, w0, p float64, loss complex128) []section.Medium {
	u := jet.Scale(jet.Frequency(w), complex(1/w0, 0))
	q := jet.Parameter(p, 1, 2)
	n := jet.Add(jet.Const(3.3+loss), jet.Add(jet.Scale(jet.Mul(u, u), 0.15), jet.Mul(jet.Scale(q, 0.3), u)))
	core := jet.Mul(n, n)
	e := jet.Add(jet.Const(2), jet.Scale(u, 0.1))
	return []section.Medium{
		{Eps: [3]jet.Jet{core, jet.Mul(core, jet.Const(1.02)), jet.Mul(core, jet.Add(jet.Const(0.9), jet.Scale(q, 0.1)))}},
		{Eps: [3]jet.Jet{e, e, e}},
	}
}

// bent is the strip's mesh at a shift s of parameter 0, which moves every line and tilts it.
func bent(s float64, tilt float64) *section.Mesh {
	m := stripMesh(5, 1, false)
	motion := stripMesh(5, 1, false)
	for j := range m.X {
		motion.Y[j] = 0.3 * math.Sin(m.Y[j]/um)
		for i := range m.X[j] {
			x := m.X[j][i]
			motion.X[j][i] = math.Sin(x/um) * (0.4 + 0.2*math.Cos(m.Y[j]/um))
			m.X[j][i] += tilt * x * (1 - x/(7*um)) * math.Cos(3*m.Y[j]/um)
			m.X[j][i] += s * motion.X[j][i]
		}
	}
	for j := range m.Y {
		m.Y[j] += s * motion.Y[j]
	}
	m.DX, m.DY = [][][]float64{motion.X, nil}, [][]float64{motion.Y, nil}
	return m
}

// The derivatives are those of the discrete eigenvalue, so that differences of it must agree to their own error.
func TestDerivativesAgainstDifferences(t *testing.T) {
	const w0 = stripK * schema.LightSpeed
	for name, c := range map[string]struct {
		tilt float64
		loss complex128
	}{"straight": {0, 0}, "tilted": {0.08, 0}, "lossy": {0, -0.05i}, "tilted and lossy": {0.08, -0.05i}} {
		t.Run(name, func(t *testing.T) {
			top, err := New(bent(0, c.tilt))
			if err != nil {
				t.Fatal(err)
			}
			at := func(w, s, p float64, slopes bool) Derivatives {
				pc, err := top.Assemble(bent(s, c.tilt), w, dispersive(w, w0, p, c.loss))
				if err != nil {
					t.Fatal(err)
				}
				pairs, _, err := pc.Modes(context.Background(), Options{Want: 1, Low: 1.5, Slopes: slopes})
				if err != nil {
					t.Fatal(err)
				}
				if !slopes {
					return Derivatives{L: jet.Jet{V: pairs[0].L}}
				}
				return pc.Differentiate(&pairs[0])
			}
			got := at(w0, 0, 0.1, true).L
			compare := func(what string, got, want complex128, tol float64) {
				t.Helper()
				if e := abs(got-want) / abs(want); !(e < tol) {
					t.Errorf("%s: %g, want %g (%.1e)", what, got, want, e)
				}
			}
			first := func(f func(h float64) complex128, h float64) complex128 {
				return (8*(f(h)-f(-h)) - (f(2*h) - f(-2*h))) / complex(12*h, 0)
			}
			// tolerances: error of the difference of fourth order and rounding over the step
			compare("d/dw", got.W, first(func(h float64) complex128 { return at(w0*(1+h), 0, 0.1, false).L.V / w0 }, 1e-3), 1e-8)
			compare("d2/dw2", got.WW, first(func(h float64) complex128 { return at(w0*(1+h), 0, 0.1, true).L.W / w0 }, 1e-3), 1e-7)
			compare("d3/dw3", got.WWW, first(func(h float64) complex128 { return at(w0*(1+h), 0, 0.1, true).L.WW / w0 }, 1e-3), 1e-6)
			for i, q := range [][2]float64{{1, 0}, {0, 1}} {
				step := []float64{1e-10, 1e-3}[i]
				shift := func(h float64) (s, p float64) { return h * q[0], 0.1 + h*q[1] }
				compare("d/dp", got.P[i], first(func(h float64) complex128 { s, p := shift(h); return at(w0, s, p, false).L.V }, step), 1e-6)
				compare("d2/dwdp", got.WP[i], first(func(h float64) complex128 { s, p := shift(h); return at(w0, s, p, true).L.W }, step), 1e-6)
			}
		})
	}
}
