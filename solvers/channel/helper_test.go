package channel

import (
	"context"
	"math"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/jet"
	"betaloom/solvers/section"
)

const um = 1e-6

// uniform gives n cells between 0 and end.
func uniform(end float64, n int) []float64 {
	x := make([]float64, n+1)
	for i := range x {
		x[i] = end * float64(i) / float64(n)
	}
	return x
}

// straightMesh is a mesh of straight lines; in says which medium a cell with this centre has.
func straightMesh(xs, ys []float64, order func(w float64) int, in func(x, y float64) int) *section.Mesh {
	m := &section.Mesh{Y: ys}
	for range ys {
		m.X = append(m.X, append([]float64{}, xs...))
	}
	for i := range len(xs) - 1 {
		m.OrderX = append(m.OrderX, order(xs[i+1]-xs[i]))
	}
	for j := range len(ys) - 1 {
		m.OrderY = append(m.OrderY, order(ys[j+1]-ys[j]))
		row := make([]int, len(xs)-1)
		for i := range row {
			row[i] = in((xs[i]+xs[i+1])/2, (ys[j]+ys[j+1])/2)
		}
		m.Medium = append(m.Medium, row)
	}
	return m
}

func walls(m *section.Mesh, left, right, bottom, top section.Wall) *section.Mesh {
	m.Left, m.Right, m.Bottom, m.Top = left, right, bottom, top
	return m
}

// media are media of constant permittivities.
func media(eps ...[3]complex128) []section.Medium {
	out := make([]section.Medium, len(eps))
	for i, e := range eps {
		out[i].Eps = [3]jet.Jet{jet.Const(e[0]), jet.Const(e[1]), jet.Const(e[2])}
	}
	return out
}

func always(p int) func(float64) int       { return func(float64) int { return p } }
func everywhere(float64, float64) int      { return 0 }
func isotropic(e complex128) [3]complex128 { return [3]complex128{e, e, e} }

func pencil(t testing.TB, m *section.Mesh, k float64, eps ...[3]complex128) *Pencil {
	t.Helper()
	top, err := New(m)
	if err != nil {
		t.Fatal(err)
	}
	p, err := top.Assemble(m, k*schema.LightSpeed, media(eps...))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func modes(t testing.TB, p *Pencil, o Options) ([]Pair, solvers.Count) {
	t.Helper()
	pairs, count, err := p.Modes(context.Background(), o)
	if err != nil {
		t.Fatal(err)
	}
	for i, m := range pairs {
		if !(m.Residual < 1e-8) {
			t.Errorf("mode %d: residual %g", i, m.Residual)
		}
	}
	return pairs, count
}

// index is the effective index of a mode without loss.
func (m Pair) index(k float64) float64 { return math.Sqrt(real(m.L)) / k }

// agree compares all modes of a pencil above an N with a list of N, each to tol.
func agree(t *testing.T, p *Pencil, low float64, want []complex128, tol float64) {
	t.Helper()
	pairs, count := modes(t, p, Options{Low: math.Sqrt(low)})
	if count.N != len(want) || len(pairs) != len(want) {
		t.Fatalf("%d modes counted (%s), %d found, %d expected", count.N, count.Proof, len(pairs), len(want))
	}
	for i, m := range pairs {
		if n := m.L / complex(p.k*p.k, 0); !(abs(n-want[i]) < tol) {
			t.Errorf("mode %d: N = %.12g, want %.12g", i, n, want[i])
		}
	}
}

func abs(c complex128) float64 { return math.Hypot(real(c), imag(c)) }
