package guide

import (
	"context"
	"fmt"
	"math"
	"sort"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/jet"
	"betaloom/solvers/slab"
)

// between side walls W apart the modes of a film are those of the slab, standing across the guide: with K the slab's
// propagation constant and m half waves across, beta^2 = K^2 - (m pi/W)^2, m >= 0 for TE (E along the walls' normal where
// m = 0) and m >= 1 for TM (Collin, Field Theory of Guided Waves, chapter 6). K is that of solvers/slab: another equation and another method.
func between(m *solvers.Mode, w, width float64, half, walls int) solvers.Mode {
	const c = schema.LightSpeed
	k := w / c
	g := float64(half) * math.Pi / width
	beta := complex(m.Neff, -m.Kappa) * complex(k, 0)
	l := jet.Jet{V: beta, W: complex(m.Ng/c, 0), WW: complex(m.GVD, 0), WWW: complex(m.Beta3, 0)}
	for i := range m.DNeff {
		l.P = append(l.P, complex(m.DNeff[i]*k, 0))
		l.WP = append(l.WP, complex(m.DNg[i]/c, 0))
	}
	b := jet.Sqrt(jet.Sub(jet.Mul(l, l), jet.Const(complex(g*g, 0))))
	b.P[walls] += complex(g*g/width, 0) / b.V
	b.WP[walls] -= complex(g*g/width, 0) / (b.V * b.V) * b.W
	out := solvers.Mode{Neff: real(b.V) / k, Kappa: -imag(b.V) / k, Ng: real(b.W) * c, GVD: real(b.WW), Beta3: real(b.WWW)}
	for i := range b.P {
		out.DNeff, out.DNg = append(out.DNeff, real(b.P[i])/k), append(out.DNg, real(b.WP[i])*c)
	}
	return out
}

// A strip from wall to wall: a film of 0.3 um between half-spaces, closed at the sides only. Everything of a row is compared, the
// walls above and below (computational here) with it. The sensitivities have no bounds of their own; they are held to a relative
// 1e-4: their error is of the order of the root of neff's where corners are none.
func TestSlabBetweenWalls(t *testing.T) {
	const text = `
materials:
  under: {index: 1.44}
  film: {axes: {x: {index: 2.2, extinction: %[1]g}, y: {index: 2.1, extinction: %[1]g}, z: {index: 2.2, extinction: %[1]g}}}
  over: {index: %[2]g}
parameters:
  wavelength: {from: 1.45 um, to: 1.65 um, count: 3}
  height: 0.5 um
  apart: 1.3 um
section:
  walls: {width: apart}
  layers:
    - {material: under}
    - {material: film, thickness: height, fill: under, strips: [{centre: 0 um, width: apart}]}
    - {material: over}
equation: full-vector
`
	const height, apart, low = 0.5 * um, 1.3 * um, 1.44
	w := frequency(1.55 * um)
	var all ratios
	for _, c := range []struct {
		name       string
		loss, over float64
	}{
		{"symmetric", 0, 1.44},
		{"asymmetric", 0, 1.1},
		{"lossy", 1e-3, 1.1},
	} {
		t.Run(c.name, func(t *testing.T) {
			film := [3]complex128{complex(2.2, -c.loss), complex(2.1, -c.loss), complex(2.2, -c.loss)}
			want := slabModes(t, w, []complex128{1.44, 0, complex(c.over, 0)}, film, height, apart, low)
			modes, count := solve(t, guide(t, fmt.Sprintf(text, c.loss, c.over)), solvers.Q{w, height, apart}, 20)
			if len(want) < 4 || len(modes) != len(want) || count.N != len(want) {
				t.Fatalf("%d modes and a count of %d, want %d", len(modes), count.N, len(want))
			}
			var truths []truth
			for _, m := range want {
				t := truth{m.Neff, m.Kappa, m.Ng, m.GVD, m.Beta3}
				if c.loss > 0 { // the slab's row has the real parts of derivatives only
					t.ng, t.gvd, t.beta3 = math.NaN(), math.NaN(), math.NaN()
				}
				truths = append(truths, t)
			}
			all.hold(t, modes, w, truths)
			for i := range modes {
				sensitive(t, &modes[i], &want[i], 1e-4)
			}
		})
	}
	t.Log(all)
}

// sensitive compares sensitivities, each to a share of itself or of what one per cent of neff over one of the parameter would be.
func sensitive(t *testing.T, got, want *solvers.Mode, tolerance float64) {
	t.Helper()
	for p := range want.DNeff {
		if e := math.Abs(got.DNeff[p] - want.DNeff[p]); !(e <= tolerance*math.Abs(want.DNeff[p])+1) {
			t.Errorf("%s: dneff/dp%d = %g, want %g", got.Family, p, got.DNeff[p], want.DNeff[p])
		}
		if e := math.Abs(got.DNg[p] - want.DNg[p]); !(e <= 10*tolerance*math.Abs(want.DNg[p])+10) {
			t.Errorf("%s: dng/dp%d = %g, want %g", got.Family, p, got.DNg[p], want.DNg[p])
		}
	}
}

// slabModes are the modes between walls above an index, from the highest down. The index 0 stands for the film.
func slabModes(t *testing.T, w float64, stack []complex128, film [3]complex128, height, apart, low float64) (list []solvers.Mode) {
	t.Helper()
	s := &slab.Stack{}
	for i, n := range stack {
		l := slab.Layer{HalfSpace: i == 0 || i+1 == len(stack)}
		for j := range l.Eps {
			v := n
			if n == 0 {
				v = film[j]
			}
			l.Eps[j] = jet.Const(v * v)
		}
		if n == 0 {
			l.Thickness = jet.Jet{V: complex(height, 0), P: []complex128{1, 0}, WP: []complex128{0, 0}}
		}
		s.Layers = append(s.Layers, l)
	}
	films, _, err := slab.New(2).Solve(context.Background(), w, s, 20)
	if err != nil {
		t.Fatal(err)
	}
	for i := range films {
		first := 0
		if films[i].Type == "TM" {
			first = 1
		}
		for half := first; ; half++ {
			n := films[i].Neff
			g := float64(half) * math.Pi / apart / (w / schema.LightSpeed)
			if n*n-g*g <= low*low {
				break
			}
			list = append(list, between(&films[i], w, apart, half, 1))
		}
	}
	sort.SliceStable(list, func(i, j int) bool { return list[i].Neff > list[j].Neff })
	return list
}
