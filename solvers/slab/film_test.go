package slab

import (
	"fmt"
	"math"
	"math/big"
	"testing"

	"betaloom/solvers"
)

// guideEquation is a film between two media in the form of Yeh, Optical Waves in
// Layered Media: q d = m pi + atan(a1) + atan(a2), with a the ratios of the outer
// decay to the inner wave number, both over eps_z for TM. It is solved here by bisection in
// 420-bit arithmetic for the number of the mode.
type guideEquation struct {
	tm              bool
	film, low, high medium
	w, d            float64
	upper           func(x *big.Float) *big.Float // factor on the upper decay over k, for coupled films
}

func (g *guideEquation) excess(n2 *big.Float, m int) *big.Float {
	k := zero().Quo(fl(g.w), fl(lightSpeed))
	wave := func(l medium, sign float64) (q, p *big.Float) { // transverse number over k, and over eps_z
		if !g.tm {
			q = zero().Sqrt(zero().Mul(fl(sign), zero().Sub(fl(real(l.eps[0])), n2)))
			return q, q
		}
		v := zero().Sub(fl(1), zero().Quo(n2, fl(real(l.eps[1]))))
		q = zero().Sqrt(zero().Mul(fl(sign*real(l.eps[2])), v))
		return q, zero().Quo(q, fl(real(l.eps[2])))
	}
	q, pf := wave(g.film, 1)
	_, pl := wave(g.low, -1)
	gh, ph := wave(g.high, -1)
	if g.upper != nil {
		ph = zero().Mul(ph, g.upper(gh))
	}
	f := zero().Mul(zero().Mul(q, k), fl(g.d))
	f.Sub(f, zero().Mul(fl(float64(m)), bigPi()))
	f.Sub(f, atan(zero().Quo(pl, pf)))
	return f.Sub(f, atan(zero().Quo(ph, pf)))
}

// solve bisects for N.
func (g *guideEquation) solve(m int) *big.Float {
	c := 0
	if g.tm {
		c = 1
	}
	lo := fl(max(real(g.low.eps[c]), real(g.high.eps[c])))
	hi := fl(real(g.film.eps[c]))
	for range 140 {
		mid := zero().Mul(fl(0.5), zero().Add(lo, hi))
		if g.excess(mid, m).Sign() > 0 {
			lo = mid
		} else {
			hi = mid
		}
	}
	return zero().Sqrt(lo)
}

func bigError(got float64, want *big.Float) float64 {
	d, _ := zero().Quo(zero().Sub(fl(got), want), want).Float64()
	return math.Abs(d)
}

func polarised(modes []solvers.Mode, tm bool) []solvers.Mode {
	var out []solvers.Mode
	for _, m := range modes {
		if (m.Type != "TE") == tm {
			out = append(out, m)
		}
	}
	return out
}

// TestThreeLayerEquation: 1e-11 relative is what the solver is held to.
func TestThreeLayerEquation(t *testing.T) {
	w := frequency(testWavelength)
	films := []medium{filmOf(2, 0.8e-6), filmOf(3.5, 0.3e-6), filmOf(1.46, 6e-6), anisotropic(filmOf(2, 1.1e-6))}
	sides := [][2]medium{{half(1.444), half(1)}, {half(1.444), half(1.444)}, {anisotropic(half(1.3)), half(1.45)}}
	for i, film := range films {
		for j, side := range sides {
			m := &model{name: "film", w0: w, layers: []medium{side[0], film, side[1]}}
			modes, _ := solveModel(t, New(2), m, 40)
			for _, tm := range []bool{false, true} {
				t.Run(fmt.Sprintf("film %d sides %d tm %v", i, j, tm), func(t *testing.T) {
					list := polarised(modes, tm)
					if len(list) == 0 {
						t.Fatal("no mode")
					}
					for n, mode := range list {
						g := guideEquation{tm: tm, film: film, low: side[0], high: side[1], w: w, d: film.d}
						want := g.solve(n)
						if e := bigError(mode.Neff, want); e > 1e-11 || e*mode.Neff > mode.NeffErr {
							t.Errorf("%s: neff %.17g, off by %g, bound %g", mode.Family, mode.Neff, e, mode.NeffErr)
						}
					}
				})
			}
		}
	}
}

// TestNearCutoff chooses the thickness, in closed form, so that a mode lies a given distance
// above cut-off: neither digits nor derivatives may be lost there.
func TestNearCutoff(t *testing.T) {
	for _, above := range []float64{1e-6, 1e-9} {
		for _, sides := range [][2]medium{{half(1.444), half(1)}, {half(1.444), half(1.444)}, {half(1.444), half(1.4439999)}} {
			for number := range 3 {
				name := fmt.Sprintf("%g above, sides %.7f %.7f, TE%d", above, real(sides[0].eps[0]), real(sides[1].eps[0]), number)
				t.Run(name, func(t *testing.T) {
					n2 := math.Pow(math.Sqrt(real(sides[0].eps[0]))+above, 2)
					film := dispersive(filmOf(2, 0))
					q := math.Sqrt(real(film.eps[0]) - n2)
					phase := float64(number) * math.Pi
					for _, s := range sides {
						phase += math.Atan(math.Sqrt(n2-real(s.eps[0])) / q)
					}
					w := frequency(testWavelength)
					film.d = phase / q * lightSpeed / w
					m := &model{name: name, w0: w, layers: []medium{sides[0], film, sides[1]}}
					modes, _ := solveModel(t, New(2), m, 40)
					list := polarised(modes, false)
					if len(list) != number+1 {
						t.Fatalf("%d modes, expected %d", len(list), number+1)
					}
					mode := list[number]
					if len(mode.Flags) != 1 || mode.Flags[0] != "near-cutoff" {
						t.Errorf("flags %v", mode.Flags)
					}
					judge(t, m, &mode)
				})
			}
		}
	}
}

// TestNormalised: Kogelnik and Ramaswamy, Appl. Opt. 13, 1857 (1974). With V = k d sqrt(nf^2-ns^2),
// b = (N^2-ns^2)/(nf^2-ns^2) and a = (ns^2-nc^2)/(nf^2-ns^2) TE modes of all films obey
// V sqrt(1-b) = m pi + atan sqrt(b/(1-b)) + atan sqrt((b+a)/(1-b)).
func TestNormalised(t *testing.T) {
	w := frequency(testWavelength)
	nf, ns := 1.52, 1.5
	step := nf*nf - ns*ns
	for _, a := range []float64{0, 1, 10} {
		for number := range 3 {
			for _, b := range []float64{0.02, 0.3, 0.6, 0.9} {
				t.Run(fmt.Sprintf("a %g m %d b %g", a, number, b), func(t *testing.T) {
					if ns*ns-a*step <= 0 {
						t.Fatal("no such cover")
					}
					v := (float64(number)*math.Pi + math.Atan(math.Sqrt(b/(1-b))) + math.Atan(math.Sqrt((b+a)/(1-b)))) / math.Sqrt(1-b)
					m := &model{name: "b-V", w0: w, layers: []medium{half(ns), filmOf(nf, v/math.Sqrt(step)*lightSpeed/w), half(math.Sqrt(ns*ns - a*step))}}
					modes, _ := solveModel(t, New(2), m, 40)
					list := polarised(modes, false)
					if len(list) <= number {
						t.Fatalf("%d modes", len(list))
					}
					got := (list[number].Neff*list[number].Neff - ns*ns) / step
					if math.Abs(got-b) > 1e-12 { // rounding of V and of N^2 over step
						t.Errorf("b %.15g, expected %g", got, b)
					}
				})
			}
		}
	}
}

// TestCutoffThickness: the m-th TE mode appears at V = m pi + atan sqrt(a) (same source).
func TestCutoffThickness(t *testing.T) {
	w := frequency(testWavelength)
	nf, ns := 1.52, 1.5
	step := nf*nf - ns*ns
	for _, a := range []float64{0, 0.5, 10} {
		for number := range 4 {
			v := float64(number)*math.Pi + math.Atan(math.Sqrt(a))
			for _, off := range []float64{-1e-9, 1e-9} {
				t.Run(fmt.Sprintf("a %g m %d off %g", a, number, off), func(t *testing.T) {
					if v+off < 0 {
						off = 1e-9
					}
					m := &model{name: "cut-off", w0: w, layers: []medium{half(ns), filmOf(nf, (v+off)/math.Sqrt(step)*lightSpeed/w), half(math.Sqrt(ns*ns - a*step))}}
					modes, _ := solveModel(t, New(2), m, 40)
					want := number
					if off > 0 {
						want++
					}
					if got := len(polarised(modes, false)); got != want {
						t.Errorf("%d TE modes, expected %d", got, want)
					}
				})
			}
		}
	}
}

// TestTwoFilms: two equal films a distance s apart have pairs of modes, with
// tanh (even) and coth (odd) of g s/2 on the decay between them. Far apart a pair agrees in
// every digit, and still it is two modes with half the power in each film.
func TestTwoFilms(t *testing.T) {
	w := frequency(testWavelength)
	film, out, between := filmOf(2, 0.4e-6), half(1.444), filmOf(1.444, 0)
	for _, s := range []float64{0.1e-6, 0.5e-6, 2e-6, 5e-6, 10e-6, 50e-6, 300e-6} {
		between.d = s
		m := &model{name: "two films", w0: w, layers: []medium{out, film, between, film, out}}
		modes, _ := solveModel(t, New(2), m, 40)
		for _, tm := range []bool{false, true} {
			t.Run(fmt.Sprintf("%g um, tm %v", s*1e6, tm), func(t *testing.T) {
				list := polarised(modes, tm)
				if len(list) != 2 {
					t.Fatalf("%d modes, expected 2", len(list))
				}
				for i, mode := range list {
					g := guideEquation{tm: tm, film: film, low: out, high: out, w: w, d: film.d, upper: func(x *big.Float) *big.Float {
						h := zero().Mul(zero().Mul(x, fl(s/2)), zero().Quo(fl(w), fl(lightSpeed)))
						c, sh := coshSinhc(num2{zero().Mul(h, h), zero()})
						tanh := zero().Quo(zero().Mul(sh.re, h), c.re)
						if i == 1 {
							tanh.Quo(fl(1), tanh)
						}
						return tanh
					}}
					if e := bigError(mode.Neff, g.solve(0)); e > 1e-11 || e*mode.Neff > mode.NeffErr {
						t.Errorf("%s: off by %g, bound %g", mode.Symmetry, e, mode.NeffErr)
					}
					if mode.Symmetry != [2]string{"even", "odd"}[i] {
						t.Errorf("symmetry %q of mode %d", mode.Symmetry, i)
					}
					if mode.Confinement[1] != mode.Confinement[3] || mode.Confinement[1] < 0.2 {
						t.Errorf("shares of the films %g and %g", mode.Confinement[1], mode.Confinement[3])
					}
					if s < 6e-6 {
						judge(t, m, &mode)
					}
				}
			})
		}
	}
}
