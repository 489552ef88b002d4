package slab

import (
	"context"
	"math"
	"math/cmplx"
	"testing"
)

const micron = 1e-6

func omegaOf(wavelength float64) float64 { return 2 * math.Pi * lightSpeed / wavelength }

// fieldsAt solves a model at its own frequency and samples all its modes.
func fieldsAt(t *testing.T, m *model, y []float64) (*Solver, []*Fields) {
	t.Helper()
	s := New(2)
	modes, _, err := s.Solve(context.Background(), m.w0, m.stack(), 20)
	if err != nil {
		t.Fatal(err)
	}
	if len(modes) == 0 {
		t.Fatal("no mode")
	}
	var all []*Fields
	for i := range modes {
		f, err := s.Fields(i, y)
		if err != nil {
			t.Fatal(err)
		}
		all = append(all, f)
	}
	return s, all
}

func heights(low, high float64, n int) []float64 {
	y := make([]float64, n)
	for i := range y {
		y[i] = low + (high-low)*(float64(i)+0.5)/float64(n)
	}
	return y
}

// TestSymmetricFilmField holds the fields of the symmetric film to their closed form (Marcuse, Theory of Dielectric Optical
// Waveguides): cos or sin of kappa (y - h/2) inside, exp(-gamma |y|) outside, with
// kappa^2 = (n1^2 - N) k^2, gamma^2 = (N - n2^2) k^2. Relative to the largest value rounding leaves some 1e-14 of
// a field whose phase is a few radians; 1e-11 is the accuracy asked of neff.
func TestSymmetricFilmField(t *testing.T) {
	const n1, n2, h = 2.0, 1.45, 1.1 * micron
	m := &model{w0: omegaOf(1.55 * micron), layers: []medium{half(n2), filmOf(n1, h), half(n2)}}
	y := heights(-0.7*micron, h+0.7*micron, 180)
	s, fields := fieldsAt(t, m, y)
	k := m.w0 / lightSpeed
	for i, f := range fields {
		mode := s.out.modes[i]
		t.Run(mode.Family, func(t *testing.T) {
			kappa, gamma := k*math.Sqrt(n1*n1-mode.Neff*mode.Neff), k*math.Sqrt(mode.Neff*mode.Neff-n2*n2)
			got := f.E[0]
			if mode.Type == "TM" {
				got = f.H[0]
			}
			odd := mode.Symmetry == "odd"
			inside := func(u float64) float64 {
				if odd {
					return math.Sin(kappa * u)
				}
				return math.Cos(kappa * u)
			}
			closed := func(v float64) float64 {
				u := v - h/2
				if a := math.Abs(u) - h/2; a > 0 {
					return inside(math.Copysign(h/2, u)) * math.Exp(-gamma*a)
				}
				return inside(u)
			}
			scale := got[95] / complex(closed(y[95]), 0)
			for j, v := range y {
				if d := cmplx.Abs(got[j]/scale - complex(closed(v), 0)); d > 1e-11 {
					t.Fatalf("at %g um: %v, expected %g", v/micron, got[j]/scale, closed(v))
				}
			}
		})
	}
}

// stacks are what the identities below are held on: layered, anisotropic, lossy, with metal planes, and two wells
// that agree in every digit.
func stacks() []*model {
	w := omegaOf(1.55 * micron)
	crystal := filmOf(2.2, 0.9*micron)
	crystal.eps = [3]complex128{4.9, 4.6, 4.4}
	lossy := filmOf(1.9, 0.8*micron)
	lossy.eps = isotropic(3.61 - 0.02i)
	return []*model{
		{name: "layered", w0: w, layers: []medium{half(1.45), filmOf(2, 0.4*micron), filmOf(1.5, 0.3*micron), filmOf(1.9, 0.7*micron), half(1)}},
		{name: "mirrored", w0: w, layers: []medium{half(1.45), filmOf(2, 0.5*micron), filmOf(1.5, 0.4*micron), filmOf(2, 0.5*micron), half(1.45)}},
		{name: "anisotropic", w0: w, layers: []medium{half(1.45), crystal, half(1.3)}},
		{name: "lossy", w0: w, layers: []medium{half(1.45), lossy, filmOf(1.7, 0.5*micron), half(1)}},
		{name: "plates", w0: w, bottom: true, top: true, layers: []medium{filmOf(1.5, 0.7*micron)}},
		{name: "ground", w0: w, bottom: true, layers: []medium{filmOf(1.5, 0.7*micron), filmOf(2, 0.6*micron), half(1.2)}},
		{name: "far apart", w0: w, layers: []medium{half(1.45), filmOf(2, 0.4*micron), filmOf(1.45, 9*micron), filmOf(2, 0.4*micron), half(1.3)}},
	}
}

// TestFieldCurl holds the sampled fields to Maxwell's equations: curl E = -j w mu0 H and curl H = j w eps0 eps E in the
// components that have a derivative along y, by central differences of sixth order (Fornberg, Mathematics of Computation 51, 699, 1988) over 10 nm in
// each layer. Their truncation is (q d)^6/140 with q d below 0.09 of a radian, 4e-9; the tolerance is 1e-7 of the largest value.
func TestFieldCurl(t *testing.T) {
	const d = 10e-9
	weights := []float64{3. / 4, -3. / 20, 1. / 60}
	for _, m := range stacks() {
		t.Run(m.name, func(t *testing.T) {
			var y, middles []float64
			var inside []int
			at := -0.4 * micron
			for l, layer := range m.layers {
				thick := layer.d
				if layer.open {
					thick = 0.4 * micron
				}
				if l == 0 && !layer.open {
					at = 0
				}
				for _, c := range heights(at+0.04*micron, at+thick-0.04*micron, 7) {
					middles, inside = append(middles, c), append(inside, l)
					for i := -3; i <= 3; i++ {
						y = append(y, c+float64(i)*d)
					}
				}
				at += thick
			}
			s, fields := fieldsAt(t, m, y)
			wmu, we := m.w0*4e-7*math.Pi, m.w0/(4e-7*math.Pi*lightSpeed*lightSpeed)
			for i, f := range fields {
				tops := [2]float64{}
				for j := range y {
					for c := range 3 {
						tops[0], tops[1] = max(tops[0], cmplx.Abs(f.E[c][j])), max(tops[1], cmplx.Abs(f.H[c][j]))
					}
				}
				beta := complex(s.out.modes[i].Neff, -s.out.modes[i].Kappa) * complex(m.w0/lightSpeed, 0)
				for p := range middles {
					slope := func(v []complex128) (sum complex128) {
						for i, w := range weights {
							sum += complex(w/d, 0) * (v[7*p+4+i] - v[7*p+2-i])
						}
						return sum
					}
					j, eps := 7*p+3, m.layers[inside[p]].eps
					for _, c := range []struct {
						name      string
						got, want complex128
						scale     float64
					}{
						{"curl E along x", slope(f.E[2]) + 1i*beta*f.E[1][j], -1i * complex(wmu, 0) * f.H[0][j], wmu * tops[1]},
						{"curl E along y", -1i * beta * f.E[0][j], -1i * complex(wmu, 0) * f.H[1][j], wmu * tops[1]},
						{"curl E along z", -slope(f.E[0]), -1i * complex(wmu, 0) * f.H[2][j], wmu * tops[1]},
						{"curl H along x", slope(f.H[2]) + 1i*beta*f.H[1][j], 1i * complex(we, 0) * eps[0] * f.E[0][j], we * tops[0]},
						{"curl H along y", -1i * beta * f.H[0][j], 1i * complex(we, 0) * eps[1] * f.E[1][j], we * tops[0]},
						{"curl H along z", -slope(f.H[0]), 1i * complex(we, 0) * eps[2] * f.E[2][j], we * tops[0]},
					} {
						if cmplx.Abs(c.got-c.want) > 1e-7*c.scale {
							t.Fatalf("%s: %s at %g um: %v, expected %v", s.out.modes[i].Family, c.name, middles[p]/micron, c.got, c.want)
						}
					}
				}
			}
		})
	}
}

// TestFieldContinuity: tangential E and H and normal eps E pass each interface (Collin, Field Theory of Guided Waves).
// The places are 1e-15 m on either side, over which a field changes by some 1e-8 of itself at most.
func TestFieldContinuity(t *testing.T) {
	for _, m := range stacks() {
		t.Run(m.name, func(t *testing.T) {
			var y []float64
			var pairs [][2]int
			at := 0.0
			for l := range m.layers {
				at += m.layers[l].d
				if l+1 < len(m.layers) {
					y, pairs = append(y, at-1e-15, at+1e-15), append(pairs, [2]int{l, l + 1})
				}
			}
			y = append(y, heights(0, at, 60)...)
			s, fields := fieldsAt(t, m, y)
			for i, f := range fields {
				for c := range 6 {
					v, name := f.E[c%3], "E"
					if c > 2 {
						v, name = f.H[c%3], "H"
					}
					top := 0.0
					for j := range v {
						top = max(top, cmplx.Abs(v[j]))
					}
					for p, pair := range pairs {
						below, above := v[2*p], v[2*p+1]
						if c == 1 {
							below, above = below*m.layers[pair[0]].eps[1], above*m.layers[pair[1]].eps[1]
						}
						if cmplx.Abs(below-above) > 1e-7*top {
							t.Errorf("%s: %s%c below interface %d %v, above %v", s.out.modes[i].Family, name, 'x'+rune(c%3), p, below, above)
						}
					}
				}
			}
		})
	}
}

// TestFieldPower: the power is half the real part of the integral of E x H* along z (Poynting's theorem), here by the midpoint rule
// of 40000 places out to where S is below exp(-16) of itself; its error across the interfaces' jumps is below 1e-4 of the whole.
func TestFieldPower(t *testing.T) {
	for _, m := range stacks() {
		t.Run(m.name, func(t *testing.T) {
			s, fields := fieldsAt(t, m, nil)
			for i := range fields {
				low, high := 0.0, 0.0
				for l, layer := range m.layers {
					high += layer.d
					if layer.open {
						reach := 8 / (m.w0 / lightSpeed * math.Sqrt(math.Pow(s.out.modes[i].Neff, 2)-real(layer.eps[0])))
						if l == 0 {
							low = -reach
						} else {
							high += reach
						}
					}
				}
				y := heights(low, high, 40000)
				f, err := s.Fields(i, y)
				if err != nil {
					t.Fatal(err)
				}
				sum := 0.0
				for j := range y {
					sum += real(f.E[0][j]*cmplx.Conj(f.H[1][j])-f.E[1][j]*cmplx.Conj(f.H[0][j])) / 2
				}
				if sum *= (high - low) / float64(len(y)); math.Abs(sum/f.Power-1) > 1e-4 {
					t.Errorf("%s: power %g, by quadrature %g", s.out.modes[i].Family, f.Power, sum)
				}
			}
		})
	}
}

func TestFieldsOfNoMode(t *testing.T) {
	s, fields := fieldsAt(t, stacks()[0], nil)
	for _, i := range []int{-1, len(fields)} {
		if _, err := s.Fields(i, nil); err == nil {
			t.Errorf("mode %d of %d: no error", i, len(fields))
		}
	}
}
