package channel

import (
	"context"
	"math"
	"math/cmplx"
	"sort"
	"testing"

	"betaloom/solvers/section"
)

// box gives N = eps - (kc/k)^2 of all TE and TM modes above low of an a x b guide filled with eps
// (Collin, Field Theory of Guided Waves, chapter 5: closed form), the highest real part first.
func box(a, b, k float64, eps complex128, low float64) (n []complex128) {
	for i := 0; i < 40; i++ {
		for j := 0; j < 40; j++ {
			kc := math.Hypot(float64(i)*math.Pi/a, float64(j)*math.Pi/b) / k
			v := eps - complex(kc*kc, 0)
			if real(v) <= low || i+j == 0 {
				continue
			}
			n = append(n, v) // TE
			if i > 0 && j > 0 {
				n = append(n, v) // TM
			}
		}
	}
	sort.SliceStable(n, func(i, j int) bool { return real(n[i]) > real(n[j]) })
	return n
}

// Every mode is found with its multiplicity, and no false one. Tolerances: the
// discretisation error at these orders, exponentially small for such smooth fields.
func TestRectangularGuide(t *testing.T) {
	k := 2 * math.Pi / 1.55e-6
	cases := []struct {
		name    string
		a, b    float64
		eps     complex128
		nx, ny  int
		p       int
		low     float64
		tol     float64
		atLeast int
	}{
		{"two to one, one cell", 2 * um, 1 * um, 1, 1, 1, 12, 0.05, 1e-9, 4},
		{"square, many modes in pairs and fours", 2.5 * um, 2.5 * um, 1, 2, 2, 11, 0.03, 1e-8, 15},
		{"filled, three by two cells", 1.3 * um, 0.9 * um, 4, 3, 2, 9, 0.1, 1e-7, 8},
		{"lossy filling", 1.3 * um, 0.9 * um, 4 - 0.3i, 3, 2, 9, 0.5, 1e-7, 8},
		{"lowest order", 0.9 * um, 0.6 * um, 1, 24, 24, 1, 0.2, 3e-3, 1},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			m := straightMesh(uniform(c.a, c.nx), uniform(c.b, c.ny), always(c.p), everywhere)
			want := box(c.a, c.b, k, c.eps, c.low)
			if len(want) < c.atLeast {
				t.Fatalf("only %d modes to compare", len(want))
			}
			agree(t, pencil(t, m, k, isotropic(c.eps)), c.low, want, c.tol)
		})
	}
}

// Magnetic walls all round change the modes' names only: the guide's dual has the same N, and the TEM-like
// constant fields at N = eps besides (E along x or y alone satisfies them).
func TestMagneticWalls(t *testing.T) {
	k := 2 * math.Pi / 1.55e-6
	a, b := 1.7*um, 1.1*um
	m := walls(straightMesh(uniform(a, 2), uniform(b, 2), always(10), everywhere), section.Magnetic, section.Magnetic, section.Magnetic, section.Magnetic)
	agree(t, pencil(t, m, k, isotropic(1)), 0.05, box(a, b, k, 1, 0.05), 1e-9)

	// one pair of each: the parallel-plate guide between electric walls above and below, with
	// its TEM wave at N = eps (closed form: cut-offs of cos(i pi x/a) times cos or sin(j pi y/b))
	m = walls(straightMesh(uniform(a, 2), uniform(b, 2), always(10), everywhere), section.Magnetic, section.Magnetic, section.Electric, section.Electric)
	want := []complex128{1}
	want = append(want, box(a, b, k, 1, 0.05)...)
	agree(t, pencil(t, m, k, isotropic(1)), 0.05, want, 1e-9)
}

// partial is a metal guide a x b with a slab of eps from x = 0 to d over its full height. Its modes have no E
// or no H across the interface (LSE, LSM; Collin, Field Theory of Guided Waves, chapter 6): with g = n pi/b,
//
//	LSE: q1 cot(q1 d) = -q2 cot(q2 (a-d))           n >= 0
//	LSM: q1 tan(q1 d)/eps = -q2 tan(q2 (a-d))       n >= 1
//
// q1^2 = (eps - N) k^2 - g^2, q2^2 = (1 - N) k^2 - g^2; taken here without poles.
type partial struct {
	a, b, d, k float64
	eps        complex128
}

func (p *partial) mismatch(n complex128, order int, lsm bool) complex128 {
	g := complex(float64(order)*math.Pi/p.b/p.k, 0)
	wave := func(eps complex128, l float64) (q2, c, s complex128) { // with lengths in units of 1/k
		q2 = eps - n - g*g
		q := cmplx.Sqrt(q2)
		z := q * complex(l*p.k, 0)
		if cmplx.Abs(z) < 1e-8 {
			return q2, 1, complex(l*p.k, 0)
		}
		return q2, cmplx.Cos(z), cmplx.Sin(z) / q
	}
	q1, c1, s1 := wave(p.eps, p.d)
	q2, c2, s2 := wave(1, p.a-p.d)
	if lsm {
		return q1/p.eps*s1*c2 + q2*s2*c1
	}
	return c1*s2 + c2*s1
}

// all gives every N above low, without loss, by a scan and bisection.
func (p *partial) all(low float64) (list []complex128) {
	const steps = 40000
	top := real(p.eps)
	for order := 0; order < 40; order++ {
		for _, lsm := range []bool{false, true} {
			if lsm && order == 0 {
				continue
			}
			f := func(n float64) float64 { return real(p.mismatch(complex(n, 0), order, lsm)) }
			for i := range steps {
				lo := low + (top-low)*float64(i)/steps
				hi := low + (top-low)*float64(i+1)/steps
				if f(lo)*f(hi) < 0 {
					list = append(list, complex(bisect(f, lo, hi), 0))
				}
			}
		}
	}
	sort.Slice(list, func(i, j int) bool { return real(list[i]) > real(list[j]) })
	return list
}

func bisect(f func(float64) float64, lo, hi float64) float64 {
	sign := f(lo) > 0
	for range 80 {
		mid := (lo + hi) / 2
		if f(mid) > 0 == sign {
			lo = mid
		} else {
			hi = mid
		}
	}
	return (lo + hi) / 2
}

func (p *partial) mesh(order int) *section.Mesh {
	xs := []float64{0, p.d / 2, p.d, (p.a + p.d) / 2, p.a}
	return straightMesh(xs, uniform(p.b, 2), always(order), func(x, y float64) int {
		if x < p.d {
			return 0
		}
		return 1
	})
}

func TestPartiallyFilledGuide(t *testing.T) {
	p := &partial{a: 2.2 * um, b: 1.1 * um, d: 0.8 * um, k: 2 * math.Pi / 1.55e-6, eps: 9}
	want := p.all(0.3)
	if len(want) < 20 {
		t.Fatalf("only %d modes to compare", len(want))
	}
	pc := pencil(t, p.mesh(11), p.k, isotropic(p.eps), isotropic(1))
	t.Run("all modes", func(t *testing.T) { agree(t, pc, 0.3, want, 1e-8) }) // discretisation, as above
	t.Run("inertia at every gap", func(t *testing.T) {
		for i := range len(want) - 1 {
			at := (want[i] + want[i+1]) / 2
			if real(want[i]-want[i+1]) < 1e-6 {
				continue
			}
			f, err := pc.Factor(at * complex(p.k*p.k, 0))
			if err != nil {
				t.Fatal(err)
			}
			if n, proven := f.Above(); n != i+1 || !proven {
				t.Errorf("%d modes above N = %g, want %d", n, at, i+1)
			}
		}
	})
	t.Run("the highest few", func(t *testing.T) {
		pairs, count := modes(t, pc, Options{Low: math.Sqrt(0.3), Want: 5})
		if count.N != len(want) || count.Proof != "inertia" || len(pairs) != 5 {
			t.Fatalf("count %v, %d pairs", count, len(pairs))
		}
		for i, m := range pairs {
			if d := abs(m.L/complex(p.k*p.k, 0) - want[i]); !(d < 1e-8) {
				t.Errorf("mode %d is off by %g", i, d)
			}
		}
	})
}

// With loss the roots of the same equations are followed from eps = 9 by Newton's method with a small step of
// eps; a strongly lossy filling, so nothing is a perturbation.
func TestLossyPartiallyFilledGuide(t *testing.T) {
	p := &partial{a: 1.4 * um, b: 0.7 * um, d: 0.6 * um, k: 2 * math.Pi / 1.55e-6, eps: 9}
	const low = 2
	start := p.all(low)
	var want []complex128
	for order := 0; order < 4; order++ {
		for _, lsm := range []bool{false, true} {
			for _, n := range start {
				if math.Abs(real(p.mismatch(n, order, lsm))) > 1e-9 || lsm && order == 0 {
					continue
				}
				q := *p
				for step := range 200 {
					q.eps = complex(9, -0.8*float64(step+1)/200)
					n = newton(func(n complex128) complex128 { return q.mismatch(n, order, lsm) }, n)
				}
				want = append(want, n)
			}
		}
	}
	if len(want) != len(start) || len(want) < 5 {
		t.Fatalf("%d roots followed of %d", len(want), len(start))
	}
	p.eps = 9 - 0.8i
	pc := pencil(t, p.mesh(11), p.k, isotropic(p.eps), isotropic(1))
	sort.Slice(want, func(i, j int) bool { return real(want[i]) > real(want[j]) })
	agree(t, pc, low, want, 1e-8)
}

func newton(f func(complex128) complex128, n complex128) complex128 {
	const h = 1e-6
	for range 12 {
		n -= f(n) * 2 * h / (f(n+h) - f(n-h))
	}
	return n
}

// Two equal guides with metal between them have every mode twice, to the last digit.
func TestTwins(t *testing.T) {
	k := 2 * math.Pi / 1.55e-6
	m := straightMesh([]float64{0, 1.1 * um, 1.5 * um, 2.6 * um}, uniform(0.7*um, 1), always(10), func(x, y float64) int {
		if x > 1.1*um && x < 1.5*um {
			return section.Metal
		}
		return 0
	})
	for name, eps := range map[string]complex128{"lossless": 4, "lossy": 4 - 0.4i} {
		t.Run(name, func(t *testing.T) {
			var want []complex128
			for _, n := range box(1.1*um, 0.7*um, k, eps, 0.5) {
				want = append(want, n, n)
			}
			if len(want) < 6 {
				t.Fatal("too few modes to compare")
			}
			p := pencil(t, m, k, isotropic(eps))
			agree(t, p, 0.5, want, 1e-7) // discretisation
			first, count := modes(t, p, Options{Want: 1, Low: math.Sqrt(0.5)})
			if len(first) != 1 || count.N != len(want) {
				t.Errorf("%d pairs, count %v", len(first), count)
			}
		})
	}
}

// Two guides that differ by 3e-9 in width have modes about 1e-9 apart in neff (closed form); both are found, each at its own
// value: what the discretisation adds is the same for both.
func TestNearTwins(t *testing.T) {
	k := 2 * math.Pi / 1.55e-6
	const a, b, low = 1.1 * um, 0.7 * um, 0.5
	const wider = a * (1 + 3e-9)
	m := straightMesh([]float64{0, a, 1.5 * um, 1.5*um + wider}, uniform(b, 1), always(10), func(x, y float64) int {
		if x > a && x < 1.5*um {
			return section.Metal
		}
		return 0
	})
	one, two := box(a, b, k, 4, low), box(wider, b, k, 4, low)
	pairs, count := modes(t, pencil(t, m, k, isotropic(4)), Options{Low: math.Sqrt(low), Want: 2})
	if count.N != len(one)+len(two) || len(pairs) != 2 {
		t.Fatalf("%d pairs, count %v", len(pairs), count)
	}
	got := pairs[0].index(k) - pairs[1].index(k)
	want := math.Sqrt(real(two[0])) - math.Sqrt(real(one[0]))
	if want < 1e-11 || math.Abs(got-want) > 1e-12 { // rounding of neff
		t.Errorf("the modes are %g apart, want %g", got, want)
	}
}

func TestNoMode(t *testing.T) {
	m := straightMesh(uniform(0.3*um, 1), uniform(0.2*um, 1), always(6), everywhere)
	pairs, count, err := pencil(t, m, 2*math.Pi/1.55e-6, isotropic(1)).Modes(context.Background(), Options{Low: 0.1})
	if err != nil || len(pairs) != 0 || count.N != 0 || count.Reason == "" {
		t.Errorf("%v, %v, %v", pairs, count, err)
	}
}
