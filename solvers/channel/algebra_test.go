package channel

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"sort"
	"testing"

	"gonum.org/v1/gonum/mat"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/section"
)

// tiny is a skewed section of few unknowns with two media, a metal cell and a magnetic wall.
func tiny() (*section.Mesh, float64, [][3]complex128) {
	m := straightMesh([]float64{0, 0.5 * um, 0.9 * um, 1.4 * um}, []float64{0, 0.4 * um, 0.8 * um}, always(3), func(x, y float64) int {
		switch {
		case x > 0.9*um && y > 0.4*um:
			return section.Metal
		case x > 0.5*um:
			return 1
		}
		return 0
	})
	m.OrderX[1], m.OrderY[1] = 2, 4
	m.X[1][1] += 0.05 * um
	m.X[2][1] += 0.12 * um
	walls(m, section.Magnetic, section.Electric, section.Electric, section.Electric)
	return m, 2 * math.Pi / 1.55e-6, [][3]complex128{{9, 8, 7}, {2.1, 2.2, 2.3}}
}

// dense writes out A/k^2 and B.
func dense(p *Pencil) (a, b *mat.Dense) {
	n := p.t.unknowns
	a, b = mat.NewDense(n, n, nil), mat.NewDense(n, n, nil)
	e, col := make([]complex128, n), make([]complex128, n)
	for j := range n {
		e[j] = 1
		p.MulA(col, e)
		for i, v := range col {
			a.Set(i, j, real(v)/(p.k*p.k))
		}
		p.MulB(col, e)
		for i, v := range col {
			b.Set(i, j, real(v))
		}
		e[j] = 0
	}
	return a, b
}

// A general-purpose library's eigenvalues of -B^-1 A, all of them, against the modes found,
// the inertia count between them, and the number of zeros, which is that of the unknowns of e_z.
func TestAgainstLibrary(t *testing.T) {
	m, k, eps := tiny()
	p := pencil(t, m, k, eps...)
	a, b := dense(p)
	for i := range p.t.unknowns {
		for j := range i {
			if d := math.Abs(a.At(i, j)-a.At(j, i)) + math.Abs(b.At(i, j)-b.At(j, i)); d > 1e-13 {
				t.Fatalf("entry %d, %d is not symmetric by %g", i, j, d)
			}
		}
	}
	var c mat.Dense
	if err := c.Solve(b, a); err != nil {
		t.Fatal(err)
	}
	c.Scale(-1, &c)
	var e mat.Eigen
	if !e.Factorize(&c, mat.EigenNone) {
		t.Fatal("library failed")
	}
	const low = 0.02
	var want []complex128
	zeros := 0
	for _, v := range e.Values(nil) {
		switch {
		case abs(v) < 1e-5:
			zeros++
		case real(v) > low:
			want = append(want, v)
		}
	}
	if zeros != p.t.potentials {
		t.Errorf("%d zeros, %d unknowns of e_z", zeros, p.t.potentials)
	}
	if len(want) < 5 {
		t.Fatalf("only %d modes to compare", len(want))
	}
	sort.Slice(want, func(i, j int) bool { return real(want[i]) > real(want[j]) })
	agree(t, p, low, want, 1e-9) // the library's rounding
	for i := range len(want) - 1 {
		f, err := p.Factor((want[i] + want[i+1]) / 2 * complex(k*k, 0))
		if err != nil {
			t.Fatal(err)
		}
		if n, _ := f.Above(); n != i+1 {
			t.Errorf("%d modes above the gap under mode %d", n, i)
		}
	}
}

// What Factor solves is F x = b, checked by multiplying back with A and B, which know nothing of fronts.
func TestFactorSolves(t *testing.T) {
	m, k, eps := tiny()
	lossy := [][3]complex128{{9 - 1i, 8, 7}, {2.1, 2.2, 2.3 - 0.2i}}
	for _, c := range []struct {
		name string
		eps  [][3]complex128
		n    complex128
	}{
		{"real", eps, 3.3}, {"complex shift", eps, 3.3 + 0.5i}, {"below zero", eps, -2},
		{"lossy", lossy, 3.3}, {"lossy, complex shift", lossy, 3.3 - 0.5i},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := pencil(t, m, k, c.eps...)
			l := c.n * complex(k*k, 0)
			f, err := p.Factor(l)
			if err != nil {
				t.Fatal(err)
			}
			rng := rand.New(rand.NewPCG(1, 2))
			n := p.t.Unknowns()
			x, ax, bx := make([]complex128, n), make([]complex128, n), make([]complex128, n)
			for i := range x {
				x[i] = complex(rng.NormFloat64(), rng.NormFloat64())
			}
			p.MulA(ax, x)
			p.MulB(bx, x)
			for i := range ax {
				ax[i] += l * bx[i]
			}
			f.Solve(bx, ax)
			for i := range x {
				if abs(bx[i]-x[i]) > 1e-9 { // rounding times the condition
					t.Fatalf("x[%d] = %g, want %g", i, bx[i], x[i])
				}
			}
			if _, real := f.Negative(); real != (c.name == "real" || c.name == "below zero") {
				t.Error("inertia of the wrong kind of factor")
			}
		})
	}
}

// The vectors are normed as Pair says and solve the pencil.
func TestPairs(t *testing.T) {
	m, k, eps := tiny()
	for name, e := range map[string][][3]complex128{"lossless": eps, "lossy": {{9 - 1i, 8, 7}, {2.1, 2.2, 2.3}}} {
		t.Run(name, func(t *testing.T) {
			p := pencil(t, m, k, e...)
			pairs, _ := modes(t, p, Options{Low: 0.3})
			if len(pairs) < 3 {
				t.Fatalf("%d pairs", len(pairs))
			}
			ax, bx := make([]complex128, p.t.unknowns), make([]complex128, p.t.unknowns)
			for i, m := range pairs {
				p.MulA(ax, m.X)
				p.MulB(bx, m.X)
				var q, r complex128
				for j, x := range m.X {
					q += x * bx[j]
					r += x * ax[j]
				}
				if abs(q-1) > 1e-10 || abs(r+m.L) > 1e-9*abs(m.L) { // rounding
					t.Errorf("mode %d: x'Bx = %g, -x'Ax = %g, L = %g", i, q, -r, m.L)
				}
			}
		})
	}
}

func TestRefusals(t *testing.T) {
	m, k, eps := tiny()
	edit := func(f func(m *section.Mesh)) *section.Mesh {
		c, _, _ := tiny()
		f(c)
		return c
	}
	for name, bad := range map[string]*section.Mesh{
		"none":              nil,
		"empty":             {},
		"order 0":           edit(func(m *section.Mesh) { m.OrderX[0] = 0 }),
		"order 99":          edit(func(m *section.Mesh) { m.OrderY[1] = 99 }),
		"folded":            edit(func(m *section.Mesh) { m.X[1][1] = m.X[1][2] }),
		"falling":           edit(func(m *section.Mesh) { m.Y[1] = m.Y[2] }),
		"not a number":      edit(func(m *section.Mesh) { m.X[0][1] = math.NaN() }),
		"short line":        edit(func(m *section.Mesh) { m.X[0] = m.X[0][:2] }),
		"short medium":      edit(func(m *section.Mesh) { m.Medium[0] = m.Medium[0][:2] }),
		"lines missing":     edit(func(m *section.Mesh) { m.Y = m.Y[:2] }),
		"too many unknowns": straightMesh(uniform(um, 60), uniform(um, 1), always(24), everywhere),
		"too many cells":    straightMesh(uniform(um, 200), uniform(um, 60), always(1), everywhere),
		"all metal": edit(func(m *section.Mesh) {
			for _, row := range m.Medium {
				for i := range row {
					row[i] = section.Metal
				}
			}
		}),
	} {
		t.Run(name, func(t *testing.T) {
			_, err := New(bad)
			wantInput(t, err)
		})
	}
	top, err := New(m)
	if err != nil {
		t.Fatal(err)
	}
	try := func(name string, m *section.Mesh, k float64, eps [][3]complex128) {
		t.Run(name, func(t *testing.T) {
			_, err := top.Assemble(m, k*schema.LightSpeed, media(eps...))
			wantInput(t, err)
		})
	}
	try("other walls", edit(func(m *section.Mesh) { m.Top = section.Magnetic }), k, eps)
	try("wave number 0", m, 0, eps)
	try("infinite wave number", m, math.Inf(1), eps)
	try("medium without permittivity", m, k, eps[:1])
	try("permittivity 0", m, k, [][3]complex128{{9, 0, 7}, eps[1]})
	try("permittivity not a number", m, k, [][3]complex128{{complex(math.NaN(), 0), 1, 7}, eps[1]})
	p := pencil(t, m, k, eps...)
	for name, o := range map[string]Options{
		"low 0": {}, "low not a number": {Low: math.NaN()}, "negative want": {Low: 1, Want: -1}, "short near": {Low: 1, Near: make([][]complex128, 1)},
	} {
		t.Run(name, func(t *testing.T) {
			_, _, err := p.Modes(context.Background(), o)
			wantInput(t, err)
		})
	}
	t.Run("cancelled", func(t *testing.T) {
		ctx, cancel := context.WithCancel(context.Background())
		cancel()
		if _, _, err := p.Modes(ctx, Options{Low: 1}); !errors.Is(err, context.Canceled) {
			t.Errorf("err = %v", err)
		}
	})
}

func wantInput(t *testing.T, err error) {
	t.Helper()
	var input *solvers.InputError
	if !errors.As(err, &input) {
		t.Errorf("err = %v, want an InputError", err)
	}
}
