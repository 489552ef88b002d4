package slab

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"betaloom/solvers"
	"betaloom/solvers/jet"
)

func guide() *model {
	return &model{name: "guide", w0: frequency(testWavelength), layers: []medium{half(1.444), filmOf(2, 0.8e-6), filmOf(1.7, 0.3e-6), half(1)}}
}

// TestBadInput: what cannot be solved is an *solvers.InputError that names the layer.
func TestBadInput(t *testing.T) {
	nan, inf := complex(math.NaN(), 0), complex(math.Inf(1), 0)
	cases := map[string]struct {
		spoil func(*Stack)
		where string
	}{
		"no layer":              {func(s *Stack) { s.Layers = nil }, "slab"},
		"negative thickness":    {func(s *Stack) { s.Layers[1].Thickness.V = -1e-9 }, "layer 1"},
		"thickness NaN":         {func(s *Stack) { s.Layers[2].Thickness.V = nan }, "layer 2"},
		"thickness infinite":    {func(s *Stack) { s.Layers[2].Thickness.V = inf }, "layer 2"},
		"thickness complex":     {func(s *Stack) { s.Layers[1].Thickness.V = 1e-6 + 1e-9i }, "layer 1"},
		"thickness of 1 km":     {func(s *Stack) { s.Layers[1].Thickness.V = 1e3 }, "layer 1"},
		"zero permittivity":     {func(s *Stack) { s.Layers[3].Eps[1].V = 0 }, "layer 3"},
		"permittivity NaN":      {func(s *Stack) { s.Layers[0].Eps[2].V = nan }, "layer 0"},
		"derivative infinite":   {func(s *Stack) { s.Layers[0].Eps[0].WW = inf }, "layer 0"},
		"gradient NaN":          {func(s *Stack) { s.Layers[1].Eps[0].P[1] = nan }, "layer 1"},
		"gradient too short":    {func(s *Stack) { s.Layers[1].Eps[0].P = s.Layers[1].Eps[0].P[:1] }, "layer 1"},
		"half-space within":     {func(s *Stack) { s.Layers[1].HalfSpace = true }, "layer 1"},
		"no half-space at end":  {func(s *Stack) { s.Layers[3].HalfSpace = false }, "layer 3"},
		"half-space at a plane": {func(s *Stack) { s.GroundTop = true }, "layer 3"},
		"half-space alone":      {func(s *Stack) { s.Layers = s.Layers[:1] }, "layer 0"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			m := guide()
			stack := m.stack()
			c.spoil(stack)
			modes, _, err := New(2).Solve(context.Background(), m.w0, stack, 4)
			var input *solvers.InputError
			if !errors.As(err, &input) || input.Where != c.where || len(modes) != 0 {
				t.Errorf("%v, %d modes; expected an input error at %s", err, len(modes), c.where)
			}
		})
	}
	for _, w := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		t.Run(fmt.Sprintf("frequency %g", w), func(t *testing.T) {
			var input *solvers.InputError
			if _, _, err := New(2).Solve(context.Background(), w, guide().stack(), 4); !errors.As(err, &input) {
				t.Errorf("%v", err)
			}
		})
	}
}

// TestHyperbolic: a film with eps_y and eps_z of opposite sign guides TM modes
// without bound on their index (a fact of the trade: common practice, no source).
func TestHyperbolic(t *testing.T) {
	m := guide()
	m.layers[1].eps[2] = -3
	_, _, err := New(2).Solve(context.Background(), m.w0, m.stack(), 4)
	var doubt *solvers.ConvergenceError
	if !errors.As(err, &doubt) || !strings.Contains(err.Error(), "no bound") {
		t.Errorf("%v", err)
	}
}

func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, _, err := New(2).Solve(ctx, guide().w0, guide().stack(), 4); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}

// TestNothingGuided: not an error, but an answer with its reason.
func TestNothingGuided(t *testing.T) {
	w := frequency(testWavelength)
	cases := map[string]struct {
		m    model
		says string
	}{
		"low film":      {model{layers: []medium{half(1.5), filmOf(1.4, 1e-6), half(1)}}, "no layer has an index above 1.5"},
		"thin film":     {model{layers: []medium{half(1.5), filmOf(2, 0.01e-6), half(1)}}, "too thin"},
		"no film":       {model{layers: []medium{half(1.5), half(1)}}, "no layer has a thickness"},
		"zero film":     {model{layers: []medium{half(1.5), filmOf(2, 0), half(1)}}, "no layer has a thickness"},
		"lossy low":     {model{layers: []medium{half(1.5), absorbing(filmOf(1.4, 1e-6), 0.1i), half(1)}}, "no layer has an index above 1.5"},
		"one substance": {model{layers: []medium{half(1.5), filmOf(1.5, 1e-6), half(1.5)}}, "no layer has an index above 1.5"},
	}
	for name, c := range cases {
		t.Run(name, func(t *testing.T) {
			c.m.w0 = w
			modes, count := solveModel(t, New(2), &c.m, 4)
			if count.N != 0 || len(modes) != 0 || count.Proof == "" || !strings.HasPrefix(count.Reason, "no guided mode, because ") || !strings.Contains(count.Reason, c.says) {
				t.Errorf("%d modes, %+v; expected a reason with %q", len(modes), count, c.says)
			}
		})
	}
}

// TestZeroThickness: a layer of thickness zero is not there, but the mode's
// sensitivity to its thickness is that of putting it in.
func TestZeroThickness(t *testing.T) {
	w := frequency(testWavelength)
	with := func(d float64) []solvers.Mode {
		inner := filmOf(1.7, d)
		m := model{w0: w, layers: []medium{half(1.444), filmOf(2, 0.8e-6), inner, half(1)}}
		stack := m.stack()
		stack.Layers[1].Thickness.P[0] = 0
		stack.Layers[2].Thickness.P[0] = 1
		modes, _, err := New(2).Solve(context.Background(), w, stack, 8)
		if err != nil {
			t.Fatal(err)
		}
		return modes
	}
	bare, _ := solveModel(t, New(2), &model{w0: w, layers: []medium{half(1.444), filmOf(2, 0.8e-6), half(1)}}, 8)
	zero, step := with(0), 1e-11
	more, most := with(step), with(2*step)
	if len(zero) != len(bare) || len(zero) == 0 {
		t.Fatalf("%d modes, expected %d", len(zero), len(bare))
	}
	for i := range zero {
		if !near(zero[i].Neff, bare[i].Neff, 1e-15) || !near(zero[i].GVD, bare[i].GVD, 1e-30) {
			t.Errorf("%s: %v without the layer %v", zero[i].Family, zero[i].Neff, bare[i].Neff)
		}
		difference := (4*more[i].Neff - most[i].Neff - 3*zero[i].Neff) / (2 * step)
		if math.Abs(difference-zero[i].DNeff[0]) > 1e-3*math.Abs(difference) { // rounding over the step
			t.Errorf("%s: dneff/dd %g, by difference %g", zero[i].Family, zero[i].DNeff[0], difference)
		}
	}
}

// TestWant: no more modes than asked for, the first ones, and the count is of all.
func TestWant(t *testing.T) {
	m := guide()
	all, count := solveModel(t, New(2), m, 100)
	if count.N != len(all) || count.N < 4 {
		t.Fatalf("%d of %d", len(all), count.N)
	}
	for want := range count.N {
		few, again := solveModel(t, New(2), m, want)
		if len(few) != want || again.N != count.N {
			t.Fatalf("%d modes of %d, expected %d", len(few), again.N, want)
		}
		for i := range few {
			if few[i].Family != all[i].Family || few[i].Neff != all[i].Neff {
				t.Errorf("mode %d of %d is %s", i, want, few[i].Family)
			}
		}
	}
}

// fieldOf integrates the equations of a mode across the stack in small steps from the
// bottom, and returns positions over 1/k and psi, for checks of what fields give.
func fieldOf(m *model, mode *solvers.Mode) (y []float64, psi, weight []complex128) {
	tm := mode.Type != "TE"
	n := complex(mode.Neff, -mode.Kappa)
	coefs := func(l medium) (p, r, w complex128) {
		if tm {
			return 1 / l.eps[2], 1 - n*n/l.eps[1], complex(real(n/l.eps[1]), 0)
		}
		return 1, l.eps[0] - n*n, 1
	}
	const steps = 4000
	low, high := m.layers[0], m.layers[len(m.layers)-1]
	p, r, w := coefs(low)
	g := cmplx.Sqrt(-r / p)
	far := 30 / real(g)
	at := -far
	v := cmplx.Exp(-g * complex(far, 0))
	f := p * g * v
	push := func(p, r, w complex128, d float64) {
		h := complex(d/steps, 0)
		q := cmplx.Sqrt(r / p)
		c, s := cmplx.Cos(q*h), cmplx.Sin(q*h)/q
		for range steps {
			y, psi, weight = append(y, at), append(psi, v), append(weight, w)
			v, f = c*v+s*f/p, c*f-r*s*v
			at += d / steps
		}
		y, psi, weight = append(y, at), append(psi, v), append(weight, w)
	}
	push(p, r, w, far)
	for _, l := range m.layers[1 : len(m.layers)-1] {
		p, r, w := coefs(l)
		push(p, r, w, l.d*m.w0/lightSpeed)
	}
	p, r, w = coefs(high)
	g = cmplx.Sqrt(-r / p)
	start := v
	for i := range steps + 1 {
		d := 30 / real(g) * float64(i) / steps
		y, psi, weight = append(y, at+d), append(psi, start*cmplx.Exp(-g*complex(d, 0))), append(weight, w)
	}
	return y, psi, weight
}

// TestFields compares shares of power, width and signature with sums over a field
// integrated in steps, by Simpson's rule (error below 1e-9 with 4,000 steps a layer).
func TestFields(t *testing.T) {
	w := frequency(testWavelength)
	models := []*model{
		{name: "films", w0: w, layers: []medium{half(1.444), filmOf(2, 0.8e-6), filmOf(1.6, 0.3e-6), anisotropic(filmOf(1.9, 0.4e-6)), half(1)}},
		{name: "lossy", w0: w, layers: []medium{half(1.444), absorbing(filmOf(2, 0.8e-6), 0.2i), filmOf(1.6, 0.3e-6), half(1)}},
		{name: "symmetric", w0: w, layers: []medium{half(1.444), filmOf(2, 0.8e-6), filmOf(1.6, 0.3e-6), filmOf(2, 0.8e-6), half(1.444)}},
		{name: "metal film", w0: w, layers: []medium{half(1.45), {eps: isotropic(-95 - 3i), d: 30e-9}, half(1.5)}},
	}
	for _, m := range models {
		modes, count := solveModel(t, New(2), m, 20)
		if count.N == 0 {
			t.Fatalf("%s: no mode", m.name)
		}
		for i := range modes {
			mode := &modes[i]
			t.Run(m.name+" "+mode.Family, func(t *testing.T) {
				y, psi, weight := fieldOf(m, mode)
				layers := len(m.layers)
				const each = 4001
				share := make([]float64, layers)
				var one, two float64
				for l := range layers {
					h := (y[l*each+1] - y[l*each]) / 3
					for j := range each {
						c := 4.0
						if j == 0 || j == each-1 {
							c = 1
						} else if j%2 == 0 {
							c = 2
						}
						k := l*each + j
						s := real(weight[k]) * math.Pow(cmplx.Abs(psi[k]), 2)
						share[l] += c * h * s
						two += c * h * s * s
					}
					one += share[l]
				}
				for l := range share {
					if math.Abs(share[l]/one-mode.Confinement[l]) > 1e-8 {
						t.Errorf("layer %d: share %.12g, expected %.12g", l, mode.Confinement[l], share[l]/one)
					}
				}
				if width := one * one / two / (w / lightSpeed); math.Abs(mode.Weff/width-1) > 1e-8 {
					t.Errorf("width %.12g, expected %.12g", mode.Weff, width)
				}
				checkSignature(t, mode, y, psi, each)
			})
		}
	}
}

// checkSignature: sixteen samples over the films and a quarter of their extent on each side.
func checkSignature(t *testing.T, mode *solvers.Mode, y []float64, psi []complex128, each int) {
	t.Helper()
	total := y[len(y)-each]
	var want [16]complex128
	var squares complex128
	for i := range want {
		at := total * (-0.25 + 1.5*(float64(i)+0.5)/16)
		k := 0
		for k < len(y)-2 && y[k+1] <= at {
			k++
		}
		f := complex((at-y[k])/(y[k+1]-y[k]), 0)
		want[i] = psi[k]*(1-f) + psi[k+1]*f
		squares += want[i] * want[i]
	}
	turn := 1 / cmplx.Sqrt(squares)
	if real(turn) < 0 {
		turn = -turn
	}
	norm := 0.0
	for i := range want {
		norm += math.Pow(real(want[i]*turn), 2)
	}
	for i := range want {
		if v := real(want[i]*turn) / math.Sqrt(norm); math.Abs(float64(mode.Signature[i])-v) > 1e-4 { // linear interpolation
			t.Errorf("sample %d: %g, expected %g", i, mode.Signature[i], v)
		}
	}
}

// TestAccidentalTwins: two equal films on unlike sides, so far apart that no digit tells
// their modes apart, are still two modes, each with its power in one film.
func TestAccidentalTwins(t *testing.T) {
	w := frequency(testWavelength)
	for _, loss := range []complex128{0, 0.001i} {
		t.Run(fmt.Sprint(loss), func(t *testing.T) {
			film := absorbing(filmOf(2, 0.4e-6), loss)
			m := &model{name: "twins", w0: w, layers: []medium{half(1.3), filmOf(1.444, 20e-6), film, filmOf(1.444, 20e-6), film, filmOf(1.444, 21e-6), half(1)}}
			alone := &model{name: "alone", w0: w, layers: []medium{half(1.444), film, half(1.444)}}
			one, _ := solveModel(t, New(2), alone, 8)
			modes, _ := solveModel(t, New(2), m, 4)
			if len(one) != 2 || len(modes) != 4 {
				t.Fatalf("%d and %d modes", len(one), len(modes))
			}
			for i := range modes {
				x, y := &modes[i], &one[i/2]
				if !near(x.Neff, y.Neff, 1e-14) || !near(x.Ng, y.Ng, 1e-12) || !near(x.GVD/ps2PerKm, y.GVD/ps2PerKm, 1e-7) || !near(x.Kappa, y.Kappa, 1e-14) {
					t.Errorf("%s: %v %v %v, alone %v %v %v", x.Family, x.Neff, x.Ng, x.GVD, y.Neff, y.Ng, y.GVD)
				}
				lower, upper := x.Confinement[2], x.Confinement[4]
				if min(lower, upper) > 1e-9 || !near(max(lower, upper), y.Confinement[1], 1e-9) {
					t.Errorf("%s: shares %g and %g, alone %g", x.Family, lower, upper, y.Confinement[1])
				}
				if i%2 == 1 && (lower > upper) == (modes[i-1].Confinement[2] > modes[i-1].Confinement[4]) {
					t.Errorf("%s lies in the same film as the one before", x.Family)
				}
			}
		})
	}
}

// FuzzSolve: no stack makes the solver panic, hang or give a number that is not finite where it has a meaning.
func FuzzSolve(f *testing.F) {
	f.Add(1.0, 2.0, 0.0, 0.8, 1.5, -0.1, 0.3, 1.0, 1.55, uint8(0))
	f.Add(2.25, -95.0, -3.0, 0.02, 2.25, 0.0, 0.1, 2.25, 1.55, uint8(3))
	f.Add(2.0, 4.0, 0.5, 30.0, 2.0, 1e-9, 0.0, 2.0, 0.4, uint8(1))
	f.Add(1e-9, 1e9, -1e9, 1e-6, -1.0, 0.0, 5.0, -2.0, 10.0, uint8(2))
	f.Fuzz(func(t *testing.T, a, b, bi, d1, c, ci, d2, e, wavelength float64, kind uint8) {
		eps := func(v complex128, tilt complex128) [3]jet.Jet {
			return [3]jet.Jet{{V: v}, {V: v * tilt}, {V: v}}
		}
		tilt := complex128(1)
		if kind&4 != 0 {
			tilt = 1.1
		}
		s := &Stack{GroundBottom: kind&1 != 0, GroundTop: kind&2 != 0}
		if !s.GroundBottom {
			s.Layers = append(s.Layers, Layer{Eps: eps(complex(a, 0), tilt), HalfSpace: true})
		}
		s.Layers = append(s.Layers,
			Layer{Eps: eps(complex(b, bi), tilt), Thickness: jet.Jet{V: complex(d1*1e-6, 0)}},
			Layer{Eps: eps(complex(c, ci), 1), Thickness: jet.Jet{V: complex(d2*1e-6, 0)}})
		if !s.GroundTop {
			s.Layers = append(s.Layers, Layer{Eps: eps(complex(e, 0), tilt), HalfSpace: true})
		}
		w := frequency(wavelength * 1e-6)
		modes, count, err := New(0).Solve(context.Background(), w, s, 4)
		if err != nil {
			return
		}
		if count.N < len(modes) || count.N == 0 && count.Reason == "" {
			t.Fatalf("%d modes, %+v", len(modes), count)
		}
		for i := range modes {
			m := &modes[i]
			for _, v := range []float64{m.Neff, m.Kappa, m.Ng, m.GVD, m.Beta3, m.NeffErr, m.NgErr, m.Weff} {
				if math.IsNaN(v) || math.IsInf(v, 0) {
					t.Fatalf("%+v of %+v", m, s)
				}
			}
		}
	})
}

// TestHistory: what a solver solved before leaves no trace in its answers.
func TestHistory(t *testing.T) {
	used := New(2)
	models := layeredModels()
	for i := range models {
		solveModel(t, used, models[len(models)-1-i], 3)
	}
	for _, m := range models {
		t.Run(m.name, func(t *testing.T) {
			a, _ := solveModel(t, New(2), m, 5)
			b, _ := solveModel(t, used, m, 5)
			if x, y := fmt.Sprint(a), fmt.Sprint(b); x != y || len(a) == 0 {
				t.Errorf("%s\n%s", x, y)
			}
		})
	}
}
