package material

import (
	"math"
	"math/big"
	"testing"

	"betaloom/schema"
	"betaloom/solvers/jet"
)

func parameter(name string) *schema.Number { return &schema.Number{Parameter: name} }

func literal(v float64) *schema.Number { return &schema.Number{Value: v} }

// baseOf gives the named parameters those values, as base parameters in order.
func baseOf(names []string, values []float64) Numbers {
	jets := map[string]*jet.Jet{}
	for i, n := range names {
		j := jet.Parameter(values[i], i, len(names))
		jets[n] = &j
	}
	return func(n schema.Number) *jet.Jet { return jets[n.Parameter] }
}

// shifted is (n - jk)^2.
func shifted(n, k *big.Float) big2 { return mul2(big2{n, sub(num(0), k)}, big2{n, sub(num(0), k)}) }

// Rounding: no term of these formulas cancels more than two digits.
const exact = 1e-13

func TestParametersDifferentiateExactly(t *testing.T) {
	w := frequencyOf(1.55)
	cases := []struct {
		name     string
		material schema.Material
		names    []string
		values   []float64
		model    model
	}{
		{"index, extinction, shifts", schema.Material{
			Index: parameter("n"), Extinction: parameter("k"), AddIndex: parameter("a"),
			ThermoOptic: parameter("beta"), ReferenceTemperature: parameter("t0"),
		}, []string{"n", "k", "a", "beta", "t0", "temperature"}, []float64{1.41, 0.02, -0.01, -3e-4, 290, 310},
			func(_ *big.Float, p []*big.Float) big2 {
				return shifted(add(add(p[0], p[2]), mul(p[3], sub(p[5], p[4]))), p[1])
			}},
		{"permittivity", schema.Material{Permittivity: parameter("eps"), LossTangent: parameter("tan")},
			[]string{"eps", "tan"}, []float64{4.4, 0.02},
			func(_ *big.Float, p []*big.Float) big2 { return big2{p[0], sub(num(0), mul(p[0], p[1]))} }},
		{"permittivity with shifts", schema.Material{
			Permittivity: parameter("eps"), LossTangent: parameter("tan"),
			AddIndex: parameter("a"), ThermoOptic: literal(1e-4),
		}, []string{"eps", "tan", "a", "temperature"}, []float64{4.4, 0.02, 0.03, 350},
			func(_ *big.Float, p []*big.Float) big2 {
				n := sqrt2(big2{p[0], sub(num(0), mul(p[0], p[1]))})
				n.re = add(n.re, add(p[2], mul(num(1e-4), sub(p[3], num(DefaultReferenceTemperature)))))
				return mul2(n, n)
			}},
		{"Sellmeier numbers and a shift", schema.Material{
			Sellmeier: &schema.Sellmeier{Constant: *parameter("c0"), Terms: [][2]schema.Number{
				{*parameter("b1"), *parameter("c1")}, {*literal(0.9), *parameter("c2")}, {*literal(0.4), *literal(0.1)},
			}},
			Extinction: literal(1e-3), AddIndex: parameter("a"),
		}, []string{"c0", "b1", "c1", "c2", "a"}, []float64{1.1, 1.2, 0.13, 9.9, 0.01},
			func(w *big.Float, p []*big.Float) big2 {
				l := bigMicrometres(w)
				term := func(b, c *big.Float) *big.Float {
					return quo(mul(b, mul(l, l)), sub(mul(l, l), mul(c, c)))
				}
				sum := add(add(p[0], term(p[1], p[2])), add(term(num(0.9), p[3]), term(num(0.4), num(0.1))))
				return shifted(add(sqrt(sum), p[4]), num(1e-3))
			}},
		{"named with extinction and shift", schema.Material{
			Named: "fused-silica", Extinction: parameter("k"), AddIndex: parameter("a"),
		}, []string{"k", "a"}, []float64{1e-4, 0.002},
			func(w *big.Float, p []*big.Float) big2 { return shifted(add(silica(bigMicrometres(w)), p[1]), p[0]) }},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			m := compiled(t, c.material)
			for _, got := range permittivity(t, m, w, baseOf(c.names, c.values), len(c.names)) {
				compareExact(t, got, c.model, w, c.values, exact)
			}
		})
	}
}

// A number may depend on the frequency and on parameters at once: here the
// index p0 + p1 x + p1^2 x^3 with x = w/1e15, and the Sellmeier strength and
// resonance p0 x^2 and p1 x.
func TestNumbersThatDependOnFrequency(t *testing.T) {
	w, values := frequencyOf(1.55), []float64{1.4, 0.05}
	x := jet.Scale(jet.Frequency(w), 1e-15)
	p0, p1 := jet.Parameter(values[0], 0, 2), jet.Parameter(values[1], 1, 2)
	x3 := jet.Mul(x, jet.Mul(x, x))
	numbers := map[string]jet.Jet{
		"n": jet.Add(p0, jet.Add(jet.Mul(p1, x), jet.Mul(jet.Mul(p1, p1), x3))),
		"b": jet.Mul(p0, jet.Mul(x, x)),
		"c": jet.Mul(p1, x),
	}
	of := func(n schema.Number) *jet.Jet {
		j := numbers[n.Parameter]
		return &j
	}
	scaled := func(w *big.Float) *big.Float { return mul(w, num(1e-15)) }
	cases := []struct {
		name     string
		material schema.Material
		model    model
	}{
		{"index", schema.Material{Index: parameter("n")}, func(w *big.Float, p []*big.Float) big2 {
			x := scaled(w)
			return shifted(add(p[0], add(mul(p[1], x), mul(mul(p[1], p[1]), bigPower(x, 3)))), num(0))
		}},
		{"loss tangent", schema.Material{Permittivity: parameter("n"), LossTangent: parameter("c")}, func(w *big.Float, p []*big.Float) big2 {
			x := scaled(w)
			eps := add(p[0], add(mul(p[1], x), mul(mul(p[1], p[1]), bigPower(x, 3))))
			return big2{eps, sub(num(0), mul(eps, mul(p[1], x)))}
		}},
		{"Sellmeier", schema.Material{Sellmeier: &schema.Sellmeier{
			Constant: *literal(1), Terms: [][2]schema.Number{{*parameter("b"), *parameter("c")}},
		}}, func(w *big.Float, p []*big.Float) big2 {
			x, l := scaled(w), bigMicrometres(w)
			c := mul(p[1], x)
			return big2{add(num(1), quo(mul(mul(p[0], mul(x, x)), mul(l, l)), sub(mul(l, l), mul(c, c)))), num(0)}
		}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			got := permittivity(t, compiled(t, c.material), w, of, 2)[0]
			compareExact(t, got, c.model, w, values, exact)
		})
	}
}

func TestTemperature(t *testing.T) {
	m := compiled(t, schema.Material{Index: literal(1.5), ThermoOptic: literal(1e-4)})
	n := func(of Numbers) float64 { return real(jet.Sqrt(permittivity(t, m, 1e15, of, 1)[0]).V) }
	at := func(k float64) Numbers { return baseOf([]string{"temperature"}, []float64{k}) }
	none := func(schema.Number) *jet.Jet { return nil }
	cases := []struct {
		name string
		of   Numbers
		want float64
	}{
		{"no temperature, no shift", none, 1.5},
		{"no numbers at all", nil, 1.5},
		{"293.15 K where no reference is given", at(293.15), 1.5},
		{"ten kelvin warmer", at(303.15), 1.501},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			if got := n(c.of); got < c.want-1e-15 || got > c.want+1e-15 {
				t.Errorf("index %v, want %v", got, c.want)
			}
		})
	}
}

// A crystal's own shifts come on top of those of its axes.
func TestAxes(t *testing.T) {
	m := compiled(t, schema.Material{
		Axes: &schema.Axes{
			X: schema.Material{Index: literal(2), AddIndex: parameter("a")},
			Y: schema.Material{Permittivity: literal(9)},
			Z: schema.Material{Index: literal(4), Extinction: literal(1)},
		},
		AddIndex: parameter("b"),
	})
	got := permittivity(t, m, 1e15, baseOf([]string{"a", "b"}, []float64{0.5, 0.25}), 2)
	// (2 + a + b)^2, (3 + b)^2, (4 + b - j)^2 by hand
	want := [3]complex128{7.5625, 10.5625, 17.0625 - 8.5i}
	slope := [3][2]complex128{{5.5, 5.5}, {0, 6.5}, {0, 8.5 - 2i}}
	for i, g := range got {
		if g.V != want[i] {
			t.Errorf("axis %d: %v, want %v", i, g.V, want[i])
		}
		for p := range 2 {
			if g.P[p] != slope[i][p] {
				t.Errorf("axis %d, parameter %d: %v, want %v", i, p, g.P[p], slope[i][p])
			}
		}
	}
}

func TestAxesOfNiobate(t *testing.T) {
	o := schema.Material{Named: "lithium-niobate-o"}
	m := compiled(t, schema.Material{Axes: &schema.Axes{X: schema.Material{Named: "lithium-niobate-e"}, Y: o, Z: o}})
	got := permittivity(t, m, frequencyOf(1.55), nil, 0)
	for i, want := range []float64{2.1376, 2.2111, 2.2111} { // Zelmon et al. 1997, from memory
		if n := real(jet.Sqrt(got[i]).V); n < want-5e-5 || n > want+5e-5 {
			t.Errorf("axis %d: %v, want %v", i, n, want)
		}
	}
	// metres from micrometres: rounding
	if lo, hi := m.Range(); math.Abs(lo-0.4e-6) > 1e-20 || math.Abs(hi-5e-6) > 1e-20 {
		t.Errorf("range %g to %g m, want 0.4 to 5 um", lo, hi)
	}
}
