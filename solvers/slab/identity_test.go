package slab

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"betaloom/solvers/jet"
)

// randomStack draws a lossless stack of up to six films, thicknesses spread over three
// decades, some anisotropic, some between metal planes, some symmetric.
func randomModel(r *rand.Rand) *model {
	m := &model{name: "random", w0: frequency(0.4e-6 + 2e-6*r.Float64())}
	kind := r.IntN(8)
	m.bottom, m.top = kind == 0 || kind == 2, kind == 1 || kind == 2
	medium := func() medium {
		l := half(1 + 2.5*r.Float64())
		if r.IntN(3) == 0 {
			l.eps[1] *= complex(0.8+0.4*r.Float64(), 0)
			l.eps[2] *= complex(0.8+0.4*r.Float64(), 0)
		}
		return l
	}
	if !m.bottom {
		m.layers = append(m.layers, medium())
	}
	for range 1 + r.IntN(6) {
		l := medium()
		l.open, l.stretch = false, 1
		l.d = 1e-8 * math.Pow(300, r.Float64())
		m.layers = append(m.layers, l)
	}
	if !m.top {
		m.layers = append(m.layers, medium())
	}
	if r.IntN(4) == 0 && m.bottom == m.top {
		for i, j := 0, len(m.layers)-1; i < j; i, j = i+1, j-1 {
			m.layers[j] = m.layers[i]
		}
	}
	if r.IntN(2) == 0 {
		for i := range m.layers {
			m.layers[i] = dispersive(m.layers[i])
		}
	}
	return m
}

// nodesAtCutoff counts the modes of one polarisation as the zeros on the whole line of the
// solution that decays downward, taken at cut-off (Sturm oscillation): by
// looking at psi at many places of each film, without any of the solver's phases.
func (m *model) nodesAtCutoff(tm bool) int {
	coefs := func(l medium, n2 float64) (p, r float64) {
		if tm {
			return 1 / real(l.eps[2]), 1 - n2/real(l.eps[1])
		}
		return 1, real(l.eps[0]) - n2
	}
	axis := 0
	if tm {
		axis = 1
	}
	layers, n2 := m.layers, 0.0
	if !m.bottom {
		n2 = real(layers[0].eps[axis])
	}
	if !m.top {
		n2 = max(n2, real(layers[len(layers)-1].eps[axis]))
	}
	admit := func(l medium) float64 {
		p, r := coefs(l, n2)
		return p * math.Sqrt(max(0, -r/p))
	}
	psi, phi := 1.0, 0.0
	switch {
	case !m.bottom:
		phi = admit(layers[0])
		layers = layers[1:]
	case !tm:
		psi, phi = 0, 1
	}
	if !m.top {
		layers = layers[:len(layers)-1]
	}
	count, sign := 0, 1.0
	look := func() {
		if psi*sign < 0 {
			count++
			sign = -sign
		}
	}
	k := m.w0 / lightSpeed
	for _, l := range layers {
		p, r := coefs(l, n2)
		steps := 40 + int(20*math.Sqrt(math.Abs(r/p))*k*l.d)
		h := k * l.d / float64(steps)
		q := math.Sqrt(math.Abs(r / p))
		c, s := math.Cos(q*h), math.Sin(q*h)/q
		if r < 0 {
			c, s = math.Cosh(q*h), math.Sinh(q*h)/q
		}
		if q == 0 {
			c, s = 1, h
		}
		for range steps {
			psi, phi = c*psi+s*phi/p, c*phi-r*s*psi
			if size := math.Abs(psi) + math.Abs(phi); size > 1e100 {
				psi, phi = psi/size, phi/size
			}
			look()
		}
	}
	switch {
	case m.top && !tm:
		return count // zeros inside the plates, the last may be on the plane only at cut-off
	case m.top:
		if phi*sign < 0 { // the flux has passed the plane's zero
			count++
		}
		return count
	}
	if phi*sign < -admit(m.layers[len(m.layers)-1])*psi*sign {
		count++ // the zero lies in the upper half-space
	}
	return count
}

// TestRandomStacks: counts against zeros counted by eye, so to speak; then identities that hold for every mode.
// With lengths and wavelength scaled together nothing changes: in stacks without dispersion
// sum d dn/dd = dn/d ln w = ng - n, and sum d dng/dd = dng/d ln w = c w GVD.
func TestRandomStacks(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 11))
	s := New(2)
	modes, withModes := 0, 0
	for i := range 500 {
		m := randomModel(r)
		m.name = fmt.Sprintf("random %d", i)
		list, count := solveModel(t, s, m, 1000)
		if want := m.nodesAtCutoff(false) + m.nodesAtCutoff(true); count.N != want || len(list) != want {
			t.Errorf("%s: %d modes, expected %d: %+v", m.name, count.N, want, m)
			continue
		}
		if count.N == 0 {
			if count.Reason == "" {
				t.Errorf("%s: no reason why there is no mode", m.name)
			}
			continue
		}
		withModes++
		modes += count.N
		dispersionless := m.layers[0].slope[0] == 0
		for k := range list {
			x := &list[k]
			if k > 0 && x.Neff > list[k-1].Neff+x.NeffErr {
				t.Errorf("%s: %s is above the one before: %.17g %g, %s %.17g", m.name, x.Family, x.Neff, x.NeffErr, list[k-1].Family, list[k-1].Neff)
			}
			sum := 0.0
			for _, c := range x.Confinement {
				sum += c
			}
			if math.Abs(sum-1) > 1e-13 {
				t.Errorf("%s %s: shares add up to %.17g", m.name, x.Family, sum)
			}
			if dispersionless {
				scaleIdentity(t, m, x.Family, x.DNeff[0], x.Ng-x.Neff, x.NgErr+x.NeffErr)
				scaleIdentity(t, m, x.Family, x.DNg[0], lightSpeed*m.w0*x.GVD, lightSpeed*m.w0*x.GVDErr+x.NgErr)
			}
		}
	}
	if withModes < 250 || modes < 2000 {
		t.Errorf("only %d stacks with %d modes: the draw says too little", withModes, modes)
	}
}

func scaleIdentity(t *testing.T, m *model, family string, got, want, bound float64) {
	t.Helper()
	if math.Abs(got-want) > 2*bound+1e-14*math.Abs(want) {
		t.Errorf("%s %s: %.17g and %.17g should agree, bound %g", m.name, family, got, want, bound)
	}
}

// TestRandomAgainstTruth takes some modes of such stacks to the reference.
func TestRandomAgainstTruth(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 5))
	s := New(2)
	done := 0
	for i := 0; done < 60; i++ {
		m := randomModel(r)
		m.name = fmt.Sprintf("random %d", i)
		list, count := solveModel(t, s, m, 1000)
		if count.N == 0 {
			continue
		}
		done++
		judge(t, m, &list[r.IntN(len(list))])
	}
}

// TestSteadyStateAllocatesNothing: once its work space has grown a solver
// takes no more memory.
func TestSteadyStateAllocatesNothing(t *testing.T) {
	ctx := context.Background()
	for _, m := range layeredModels() {
		t.Run(m.name, func(t *testing.T) {
			s, stack := New(2), m.stack()
			solve := func() {
				if _, _, err := s.Solve(ctx, m.w0, stack, 4); err != nil {
					t.Fatal(err)
				}
			}
			if n := testing.AllocsPerRun(20, solve); n > 0 {
				t.Errorf("%g allocations a point", n)
			}
		})
	}
}

// BenchmarkThreeLayerTwoModes is the figure that the solver is held to: 100,000 points
// a core-second with every column, for two modes of a three-layer slab.
func BenchmarkThreeLayerTwoModes(b *testing.B) {
	for name, layers := range map[string][]medium{
		"asymmetric": {dispersive(half(1.444)), dispersive(filmOf(2, 0.8e-6)), half(1)},
		"symmetric":  {dispersive(half(1.444)), dispersive(filmOf(2, 0.8e-6)), dispersive(half(1.444))},
		"lossy":      {dispersive(half(1.444)), absorbing(dispersive(filmOf(2, 0.8e-6)), 0.01i), half(1)},
	} {
		b.Run(name, func(b *testing.B) {
			m := &model{w0: frequency(testWavelength), layers: layers}
			s, stack := New(4), m.stack()
			for i := range stack.Layers {
				for c := range stack.Layers[i].Eps {
					pad(&stack.Layers[i].Eps[c])
				}
				stack.Layers[i].Thickness.P = append(stack.Layers[i].Thickness.P, 0, 0)
			}
			b.ReportAllocs()
			for b.Loop() {
				if _, _, err := s.Solve(context.Background(), m.w0, stack, 2); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.N)/b.Elapsed().Seconds(), "points/s")
		})
	}
}

func pad(j *jet.Jet) {
	j.P, j.WP = append(j.P, 0.1, 0), append(j.WP, 0, 0)
}
