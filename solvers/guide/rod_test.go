package guide

import (
	"fmt"
	"math"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
)

// rod is a round core; its modes' effective index follows from Bessel functions (Snyder and Love, Optical Waveguide Theory, section 12-8).
type rod struct{ core, clad, radius float64 }

// besselK is the modified Bessel function of the second kind, from its integral over exp(-x cosh t) cosh(nu t) (DLMF 10.32.9)
// by the trapezoidal rule, which converges exponentially here.
func besselK(nu, x float64) (sum float64) {
	const step = 1. / 32
	for i := range 400 {
		t := step * float64(i)
		v := step * math.Exp(-x*math.Cosh(t)) * math.Cosh(nu*t)
		if i == 0 {
			v /= 2
		}
		sum += v
	}
	return sum
}

// mismatch vanishes for the hybrid modes of order 1, with u and v the core's and the cladding's transverse numbers:
//
//	(J'/uJ + K'/vK)(n1^2 J'/uJ + n2^2 K'/vK) = neff^2 (1/u^2 + 1/v^2)^2
//
// multiplied by J^2, so that it has no poles.
func (r rod) mismatch(k, n float64) float64 {
	a, b := r.core*r.core, r.clad*r.clad
	u, v := k*r.radius*math.Sqrt(a-n*n), k*r.radius*math.Sqrt(n*n-b)
	j, kk := math.J1(u), besselK(1, v)
	jd := (math.J0(u) - j/u) / u
	kd := (-besselK(0, v) - kk/v) / (v * kk)
	s := 1/(u*u) + 1/(v*v)
	return (jd+kd*j)*(a*jd+b*kd*j) - n*n*s*s*j*j
}

// index is that of HE11: the highest root, by a scan from the core's index down and bisection.
func (r rod) index(k float64) float64 {
	const steps = 2000
	step := (r.core - r.clad) / steps
	f := func(n float64) float64 { return r.mismatch(k, n) }
	hi := r.core - step/2
	for f(hi-step)*f(hi) > 0 {
		hi -= step
	}
	lo := hi - step
	for range 60 {
		if mid := (lo + hi) / 2; f(mid)*f(hi) > 0 {
			hi = mid
		} else {
			lo = mid
		}
	}
	return (lo + hi) / 2
}

// group is the group index neff + k dneff/dk, by a difference of fourth order.
func (r rod) group(k float64) float64 {
	const h = 2e-3
	d := func(s float64) float64 { return (r.index(k*(1+s)) - r.index(k*(1-s))) / (2 * s) }
	return r.index(k) + (4*d(h)-d(2*h))/3
}

// polygon is a regular polygon of the rod's area, level at top and bottom, as layers of one strip with tilted walls each.
func (r rod) polygon(sides int) string {
	step := 2 * math.Pi / float64(sides)
	out := r.radius * math.Sqrt(step/math.Sin(step)) // of the corners
	var b strings.Builder
	for i := sides/2 - 1; i > 0; i-- {
		low, high := math.Pi/2-(float64(i)+0.5)*step, math.Pi/2-(float64(i)-0.5)*step
		x0, x1 := out*math.Cos(low), out*math.Cos(high)
		height := out * (math.Sin(high) - math.Sin(low))
		fmt.Fprintf(&b, "    - {material: core, thickness: %.15g um, fill: clad, strips: [{centre: 0 um, width: %.15g um, sidewall: %.15g deg}]}\n",
			height/um, 2*x1/um, math.Atan2(height, x0-x1)*180/math.Pi)
	}
	return b.String()
}

// limit extrapolates three values v at m sides by v + a m^-p + b m^-q, and says how much the term in q and errors of the
// values as large as bounds move it.
func limit(m [3]float64, p, q float64, v, bounds [3]float64) (at, err float64) {
	two := func(i, j int, p float64, v [3]float64) float64 {
		r := math.Pow(m[j]/m[i], p)
		return (r*v[j] - v[i]) / (r - 1)
	}
	three := func(v [3]float64) float64 {
		x, y := two(0, 1, p, v), two(1, 2, p, v)
		left := func(i, j int) float64 { // of the term in q
			r := math.Pow(m[j]/m[i], p)
			return (r*math.Pow(m[j], -q) - math.Pow(m[i], -q)) / (r - 1)
		}
		a, b := left(0, 1), left(1, 2)
		return (y*a - x*b) / (a - b)
	}
	at = three(v)
	err = math.Abs(at - two(1, 2, p, v))
	for i := range bounds {
		var unit [3]float64
		unit[i] = 1
		err += math.Abs(three(unit)) * bounds[i]
	}
	return at, err
}

// A rod as polygons of 8, 12 and 16 sides. With the area kept, what a polygon of m sides is off by begins with m^-3 where the contrast
// is high (a boundary off by a/m^2 over stretches of a/m, squared: the second order of perturbation theory) and with m^-4
// in the weakly guiding limit (the second order in the boundary's distance alone). One more power is taken off with it, and the
// limit is held to what that one changed and to the bounds of the rows.
func TestRod(t *testing.T) {
	const text = `
materials:
  core: {index: %g}
  clad: {index: %g}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
section:
  layers:
    - {material: clad}
%s    - {material: clad}
accuracy: {neff: %g}
`
	w := frequency(1.55 * um)
	k := w / schema.LightSpeed
	for _, c := range []struct {
		name     string
		rod      rod
		accuracy float64
		power    float64
	}{
		{"weakly guiding", rod{1.45, 1.444, 4.1 * um}, 1e-8, 4},
		{"wire in air", rod{2, 1, 0.3 * um}, 1e-6, 3},
	} {
		t.Run(c.name, func(t *testing.T) {
			var n, g, nb, gb [3]float64
			sides := [3]float64{8, 12, 16}
			for i, s := range sides {
				want := 1
				if i == 0 {
					want = 2
				}
				m, count := solve(t, guide(t, fmt.Sprintf(text, c.rod.core, c.rod.clad, c.rod.polygon(int(s)), c.accuracy)), solvers.Q{w}, want)
				if len(m) != want || count.N != 2 {
					t.Fatalf("%d modes, a count of %d: want HE11 along x and y", len(m), count.N)
				}
				n[i], g[i], nb[i], gb[i] = m[0].Neff, m[0].Ng, m[0].NeffErr, m[0].NgErr
				if want == 2 { // the polygon is its own image when turned by 90 degrees
					same(t, "neff along x and y", m[0].Neff, m[1].Neff, m[0].NeffErr+m[1].NeffErr)
					same(t, "ng along x and y", m[0].Ng, m[1].Ng, m[0].NgErr+m[1].NgErr)
				}
			}
			for _, v := range []struct {
				name      string
				at, bound [3]float64
				exact     float64
			}{{"neff", n, nb, c.rod.index(k)}, {"ng", g, gb, c.rod.group(k)}} {
				at, err := limit(sides, c.power, c.power+1, v.at, v.bound)
				same(t, v.name, at, v.exact, err)
				if moved := math.Abs(v.at[2] - at); !(err < moved) { // the limit says more than its last member
					t.Errorf("%s: the extrapolation moved it by %.2g only, with an error of %.2g", v.name, moved, err)
				}
				t.Logf("%s: limit - exact = %.2g, allowed %.2g; 16 sides are off by %.2g", v.name, at-v.exact, err, v.at[2]-v.exact)
			}
		})
	}
}

// same compares two numbers that are to be one.
func same(t *testing.T, what string, a, b, tolerance float64) {
	t.Helper()
	if !(math.Abs(a-b) <= tolerance) {
		t.Errorf("%s: %.14g and %.14g differ by %.2g, allowed %.2g", what, a, b, math.Abs(a-b), tolerance)
	}
}
