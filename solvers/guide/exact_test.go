package guide

import (
	"fmt"
	"math"
	"math/cmplx"
	"sort"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/jet"
)

// truth is what a mode's row should hold, in its units; NaN where that is not known.
type truth struct{ neff, kappa, ng, gvd, beta3 float64 }

// expand gives the truth of a mode whose N = neff^2 is known as an analytic function of the wave number k = w/c. The
// derivatives of beta^2 = k^2 N are Cauchy integrals over a circle about k in the complex plane (Lyness and
// Moler, SIAM J. Numer. Anal. 4, 202 (1967)); index must be analytic inside it, and is called around it in turn,
// with its last value to start from. It loses two digits for every order.
func expand(k float64, index func(k, near complex128) complex128, near complex128) truth {
	const points, radius, c = 32, 0.006, schema.LightSpeed
	near = index(complex(k, 0), near)
	l := jet.Jet{V: near * complex(k*k, 0)}
	for i := range points {
		turn := cmplx.Exp(complex(0, 2*math.Pi*float64(i)/points))
		z := complex(k, 0) * (1 + radius*turn)
		near = index(z, near)
		f, r := z*z*near/points, complex(c*radius*k, 0)*turn
		l.W += f / r
		l.WW += 2 * f / (r * r)
		l.WWW += 6 * f / (r * r * r)
	}
	b := jet.Sqrt(l)
	return truth{real(b.V) / k, -imag(b.V) / k, c * real(b.W), real(b.WW), real(b.WWW)}
}

// ratios collects error over bound of the rows of a test.
type ratios []float64

func (r ratios) String() string {
	if len(r) == 0 {
		return "no ratios"
	}
	s := append(ratios{}, r...)
	sort.Float64s(s)
	within := 0
	for _, v := range s {
		if v > 1./30 {
			within++
		}
	}
	return fmt.Sprintf("%d numbers, error/bound: least %.1e, median %.1e, most %.2f; %d above 1/30", len(s), s[0], s[len(s)/2], s[len(s)-1], within)
}

// holds checks a row against the truth: no number is further off than its bound, and no bound is more than 1000 times the
// error of neff or kappa; those of the derivatives of fields without corners are, here and there. Errors as small as
// rounding (1e-12 of neff, more with every derivative) say nothing about a bound.
func (r *ratios) holds(t *testing.T, m *solvers.Mode, w float64, want truth) {
	t.Helper()
	cw := schema.LightSpeed * w
	for _, c := range []struct {
		name             string
		got, want, bound float64
		rounding         float64
	}{
		{"neff", m.Neff, want.neff, m.NeffErr, 1e-12},
		{"kappa", m.Kappa, want.kappa, m.KappaErr, 1e-12},
		{"ng", m.Ng, want.ng, m.NgErr, 1e-11},
		{"gvd", m.GVD, want.gvd, m.GVDErr, 1e-9 / cw},
		{"beta3", m.Beta3, want.beta3, m.Beta3Err, 1e-7 / (cw * w)},
	} {
		if c.name == "kappa" && want.kappa == 0 {
			if c.got != 0 {
				t.Errorf("%s: kappa %g without loss", m.Family, c.got)
			}
			continue
		}
		if math.IsNaN(c.want) {
			continue
		}
		e := math.Abs(c.got - c.want)
		if !(e <= c.bound+c.rounding*0.1) {
			t.Errorf("%s %s: %s %.14g, want %.14g: off by %.2g, bound %.2g", m.Family, m.Symmetry, c.name, c.got, c.want, e, c.bound)
		}
		if e < c.rounding {
			continue
		}
		*r = append(*r, e/c.bound)
		if c.bound > 1000*e && (c.name == "neff" || c.name == "kappa") {
			t.Errorf("%s %s: %s is off by %.2g, with a bound of %.2g", m.Family, m.Symmetry, c.name, e, c.bound)
		}
	}
}

// hold compares all rows, from the highest down, with the truths; one that has no row within 1e-4 is missing.
func (r *ratios) hold(t *testing.T, modes []solvers.Mode, w float64, want []truth) {
	t.Helper()
	sort.SliceStable(want, func(i, j int) bool { return want[i].neff > want[j].neff })
	if len(modes) == 0 || len(modes) > len(want) {
		t.Fatalf("%d modes, %d expected", len(modes), len(want))
	}
	next := 0
	for i := range modes {
		m := &modes[i]
		for next < len(want) && want[next].neff > m.Neff+1e-4 {
			t.Errorf("no mode at neff %.9g", want[next].neff)
			next++
		}
		if next == len(want) {
			t.Fatalf("%s %s: neff %.9g belongs to no mode", m.Family, m.Symmetry, m.Neff)
		}
		r.holds(t, m, w, want[next])
		next++
	}
}

// sheet is a stretch of a layered metal guide: its permittivity along the layers' normal and in their plane, and its thickness.
type sheet struct {
	normal, plane complex128
	d             float64
}

// stacked is a metal guide whose fill varies along one axis only, b wide across it. With g = n pi/b and K^2 = beta^2 + g^2 its
// modes are (Collin, Field Theory of Guided Waves, chapter 6; both indices of a film that is the same in its plane)
//
//	LSE: u'' + (plane k^2 - K^2) u = 0, u = 0 on the walls                          n >= 0
//	LSM: (u'/plane)' + (k^2 - K^2/normal) u = 0, u' = 0 on the walls                n >= 1
type stacked struct {
	sheets []sheet
	b      float64
}

// mismatch is what is left of the condition on the far wall: an entire function of N.
func (s *stacked) mismatch(k, n complex128, order int, lsm bool) complex128 {
	g := complex(float64(order)*math.Pi/s.b, 0)
	kk := n*k*k + g*g
	u, v := complex128(0), complex128(1) // u and u', or u and u'/plane
	if lsm {
		u, v = 1, 0
	}
	for _, l := range s.sheets {
		q2, weight := l.plane*k*k-kk, complex128(1)
		if lsm {
			q2, weight = l.plane*(k*k-kk/l.normal), l.plane
		}
		q, d := cmplx.Sqrt(q2), complex(l.d, 0)
		c, sn := cmplx.Cos(q*d), d
		if q != 0 {
			sn = cmplx.Sin(q*d) / q
		}
		u, v = c*u+sn*weight*v, -q2*sn/weight*u+c*v
	}
	if lsm {
		return v / k
	}
	return u * k
}

// modes gives all modes with N above low at the real wave number k: signs of the lossless mismatch on a fine grid, then, with the
// losses turned on in steps, Newton's method.
func (s *stacked) modes(k, low float64) (list []truth) {
	const steps, ramp = 6000, 12
	lossless := s.scaled(0)
	top := 0.0
	for _, l := range s.sheets {
		top = max(top, real(l.plane), real(l.normal))
	}
	for order := range 30 {
		for _, lsm := range []bool{false, true} {
			f := func(n float64) float64 { return real(lossless.mismatch(complex(k, 0), complex(n, 0), order, lsm)) }
			for i := range steps {
				lo, hi := low+(top-low)*float64(i)/steps, low+(top-low)*float64(i+1)/steps
				if lsm && order == 0 || f(lo)*f(hi) >= 0 {
					continue
				}
				n := complex(lo-f(lo)*(hi-lo)/(f(hi)-f(lo)), 0)
				for j := range ramp + 1 {
					q := s.scaled(float64(j) / ramp)
					n = newton(func(n complex128) complex128 { return q.mismatch(complex(k, 0), n, order, lsm) }, n)
				}
				list = append(list, expand(k, func(k, near complex128) complex128 {
					return newton(func(n complex128) complex128 { return s.mismatch(k, n, order, lsm) }, near)
				}, n))
			}
		}
	}
	return list
}

// scaled has the imaginary parts times a factor.
func (s *stacked) scaled(f float64) *stacked {
	out := &stacked{b: s.b}
	for _, l := range s.sheets {
		l.normal, l.plane = complex(real(l.normal), f*imag(l.normal)), complex(real(l.plane), f*imag(l.plane))
		out.sheets = append(out.sheets, l)
	}
	return out
}

// newton is a root of an analytic f, its derivative taken by a difference.
func newton(f func(complex128) complex128, n complex128) complex128 {
	const h = 1e-5
	for range 12 {
		v := f(n)
		n -= v * 2 * h / (f(n+h) - f(n-h))
	}
	return n
}

// Metal guides of one fill, with a strip of that fill in them: TE and TM with beta^2 = eps k^2 - (i pi/a)^2 - (j pi/b)^2
// (Pozar, Microwave Engineering, chapter 3), by the same code as any guide. All modes are there, in pairs where
// they come in pairs.
func TestRectangularMetalGuide(t *testing.T) {
	const text = `
materials:
  air: {index: 1}
  fill: {index: %g, extinction: %g}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  a: 2.3 um
  b: 1.1 um
section:
  ground: both
  walls: {width: a}
  layers:
    - {material: fill, thickness: b, fill: fill, strips: [{centre: 0.2 um, width: 0.6 um}]}
equation: full-vector
`
	const a, b = 2.3 * um, 1.1 * um
	w := frequency(1.55 * um)
	k := w / schema.LightSpeed
	var all ratios
	for _, c := range []struct {
		name  string
		n, kn float64
		least int // modes there are at least
	}{
		{"air", 1, 0, 5},
		{"glass", 1.5, 0, 12},
		{"lossy", 1.5, 1e-3, 12},
	} {
		t.Run(c.name, func(t *testing.T) {
			modes, count := solve(t, guide(t, fmt.Sprintf(text, c.n, c.kn)), solvers.Q{w, a, b}, 100)
			eps := complex(c.n, -c.kn) * complex(c.n, -c.kn)
			var want []truth
			for i := range 30 {
				for j := range 30 {
					kc := math.Hypot(float64(i)*math.Pi/a, float64(j)*math.Pi/b)
					index := func(k, _ complex128) complex128 { return eps - complex(kc*kc, 0)/(k*k) }
					if i+j == 0 || real(index(complex(k, 0), 0)) < 0 {
						continue
					}
					want = append(want, expand(k, index, 0)) // TE
					if i*j > 0 {
						want = append(want, expand(k, index, 0)) // TM
					}
				}
			}
			if len(want) < c.least || count.N != len(want) || len(modes) != len(want) {
				t.Fatalf("%d modes and a count of %d, want %d", len(modes), count.N, len(want))
			}
			all.hold(t, modes, w, want)
		})
	}
	t.Log(all)
}

// Metal guides with a slab in them, upright and lying, against their LSE and LSM modes.
func TestPartiallyFilledMetalGuide(t *testing.T) {
	const head = `
materials:
  air: {index: 1}
  glass: {index: 1.5}
  slab: {index: 3, extinction: %g}
  film: {axes: {x: {index: 2.5}, y: {index: 3}, z: {index: 2.5}}}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  a: 1.4 um
  b: 0.8 um
section:
  ground: both
  walls: {width: a}
  layers:
%s
equation: full-vector
`
	const a, b = 1.4 * um, 0.8 * um
	w := frequency(1.55 * um)
	k := w / schema.LightSpeed
	even := func(n complex128, d float64) sheet { return sheet{n * n, n * n, d} }
	var all ratios
	for _, c := range []struct {
		name, layers string
		loss         float64
		guide        stacked
	}{
		{"upright at one side", `    - {material: slab, thickness: b, fill: air, strips: [{centre: -0.45 um, width: 0.5 um}]}`, 0,
			stacked{[]sheet{even(3, 0.5*um), even(1, 0.9*um)}, b}},
		{"upright in the middle", `    - {material: slab, thickness: b, fill: air, strips: [{centre: 0 um, width: 0.5 um}]}`, 0,
			stacked{[]sheet{even(1, 0.45*um), even(3, 0.5*um), even(1, 0.45*um)}, b}},
		{"lossy", `    - {material: slab, thickness: b, fill: air, strips: [{centre: -0.45 um, width: 0.5 um}]}`, 0.05,
			stacked{[]sheet{even(3-0.05i, 0.5*um), even(1, 0.9*um)}, b}},
		{"lying", `    - {material: glass, thickness: 0.3 um, fill: glass, strips: [{centre: 0 um, width: 0.5 um}]}
    - {material: film, thickness: 0.5 um}
    - {material: air, thickness: 0.6 um}`, 0,
			stacked{[]sheet{even(1.5, 0.3*um), {9, 6.25, 0.5 * um}, even(1, 0.6*um)}, a}},
	} {
		t.Run(c.name, func(t *testing.T) {
			modes, count := solve(t, guide(t, fmt.Sprintf(head, c.loss, c.layers)), solvers.Q{w, a, b}, 100)
			want := c.guide.modes(k, 0)
			if len(want) < 8 || len(modes) != len(want) || count.N != len(want) {
				t.Errorf("%d modes and a count of %d, want %d", len(modes), count.N, len(want))
			}
			all.hold(t, modes, w, want)
		})
	}
	t.Log(all)
}
