package slab

import (
	"math"
	"math/big"
	"testing"

	"betaloom/solvers"
	"betaloom/solvers/jet"
)

// model is a stack as a function of frequency and two parameters, that the
// solver sees as jets and the tests evaluate in high precision:
// eps_c = eps[c] + slope[c] x + curve[c] x^2 + cubic[c] x^3 + p1 (pull[c] + twist[c] x), x = w/w0 - 1,
// thickness = d (1 + p0) for films that stretch.
type model struct {
	name        string
	w0          float64
	layers      []medium
	bottom, top bool
}

type medium struct {
	eps, slope, curve, cubic [3]complex128
	pull, twist              [3]complex128
	d                        float64
	open                     bool
	stretch                  float64
}

func isotropic(e complex128) [3]complex128 { return [3]complex128{e, e, e} }

func half(n float64) medium { return medium{eps: isotropic(complex(n*n, 0)), open: true} }

func filmOf(n, d float64) medium {
	return medium{eps: isotropic(complex(n*n, 0)), d: d, stretch: 1}
}

func (m *model) stack() *Stack {
	s := &Stack{GroundBottom: m.bottom, GroundTop: m.top}
	w := complex(m.w0, 0)
	for _, l := range m.layers {
		var out Layer
		for c := range 3 {
			out.Eps[c] = jet.Jet{
				V: l.eps[c], W: l.slope[c] / w, WW: 2 * l.curve[c] / (w * w), WWW: 6 * l.cubic[c] / (w * w * w),
				P: []complex128{0, l.pull[c]}, WP: []complex128{0, l.twist[c] / w},
			}
		}
		out.HalfSpace = l.open
		out.Thickness = jet.Jet{V: complex(l.d, 0), P: []complex128{complex(l.d*l.stretch, 0), 0}}
		s.Layers = append(s.Layers, out)
	}
	return s
}

// shift is how far a point is from the model's own, in x, p0 and p1.
type shift [3]*big.Float

// characteristic is the mismatch of the whole stack at N, by plain transfer matrices
// from the bottom to the top, at the shifted point.
func (m *model) characteristic(tm bool, n2 num2, at shift) num2 {
	x := num2{at[0], zero()}
	k := rx(m.w0).div(rx(lightSpeed)).mul(rx(1).add(x))
	eps := func(l medium, c int) num2 {
		e := cx(l.cubic[c]).mul(x).add(cx(l.curve[c])).mul(x).add(cx(l.slope[c])).mul(x).add(cx(l.eps[c]))
		return e.add(cx(l.twist[c]).mul(x).add(cx(l.pull[c])).mul(num2{at[2], zero()}))
	}
	coefs := func(l medium) (p, r num2) { // phi = p psi', phi' = -r psi, over k
		if !tm {
			return rx(1), eps(l, 0).sub(n2)
		}
		return rx(1).div(eps(l, 2)), rx(1).sub(n2.div(eps(l, 1)))
	}
	decay := func(l medium) num2 { // p gamma
		p, r := coefs(l)
		g := r.neg().div(p).sqrt()
		return p.mul(g)
	}
	var psi, phi num2
	layers := m.layers
	switch {
	case m.bottom && tm:
		psi, phi = rx(1), rx(0)
	case m.bottom:
		psi, phi = rx(0), rx(1)
	default:
		psi, phi = rx(1), decay(layers[0])
		layers = layers[1:]
	}
	if !m.top {
		layers = layers[:len(layers)-1]
	}
	for _, l := range layers {
		p, r := coefs(l)
		h := k.mul(rx(l.d)).mul(rx(1).add(num2{at[1], zero()}.mul(rx(l.stretch))))
		c, s := coshSinhc(r.neg().div(p).mul(h).mul(h))
		s = s.mul(h)
		psi, phi = c.mul(psi).add(s.mul(phi).div(p)), c.mul(phi).sub(s.mul(r).mul(psi))
	}
	switch {
	case m.top && tm:
		return phi
	case m.top:
		return psi
	}
	return phi.add(decay(m.layers[len(m.layers)-1]).mul(psi))
}

// refine is the root N near a start, by the secant method on n.
func (m *model) refine(t *testing.T, tm bool, start num2, at shift) num2 {
	t.Helper()
	a := start
	b := a.mul(rx(1).add(num2{fl(1e-15), zero()}))
	fa, fb := m.characteristic(tm, a, at), m.characteristic(tm, b, at)
	for range 40 {
		d := fb.sub(fa)
		if d.abs2().Sign() == 0 {
			return b
		}
		step := fb.mul(b.sub(a)).div(d)
		a, fa = b, fb
		b = b.sub(step)
		if step.abs2().Cmp(zero().Mul(fl(1e-220), b.abs2())) < 0 {
			return b
		}
		fb = m.characteristic(tm, b, at)
	}
	t.Fatalf("%s: the reference iteration does not converge", m.name)
	return b
}

// truth is what a mode should be, from roots at neighbouring points: central
// differences with a step of 1e-20 in 420 bits are exact to more than 40 digits.
type truth struct {
	neff           complex128
	neffBig        num2
	ng, gvd, beta3 float64
	dneff, dng     [2]float64
}

func (m *model) truth(t *testing.T, tm bool, neff complex128) truth {
	t.Helper()
	h := fl(1e-20)
	n0 := cx(neff)
	root := func(x, p0, p1 int) num2 {
		at := shift{zero().Mul(h, fl(float64(x))), zero().Mul(h, fl(float64(p0))), zero().Mul(h, fl(float64(p1)))}
		return m.refine(t, tm, n0.mul(n0), at).sqrt()
	}
	n0 = root(0, 0, 0)
	beta := map[int]num2{0: n0}
	for _, i := range []int{-2, -1, 1, 2} {
		x := zero().Mul(h, fl(float64(i)))
		beta[i] = root(i, 0, 0).mul(rx(1).add(num2{x, zero()}))
	}
	diff := func(c map[int]int, order, den int) float64 {
		sum := rx(0)
		for i, k := range c {
			sum = sum.add(beta[i].times(k))
		}
		for range order {
			sum = sum.div(num2{h, zero()})
		}
		return real(sum.div(rx(float64(den))).float())
	}
	var r truth
	r.neff, r.neffBig = n0.float(), n0
	r.ng = diff(map[int]int{-2: 1, -1: -8, 1: 8, 2: -1}, 1, 12)
	r.gvd = diff(map[int]int{-2: -1, -1: 16, 0: -30, 1: 16, 2: -1}, 2, 12) / (lightSpeed * m.w0)
	r.beta3 = diff(map[int]int{-2: -1, -1: 2, 1: -2, 2: 1}, 3, 2) / (lightSpeed * m.w0 * m.w0)
	for i := range 2 {
		p := [2][2]int{{1, 0}, {0, 1}}[i]
		up, down := root(0, p[0], p[1]), root(0, -p[0], -p[1])
		r.dneff[i] = real(up.sub(down).div(num2{h, zero()}).times(1).float()) / 2
		cross := rx(0)
		for _, s := range [][2]int{{1, 1}, {-1, -1}, {1, -1}, {-1, 1}} {
			x := zero().Mul(h, fl(float64(s[0])))
			b := root(s[0], s[1]*p[0], s[1]*p[1]).mul(rx(1).add(num2{x, zero()}))
			cross = cross.add(b.times(s[0] * s[1]))
		}
		r.dng[i] = real(cross.div(num2{h, zero()}).div(num2{h, zero()}).float()) / 4
	}
	return r
}

const (
	ps2PerKm = 1e-27 // s^2/m
	ps3PerKm = 1e-39 // s^3/m
)

// deviation is a mode's errors over what the accuracy allows (1 is the limit),
// and over the mode's own bounds.
type deviation struct{ neff, ng, gvd, beta3, dneff, dng, bounds float64 }

func (m *model) compare(t *testing.T, got *solvers.Mode) deviation {
	t.Helper()
	r := m.truth(t, got.Type != "TE", complex(got.Neff, -got.Kappa))
	d := deviation{
		neff:  math.Abs(got.Neff-real(r.neff)) / (1e-11 * real(r.neff)),
		ng:    math.Abs(got.Ng-r.ng) / (1e-9 * math.Abs(r.ng)),
		gvd:   math.Abs(got.GVD-r.gvd) / (1e-7 * max(math.Abs(r.gvd), ps2PerKm)),
		beta3: math.Abs(got.Beta3-r.beta3) / (1e-7 * max(math.Abs(r.beta3), ps3PerKm)),
	}
	for i := range 2 {
		d.dneff = max(d.dneff, math.Abs(got.DNeff[i]-r.dneff[i])/(1e-9*max(1, math.Abs(r.dneff[i]))))
		d.dng = max(d.dng, math.Abs(got.DNg[i]-r.dng[i])/(1e-7*max(1, math.Abs(r.dng[i]))))
	}
	for _, b := range [][3]float64{
		{got.Neff, real(r.neff), got.NeffErr}, {got.Ng, r.ng, got.NgErr}, {got.GVD, r.gvd, got.GVDErr},
		{got.Beta3, r.beta3, got.Beta3Err}, {got.Kappa, -imag(r.neff), got.KappaErr},
	} {
		if e := math.Abs(b[0] - b[1]); e > 0 {
			d.bounds = max(d.bounds, e/b[2])
		}
	}
	return d
}
