package slab

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// TestPlasmon: a single interface guides one TM wave, n = sqrt(e1 e2/(e1+e2)) (Raether,
// Surface Plasmons, 1988), where Re n is above the index of the dielectric.
func TestPlasmon(t *testing.T) {
	w := frequency(testWavelength)
	for _, e := range []complex128{-95 - 3i, -95, -11.7 - 1.2i, -3 - 0.2i} {
		for _, e1 := range []complex128{1, 2.25, 2.25 - 0.01i} {
			t.Run(fmt.Sprintf("%v on %v", e, e1), func(t *testing.T) {
				m := &model{name: "plasmon", w0: w, layers: []medium{{eps: isotropic(e1), open: true}, {eps: isotropic(e), open: true}}}
				modes, count := solveModel(t, New(2), m, 4)
				if count.N != 1 || modes[0].Type != "TM" || modes[0].Family != "TM0" {
					t.Fatalf("%+v: %+v", count, modes)
				}
				want := cmplx.Sqrt(e1 * e / (e1 + e))
				got := complex(modes[0].Neff, -modes[0].Kappa)
				if cmplx.Abs(got-want) > 1e-14*cmplx.Abs(want)+modes[0].NeffErr {
					t.Errorf("n %v, expected %v", got, want)
				}
				if imag(e) == 0 && imag(e1) == 0 && modes[0].Kappa != 0 {
					t.Errorf("kappa %g without loss", modes[0].Kappa)
				}
			})
		}
	}
}

// TestThinMetal: the pair of waves on a metal film, tanh(g d/2) = -(e2 g1/(e1 g2))^(+-1)
// (Economou, Phys. Rev. 182, 539 (1969)), as residuals of that equation.
func TestThinMetal(t *testing.T) {
	w := frequency(testWavelength)
	e1, e2 := complex128(2.25), -95-3i
	for _, d := range []float64{10e-9, 20e-9, 50e-9, 200e-9} {
		t.Run(fmt.Sprintf("%g nm", d*1e9), func(t *testing.T) {
			out := medium{eps: isotropic(e1), open: true}
			m := &model{name: "film", w0: w, layers: []medium{out, {eps: isotropic(e2), d: d}, out}}
			modes, _ := solveModel(t, New(2), m, 8)
			if len(modes) != 2 {
				t.Fatalf("%d modes, expected 2", len(modes))
			}
			for _, mode := range modes {
				n := complex(mode.Neff, -mode.Kappa)
				g1, g2 := cmplx.Sqrt(n*n-e1), cmplx.Sqrt(n*n-e2)
				th := cmplx.Tanh(g2 * complex(w/lightSpeed*d/2, 0))
				left, right := g2*e1, -e2*g1*th
				if mode.Symmetry == "even" {
					left, right = g2*th*e1, -e2*g1
				}
				if cmplx.Abs(left-right) > 1e-11*cmplx.Abs(left) {
					t.Errorf("%s: residual %v of %v", mode.Symmetry, left-right, left)
				}
			}
		})
	}
}

// TestGainIsLossReversed: with every permittivity conjugated so is every
// mode (the equation has no other complex number), to the last digit.
func TestGainIsLossReversed(t *testing.T) {
	for _, m := range layeredModels() {
		t.Run(m.name, func(t *testing.T) {
			stack := m.stack()
			loss, _, err := New(2).Solve(context.Background(), m.w0, stack, 40)
			if err != nil {
				t.Fatal(err)
			}
			for i := range stack.Layers {
				for c := range 3 {
					e := &stack.Layers[i].Eps[c]
					e.V, e.W, e.WW, e.WWW = cmplx.Conj(e.V), cmplx.Conj(e.W), cmplx.Conj(e.WW), cmplx.Conj(e.WWW)
				}
			}
			gain, _, err := New(2).Solve(context.Background(), m.w0, stack, 40)
			if err != nil {
				t.Fatal(err)
			}
			if len(gain) != len(loss) || len(gain) == 0 {
				t.Fatalf("%d modes and %d", len(loss), len(gain))
			}
			for i := range gain {
				a, b := &loss[i], &gain[i]
				if a.Family != b.Family || !near(a.Neff, b.Neff, 1e-14) || !near(a.Kappa, -b.Kappa, 1e-14) || !near(a.Ng, b.Ng, 1e-13) || !near(a.GVD, b.GVD, 1e-9) {
					t.Errorf("%+v\n%+v", a, b)
				}
			}
		})
	}
}

func near(a, b, tol float64) bool { return math.Abs(a-b) <= tol*max(1, math.Abs(a), math.Abs(b)) }

// TestShiftedPermittivity: adding one number to eps_x everywhere adds it to N of
// every TE mode, exactly, complex or not: the equation holds eps_x - N only.
func TestShiftedPermittivity(t *testing.T) {
	w := frequency(testWavelength)
	base := []medium{half(1.444), filmOf(2, 0.9e-6), filmOf(1.7, 0.4e-6), half(1)}
	before, _ := solveModel(t, New(2), &model{name: "before", w0: w, layers: base}, 40)
	list := polarised(before, false)
	if len(list) < 2 {
		t.Fatal("too few modes")
	}
	for _, add := range []complex128{0.5, -0.05i, 0.2 - 0.03i, 0.04i} {
		t.Run(fmt.Sprint(add), func(t *testing.T) {
			var layers []medium
			for _, l := range base {
				layers = append(layers, absorbing(l, -add))
			}
			after, _ := solveModel(t, New(2), &model{name: "after", w0: w, layers: layers}, 40)
			moved := polarised(after, false)
			if len(moved) != len(list) {
				t.Fatalf("%d modes, expected %d", len(moved), len(list))
			}
			for i, mode := range moved {
				want := cmplx.Sqrt(complex(list[i].Neff*list[i].Neff, 0) + add)
				got := complex(mode.Neff, -mode.Kappa)
				if cmplx.Abs(got-want) > 1e-14 {
					t.Errorf("%s: n %v, expected %v", mode.Family, got, want)
				}
			}
		})
	}
}

// TestPlates: between two metal planes with one fill n^2 = e - (m pi/k d)^2, so
// n ng = e, with loss too; TM also has the TEM wave. Textbook (Pozar, Microwave
// Engineering, section 3.2).
func TestPlates(t *testing.T) {
	w := 2 * math.Pi * 30e9
	d := 0.02
	for _, e := range []complex128{2.2, 2.2 - 0.002i, 1} {
		t.Run(fmt.Sprint(e), func(t *testing.T) {
			m := &model{name: "plates", w0: w, layers: []medium{{eps: isotropic(e), d: d}}, bottom: true, top: true}
			modes, _ := solveModel(t, New(2), m, 40)
			index := func(half int) complex128 {
				return cmplx.Sqrt(e - complex(math.Pow(float64(half)*math.Pi*lightSpeed/(w*d), 2), 0))
			}
			cut := int(math.Sqrt(real(e)) * w * d / (math.Pi * lightSpeed))
			if len(modes) != 2*cut+1 {
				t.Fatalf("%d modes, expected %d", len(modes), 2*cut+1)
			}
			for _, mode := range modes {
				number := 0
				if mode.Type != "TEM" {
					fmt.Sscanf(mode.Family[2:], "%d", &number)
				}
				if mode.Type == "TE" {
					number++ // TE0 is the one without a node between the planes
				}
				want := index(number)
				if cut := float64(number) * lightSpeed / (2 * d * math.Sqrt(real(e))); imag(e) == 0 && !near(mode.Cutoff/cut, 1, 1e-14) && number > 0 {
					t.Errorf("%s: cut-off %g, expected %g", mode.Family, mode.Cutoff, cut)
				}
				got := complex(mode.Neff, -mode.Kappa)
				if cmplx.Abs(got-want) > 1e-13 || !near(mode.Ng, real(e/want), 1e-11) {
					t.Errorf("%s: n %v ng %v, expected %v %v", mode.Family, got, mode.Ng, want, real(e/want))
				}
				z := impedanceOfVacuum / want
				if mode.Type != "TE" {
					z = impedanceOfVacuum * want / e
				}
				if cmplx.Abs(mode.Z-z) > 1e-10*cmplx.Abs(z) || mode.ZDefinition != "wave" {
					t.Errorf("%s: impedance %v, expected %v", mode.Family, mode.Z, z)
				}
			}
			if modes[0].Type != "TEM" || modes[0].Family != "TEM" || modes[0].GVD != 0 {
				t.Errorf("the first mode is %+v", modes[0])
			}
			if !(modes[0].NgErr < 1e-11) || len(modes[0].Flags) != 0 { // the tolerance of ng above; N = eps leaves no doubt
				t.Errorf("the first mode's bound %g, flags %v", modes[0].NgErr, modes[0].Flags)
			}
		})
	}
}

// TestLossAppears: a mode whose loss is too small to move it keeps the
// kappa that first-order perturbation gives, (share in the film) Im eps/2n for TE.
func TestLossAppears(t *testing.T) {
	w := frequency(testWavelength)
	for _, loss := range []float64{1e-4, 1e-8, 1e-15} {
		t.Run(fmt.Sprint(loss), func(t *testing.T) {
			film := absorbing(filmOf(2, 0.8e-6), complex(0, loss))
			modes, _ := solveModel(t, New(2), &model{name: "film", w0: w, layers: []medium{half(1.444), film, half(1)}}, 1)
			want := modes[0].Confinement[1] * loss / (2 * modes[0].Neff)
			if math.Abs(modes[0].Kappa-want) > 1e-3*loss*loss+1e-10*want {
				t.Errorf("kappa %g, expected %g", modes[0].Kappa, want)
			}
		})
	}
}

// TestLossyCounts compares the number of modes with that of zeros of the
// characteristic function, counted by the argument principle in fixed small steps round the
// whole region, with plain transfer matrices and nothing of the solver's.
func TestLossyCounts(t *testing.T) {
	for _, m := range layeredModels() {
		t.Run(m.name, func(t *testing.T) {
			modes, count := solveModel(t, New(2), m, 40)
			if count.N != len(modes) || count.N == 0 {
				t.Fatalf("%+v for %d modes", count, len(modes))
			}
			for _, tm := range []bool{false, true} {
				if got, want := len(polarised(modes, tm)), m.winding(tm); got != want {
					t.Errorf("tm %v: %d modes, expected %d", tm, got, want)
				}
			}
			seen := map[string]bool{}
			for i, mode := range modes {
				if seen[mode.Family] {
					t.Errorf("%s twice", mode.Family)
				}
				seen[mode.Family] = true
				if i > 0 && mode.Neff > modes[i-1].Neff*(1+1e-14) {
					t.Errorf("%s is above the one before", mode.Family)
				}
			}
		})
	}
}

// winding counts zeros with Re n above both half-spaces and |Im n| below Re n and 1.5.
func (m *model) winding(tm bool) int {
	c := 1e-3
	for _, l := range m.layers {
		if l.open {
			axis := 0
			if tm {
				axis = 1
			}
			c = max(c, real(cmplx.Sqrt(l.eps[axis]))+1e-9)
		}
	}
	const y, far = 1.5, 8
	low := min(c, y)
	path := []complex128{complex(c, -low), complex(max(c, y), -y), complex(far, -y), complex(far, y), complex(max(c, y), y), complex(c, low), complex(c, -low)}
	turns := 0.0
	last := m.quick(tm, path[0])
	for i := 1; i < len(path); i++ {
		const steps = 8000
		for k := 1; k <= steps; k++ {
			f := m.quick(tm, path[i-1]+(path[i]-path[i-1])*complex(float64(k)/steps, 0))
			turns += cmplx.Phase(f / last)
			last = f
		}
	}
	return int(math.Round(turns / (2 * math.Pi)))
}

// quick is the characteristic function in double precision.
func (m *model) quick(tm bool, n complex128) complex128 {
	coefs := func(l medium) (p, r complex128) {
		if tm {
			return 1 / l.eps[2], 1 - n*n/l.eps[1]
		}
		return 1, l.eps[0] - n*n
	}
	decay := func(l medium) complex128 {
		p, r := coefs(l)
		return p * cmplx.Sqrt(-r/p)
	}
	layers, psi, phi := m.layers, complex128(1), complex128(0)
	switch {
	case !m.bottom:
		phi, layers = decay(layers[0]), layers[1:]
	case !tm:
		psi, phi = 0, 1
	}
	for _, l := range layers {
		if l.open {
			return phi + decay(l)*psi
		}
		p, r := coefs(l)
		q := cmplx.Sqrt(r / p)
		x := q * complex(m.w0/lightSpeed*l.d, 0)
		cos, sin := cmplx.Cos(x), cmplx.Sin(x)
		psi, phi = cos*psi+sin/(q*p)*phi, cos*phi-p*q*sin*psi
		size := complex(1/(cmplx.Abs(psi)+cmplx.Abs(phi)), 0)
		psi, phi = psi*size, phi*size
	}
	if tm {
		return phi
	}
	return psi
}
