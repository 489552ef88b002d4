package channel

import (
	"math"
	"math/cmplx"
	"testing"

	"betaloom/schema"
	"betaloom/solvers/section"
)

// A mesh whose lines bend inside one medium describes the same section, so it has the same modes, here the closed
// form of a metal guide; tolerance: discretisation.
func TestSkewedMetalGuide(t *testing.T) {
	k := 2 * math.Pi / 1.55e-6
	a, b := 1.3*um, 0.9*um
	for name, eps := range map[string]complex128{"lossless": 4, "lossy": 4 - 0.3i} {
		t.Run(name, func(t *testing.T) {
			m := straightMesh(uniform(a, 3), uniform(b, 2), always(9), everywhere)
			m.X[1][1] += 0.15 * um
			m.X[1][2] -= 0.1 * um
			m.X[2][1] -= 0.05 * um
			m.X[0][2] += 0.1 * um
			agree(t, pencil(t, m, k, isotropic(eps)), 0.5, box(a, b, k, eps, 0.5), 1e-6)
		})
	}
}

// The same for a guide with a straight interface between bent lines, against its LSE/LSM equations.
func TestSkewedPartiallyFilledGuide(t *testing.T) {
	p := &partial{a: 1.6 * um, b: 0.8 * um, d: 0.6 * um, k: 2 * math.Pi / 1.55e-6, eps: 9}
	m := p.mesh(10)
	m.X[1][1] += 0.1 * um
	m.X[1][3] -= 0.15 * um
	m.X[2][3] += 0.1 * um
	want := p.all(1)
	if len(want) < 5 {
		t.Fatal("too few modes to compare")
	}
	agree(t, pencil(t, m, p.k, isotropic(p.eps), isotropic(1)), 1, want, 1e-6) // discretisation
}

// A straight cell integrated as a mapped one has the same matrices: the tensor products
// against quadrature. The straight element's own numbers come from sums and differences of the sides' functions.
func TestMappedMatricesOfRectangle(t *testing.T) {
	mesh := straightMesh([]float64{0, 0.4 * um}, []float64{0, 0.3 * um}, always(5), everywhere)
	mesh.OrderY[0] = 4
	walls(mesh, section.Magnetic, section.Magnetic, section.Magnetic, section.Magnetic)
	eps := [3]complex128{5 - 1i, 4, 3 + 2i}
	p := pencil(t, mesh, 2*math.Pi/1.55e-6, eps)
	s := p.cplx
	shape := s.kit.shapes[orders{5, 4}]
	a, b := mappedMatrices(p.t, shape, corners(mesh, 0, 0, p.k), eps)
	other := &system[complex128]{t: p.t, kit: s.kit, cells: []local[complex128]{{classes: shape.mapped, ma: a, mb: b}}}
	n := p.t.unknowns
	x, y, z := make([]complex128, n), make([]complex128, n), make([]complex128, n)
	for j := range n {
		x[j] = 1
		s.multiply(y, x, 1, 2.5)
		other.multiply(z, x, 1, 2.5)
		for i := range y {
			if cmplx.Abs(y[i]-z[i]) > 1e-12 { // rounding
				t.Fatalf("entry %d, %d: %g and %g", i, j, y[i], z[i])
			}
		}
		x[j] = 0
	}
}

// A section with x and y exchanged has the same modes.
func TestMirroredAnisotropicSection(t *testing.T) {
	k := 2 * math.Pi / 1.55e-6
	xs, ys := []float64{0, 0.3 * um, 0.7 * um, 1.6 * um}, []float64{0, 0.25 * um, 0.9 * um}
	in := func(x, y float64) int {
		if x < 0.7*um && y < 0.25*um {
			return 0
		}
		return 1
	}
	m := walls(straightMesh(xs, ys, always(7), in), section.Electric, section.Electric, section.Magnetic, section.Electric)
	turned := walls(straightMesh(ys, xs, always(7), func(x, y float64) int { return in(y, x) }),
		section.Magnetic, section.Electric, section.Electric, section.Electric)
	one, _ := modes(t, pencil(t, m, k, [3]complex128{9, 7, 5}, [3]complex128{2, 2.5, 3}), Options{Low: 0.8})
	two, _ := modes(t, pencil(t, turned, k, [3]complex128{7, 9, 5}, [3]complex128{2.5, 2, 3}), Options{Low: 0.8})
	plain, _ := modes(t, pencil(t, m, k, [3]complex128{7, 9, 5}, [3]complex128{2.5, 2, 3}), Options{Low: 0.8})
	if len(one) < 3 || len(one) != len(two) {
		t.Fatalf("%d and %d modes", len(one), len(two))
	}
	for i := range one {
		if d := math.Abs(one[i].index(k) - two[i].index(k)); d > 1e-12 { // rounding
			t.Errorf("mode %d: neff %.15g and %.15g", i, one[i].index(k), two[i].index(k))
		}
	}
	if math.Abs(one[0].index(k)-plain[0].index(k)) < 1e-3 {
		t.Error("the axes make no difference")
	}
}

// A little loss moves L by dL = x'N x k^2 d(eps)/x'Bx to first order (variational formula); the second order is 1e-4 of it.
func TestSmallLoss(t *testing.T) {
	m, k, eps := tiny()
	p := pencil(t, m, k, eps...)
	before, _ := modes(t, p, Options{Low: 1})
	if len(before) < 2 {
		t.Fatal("too few modes")
	}
	const loss = 1e-4
	lossy := [][3]complex128{eps[0], eps[1]}
	for i := range 3 {
		lossy[0][i] -= loss * 1i
	}
	q := pencil(t, m, k, lossy...)
	after, count := modes(t, q, Options{Low: 1})
	if len(after) != len(before) || count.Proof == "" {
		t.Fatalf("%d modes of %d, %v", len(after), len(before), count)
	}
	n := p.t.unknowns
	f0, f1 := make([]complex128, n), make([]complex128, n)
	change := func(x []complex128, l complex128) (sum complex128) { // x' (F of q - F of p) x
		for _, part := range []struct {
			p    *Pencil
			sign complex128
		}{{q, 1}, {p, -1}} {
			part.p.MulA(f0, x)
			part.p.MulB(f1, x)
			for i := range x {
				sum += part.sign * x[i] * (f0[i] + l*f1[i])
			}
		}
		return sum
	}
	for i, b := range before {
		want := -change(b.X, b.L) // x'Bx = 1
		got := after[i].L - b.L
		if !(math.Abs(imag(got)-imag(want)) < 1e-4*math.Abs(imag(want))) || imag(got) >= 0 {
			t.Errorf("mode %d: L moves by %g, perturbation %g", i, got, want)
		}
	}
}

// The weight 1/g integrates to the logarithm of the ends' ratio (closed form), and products of polynomials with it
// satisfy int g p q/g = int p q.
func TestWeights(t *testing.T) {
	for _, ratio := range []float64{1, 1.001, 3, 20, 1.0 / 40} {
		q := quadrilateral{right: [2]float64{1, ratio}, height: 1}
		p := newPull(&Topology{tables: map[[2]int]*factors{}}, orders{2, 9}, q)
		sum := 0.0 // H_0 + H_1 = 1
		for i := range 2 {
			for j := range 2 {
				sum += p.vInv[i][j]
			}
		}
		want := 4.0 // 1/g = 2
		if ratio != 1 {
			want = 4 / (ratio - 1) * math.Log(ratio)
		}
		if math.Abs(sum-want) > 1e-13*want { // rounding
			t.Errorf("ratio %g: %.16g, want %.16g", ratio, sum, want)
		}
	}
}

// The same topology serves straight and bent meshes in turn, and their vectors start each other.
func TestStraightAndBentInTurn(t *testing.T) {
	p := &partial{a: 1.6 * um, b: 0.8 * um, d: 0.6 * um, k: 2 * math.Pi / 1.55e-6, eps: 9}
	straight, bent := p.mesh(9), p.mesh(9)
	bent.X[1][1] += 0.03 * um
	bent.X[1][3] -= 0.05 * um
	top, err := New(straight)
	if err != nil {
		t.Fatal(err)
	}
	want := p.all(2)
	var near [][]complex128
	for round, m := range []*section.Mesh{straight, bent, straight, bent} {
		pc, err := top.Assemble(m, p.k*schema.LightSpeed, media(isotropic(p.eps), isotropic(1)))
		if err != nil {
			t.Fatal(err)
		}
		pairs, _ := modes(t, pc, Options{Low: math.Sqrt(2), Near: near})
		if len(pairs) != len(want) || len(want) < 4 {
			t.Fatalf("round %d: %d modes of %d", round, len(pairs), len(want))
		}
		near = nil
		for i, m := range pairs {
			near = append(near, m.X)
			if d := abs(m.L/complex(p.k*p.k, 0) - want[i]); d > 1e-6 { // discretisation
				t.Errorf("round %d, mode %d is off by %g", round, i, d)
			}
		}
	}
}

// The rule of n points integrates powers below 2 n exactly: 2/(d+1) or 0.
func TestGauss(t *testing.T) {
	for n := 2; n <= maxOrder+1+mostExtra; n++ {
		x, w := gauss(n)
		for d := range 2 * n {
			sum, want := 0.0, 0.0
			for i, v := range x {
				sum += w[i] * math.Pow(v, float64(d))
			}
			if d%2 == 0 {
				want = 2 / float64(d+1)
			}
			if math.Abs(sum-want) > 1e-13 { // rounding
				t.Fatalf("%d points, power %d: %g, want %g", n, d, sum, want)
			}
		}
	}
}
