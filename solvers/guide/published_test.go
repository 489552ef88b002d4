package guide

import (
	"fmt"
	"math"
	"sort"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
)

// The L-shaped guide: three squares of side 1 um, as a strip of metal in the corner of a metal guide of 2 um x 2 um. Its cut-offs are
// the eigenvalues of the Laplacian on the L, whose fields are singular in the corner. TM (values zero on the walls): 9.6397238440219
// (Fox, Henrici and Moler, SIAM J. Numer. Anal. 4, 89 (1967)), 15.1972519265 and 2 pi^2 (Betcke and Trefethen, SIAM Rev. 47, 469 (2005)). TE
// (slopes zero): 1.47562182408, 3.53403136678, pi^2 twice and 11.3894793979 (Dauge's benchmark values for the
// L-shaped domain, for Maxwell's equations). All from memory, with the digits given; tolerance: the bound of the row, and half
// of the value's last digit.
func TestLShapedGuide(t *testing.T) {
	const text = `
materials:
  air: {index: 1}
  brass: {conductivity: 1.5e7 S/m}
parameters:
  wavelength: {from: 1.4 um, to: 1.7 um, count: 3}
section:
  ground: both
  walls: {width: 2 um}
  layers:
    - {material: air, thickness: 1 um}
    - {material: brass, thickness: 1 um, fill: air, strips: [{centre: 0.5 um, width: 1 um}]}
equation: full-vector
`
	const wavelength = 1.5 * um // (2 pi/1.5)^2 = 17.5: all up to 15.197
	w := frequency(wavelength)
	k := w / schema.LightSpeed * um
	type value struct{ kc2, digit float64 }
	want := []value{
		{1.47562182408, 1e-11}, {3.53403136678, 1e-11}, {math.Pi * math.Pi, 0}, {math.Pi * math.Pi, 0},
		{11.3894793979, 1e-10}, {9.6397238440219, 1e-13}, {15.1972519265, 1e-10},
	}
	const published = 11.39 // below it the list is complete
	sort.Slice(want, func(i, j int) bool { return want[i].kc2 < want[j].kc2 })
	modes, _ := solve(t, guide(t, text), solvers.Q{w}, 6)
	if len(modes) != 6 {
		t.Fatalf("%d modes", len(modes))
	}
	for i, m := range modes {
		if want[i].kc2 > published {
			break
		}
		n := math.Sqrt(1 - want[i].kc2/(k*k))
		digits := want[i].digit / (k * k * n)
		same(t, fmt.Sprintf("neff of kc^2 = %.12g", want[i].kc2), m.Neff, n, m.NeffErr+digits/2)
		same(t, fmt.Sprintf("ng of kc^2 = %.12g", want[i].kc2), m.Ng, 1/n, m.NgErr+digits/(n*n))
		t.Logf("kc^2 = %.12g: neff off by %.1e, bound %.1e", want[i].kc2, m.Neff-n, m.NeffErr)
	}
}

// ridge is one layer of core under and in a rib.
const ridge = `
materials:
  core: {index: %g}
  base: {index: %g}
  air: {index: 1}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
section:
  layers:
    - {material: base}
    - {material: core, thickness: %g um}
    - {material: core, thickness: %g um, fill: air, strips: [{centre: 0 um, width: %g um}]}
    - {material: air}
accuracy: {neff: 1e-5}
`

// The first of the rib guides that methods were compared on in the 1990s: 3.44 on 3.34 under air, a rib 2 um wide and 1.1 um high on 0.2 um, at
// 1.55 um (Vassallo, Opt. Quantum Electron. 29, 95 (1997), and others before). Of its quasi-TE index five digits are sure: 3.3887 (from memory).
func TestRib(t *testing.T) {
	modes, _ := solve(t, guide(t, fmt.Sprintf(ridge, 3.44, 3.34, 0.2, 1.1, 2.)), solvers.Q{frequency(1.55 * um)}, 1)
	if len(modes) != 1 || modes[0].Family != "TE00" {
		t.Fatalf("%d modes", len(modes))
	}
	same(t, "neff", modes[0].Neff, 3.3887, 0.5e-4+modes[0].NeffErr)
}

// The ribs of the same comparison that hold their modes loosely: 3.44 on 3.40 (rib 2 um x 0.6 um on 0.5 um) and 3.44 on 3.435 (4 um x 2.5 um on 3.5 um).
// Each has a fundamental mode above its substrate and above its slab, reaching many micrometres; that one is found is the check.
func TestLooseRibs(t *testing.T) {
	for _, c := range []struct {
		name                  string
		base, slab, rib, wide float64
	}{
		{"on 3.40", 3.40, 0.5, 0.6, 2},
		{"on 3.435", 3.435, 3.5, 2.5, 4},
	} {
		t.Run(c.name, func(t *testing.T) {
			modes, count := solve(t, guide(t, fmt.Sprintf(ridge, 3.44, c.base, c.slab, c.rib, c.wide)), solvers.Q{frequency(1.55 * um)}, 1)
			if len(modes) != 1 || count.N < 1 || !(modes[0].Neff > c.base && modes[0].Neff < 3.44) {
				t.Errorf("%d modes, a count of %d", len(modes), count.N)
			}
		})
	}
}

// Large ribs have one mode of each polarisation, however large they are, as long as W/H < 0.3 + r/sqrt(1 - r^2), r >= 0.5 the
// slab's height over the rib's H (Soref, Schmidtchen and Petermann, IEEE J. Quantum Electron. 27, 1971 (1991)). The rule is
// approximate: both ribs are half as far again from its line, on either side. Silicon 5 um high on oxide under air.
func TestLargeRib(t *testing.T) {
	const height, r = 5., 0.7
	line := 0.3 + r/math.Sqrt(1-r*r)
	for _, c := range []struct {
		name   string
		ratio  float64
		single bool
	}{
		{"below the line", line / 1.5, true},
		{"above the line", line * 1.5, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			modes, count := solve(t, guide(t, fmt.Sprintf(ridge, 3.4777, 1.444, height*r, height*(1-r), height*c.ratio)), solvers.Q{frequency(1.55 * um)}, 2)
			if len(modes) != 2 || modes[0].Type == modes[1].Type || (count.N == 2) != c.single {
				t.Errorf("%d modes, a count of %d", len(modes), count.N)
			}
		})
	}
}

// film is a symmetric film of index n1 in n2, d thick.
type film struct{ n1, n2, d, k float64 }

// even gives N of its first even mode, TE or TM, by bisection of q tan(q d/2) = (1 or n1^2/n2^2) g, and the share of |u|^2
// outside the film.
func (f film) even(tm bool) (n, outside float64) {
	e1, e2, weight := f.n1*f.n1, f.n2*f.n2, 1.
	if tm {
		weight = e1 / e2
	}
	lo, hi := max(e2, e1-math.Pow(math.Pi/(f.k*f.d), 2)), e1
	for range 100 {
		n = (lo + hi) / 2
		q, g := f.k*math.Sqrt(e1-n), f.k*math.Sqrt(n-e2)
		if q*math.Sin(q*f.d/2) > weight*g*math.Cos(q*f.d/2) {
			lo = n
		} else {
			hi = n
		}
	}
	q, g := f.k*math.Sqrt(e1-n), f.k*math.Sqrt(n-e2)
	in, out := f.d/2+math.Sin(q*f.d)/(2*q), math.Pow(math.Cos(q*f.d/2), 2)/g
	return n, out / (in + out)
}

// A weakly guiding rectangular core between bounds. For the scalar equation Marcatili's separable field (Bell Syst. Tech. J. 48, 2071
// (1969)), its index corrected for the corners to first order (Kumar, Thyagarajan and Ghatak, Opt. Lett. 8, 63 (1983)), is a Rayleigh quotient, hence
// a lower bound of N; the effective-index method, which takes the best field along y at every x, is an upper one. The polarisation
// takes from N what it takes from that of the film across which E stands (the difference of its TE and TM); half as much again is allowed.
func TestWeaklyGuidingRectangle(t *testing.T) {
	const text = `
materials:
  core: {index: 1.45}
  clad: {index: 1.444}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
section:
  layers:
    - {material: clad}
    - {material: core, thickness: 8 um, fill: clad, strips: [{centre: 0 um, width: 10 um}]}
    - {material: clad}
accuracy: {neff: 1e-8}
`
	const n1, n2, width, height = 1.45, 1.444, 10 * um, 8 * um
	w := frequency(1.55 * um)
	k := w / schema.LightSpeed
	modes, _ := solve(t, guide(t, text), solvers.Q{w}, 2)
	if len(modes) != 2 {
		t.Fatalf("%d modes", len(modes))
	}
	across, up := film{n1, n2, width, k}, film{n1, n2, height, k}
	nx, outX := across.even(false)
	ny, outY := up.even(false)
	least := nx + ny - n1*n1 + (n1*n1-n2*n2)*outX*outY
	most, _ := film{math.Sqrt(ny), n2, width, k}.even(false)
	for _, m := range modes {
		f := across
		if m.Type == "quasi-TM" {
			f = up
		}
		te, _ := f.even(false)
		tm, _ := f.even(true)
		n := m.Neff * m.Neff
		if !(n > least-1.5*(te-tm) && n < most) {
			t.Errorf("%s: N = %.9f, want %.9f to %.9f", m.Family, n, least-1.5*(te-tm), most)
		}
		t.Logf("%s: N - n2^2 = %.4e, between %.4e and %.4e (polarisation %.1e)", m.Family, n-n2*n2, least-n2*n2, most-n2*n2, te-tm)
	}
	if !(most-least < 0.05*(most-n2*n2)) {
		t.Errorf("bounds %g and %g say little", least, most)
	}
}
