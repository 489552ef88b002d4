package material

import (
	"math"
	"math/big"
	"math/cmplx"
	"testing"

	"betaloom/schema"
	"betaloom/solvers/jet"
)

// The tests differentiate with numbers of 700 bits and central differences
// of the relative step 2^-120: the error of the differences (of the order of
// the step squared, 1e-72) and that of rounding (2^-700 over the step cubed)
// are far below a float64. So what they are compared with is the exact
// derivative, by another route than the code's.
const (
	bits = 700
	step = -120
)

func num(v float64) *big.Float { return new(big.Float).SetPrec(bits).SetFloat64(v) }

func add(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(bits).Add(a, b) }
func sub(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(bits).Sub(a, b) }
func mul(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(bits).Mul(a, b) }
func quo(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(bits).Quo(a, b) }
func sqrt(a *big.Float) *big.Float   { return new(big.Float).SetPrec(bits).Sqrt(a) }

// big2 is a complex number.
type big2 struct{ re, im *big.Float }

func mul2(a, b big2) big2 {
	return big2{sub(mul(a.re, b.re), mul(a.im, b.im)), add(mul(a.re, b.im), mul(a.im, b.re))}
}

// sqrt2 is the root of positive real part.
func sqrt2(a big2) big2 {
	size := sqrt(add(mul(a.re, a.re), mul(a.im, a.im)))
	re := sqrt(quo(add(size, a.re), num(2)))
	return big2{re, quo(a.im, mul(num(2), re))}
}

// bigMicrometres is the wavelength in um at w. Its constant is rounded as
// the code's may be: the last digit of pi is no part of what is compared.
func bigMicrometres(w *big.Float) *big.Float {
	return quo(num(2*math.Pi*schema.LightSpeed*metre), w)
}

// model is a permittivity as a function of w and of parameters.
type model func(w *big.Float, p []*big.Float) big2

// stencils are central differences of order 0 to 3: offsets and weights.
var stencils = [4]map[int]float64{
	{0: 1}, {1: 0.5, -1: -0.5}, {1: 1, 0: -2, -1: 1}, {2: 0.5, 1: -1, -1: 1, -2: -0.5},
}

// differentiate gives d^a/dw^a d^b/dp_i^b of a model.
func (m model) differentiate(w float64, p []float64, a, i, b int) complex128 {
	hw, hp := new(big.Float).SetMantExp(num(w), step), new(big.Float).SetMantExp(num(1), step)
	re, im := num(0), num(0)
	for kw, cw := range stencils[a] {
		for kp, cp := range stencils[b] {
			at := make([]*big.Float, len(p))
			for j, v := range p {
				at[j] = num(v)
			}
			if b > 0 {
				at[i] = add(at[i], mul(hp, num(float64(kp))))
			}
			v := m(add(num(w), mul(hw, num(float64(kw)))), at)
			re = add(re, mul(v.re, num(cw*cp)))
			im = add(im, mul(v.im, num(cw*cp)))
		}
	}
	for range a {
		re, im = quo(re, hw), quo(im, hw)
	}
	for range b {
		re, im = quo(re, hp), quo(im, hp)
	}
	r, _ := re.Float64()
	j, _ := im.Float64()
	return complex(r, j)
}

// compareExact holds a jet against the exact derivatives of a model. The
// tolerance is relative to the derivative or, where terms cancel in it, to
// the value over w to its order (over 1 for a parameter).
func compareExact(t *testing.T, got jet.Jet, m model, w float64, p []float64, tolerance float64) {
	t.Helper()
	check := func(name string, g, want complex128, order int) {
		t.Helper()
		scale := max(cmplx.Abs(want), cmplx.Abs(got.V)/math.Pow(w, float64(order)))
		if !(cmplx.Abs(g-want) <= tolerance*scale) {
			t.Errorf("%s = %v, want %v (off by %.1e)", name, g, want, cmplx.Abs(g-want)/scale)
		}
	}
	for order, g := range []complex128{got.V, got.W, got.WW, got.WWW} {
		check([]string{"V", "W", "WW", "WWW"}[order], g, m.differentiate(w, p, order, 0, 0), order)
	}
	if len(p) > 0 && (len(got.P) != len(p) || len(got.WP) != len(p)) {
		t.Fatalf("%d P and %d WP, want %d of each", len(got.P), len(got.WP), len(p))
	}
	for i := range p {
		check("P", got.P[i], m.differentiate(w, p, 0, i, 1), 0)
		check("WP", got.WP[i], m.differentiate(w, p, 1, i, 1), 1)
	}
}

// bigPower is x^e.
func bigPower(x *big.Float, e int) *big.Float {
	if e < 0 {
		return quo(num(1), bigPower(x, -e))
	}
	y := num(1)
	for range e {
		y = mul(y, x)
	}
	return y
}

// bigFormula evaluates a formula as it was published.
func bigFormula(f formula, w *big.Float) big2 {
	l := bigMicrometres(w)
	l2, sum := mul(l, l), num(0)
	for _, t := range f.terms {
		b, c := num(t.b), num(t.c)
		switch t.shape {
		case power:
			sum = add(sum, mul(b, bigPower(l, int(t.c))))
		case root:
			sum = add(sum, quo(mul(b, l2), sub(l2, mul(c, c))))
		case pole:
			sum = add(sum, quo(mul(b, l2), sub(l2, c)))
		case plain:
			sum = add(sum, quo(b, sub(l2, c)))
		case wave:
			sum = add(sum, quo(b, sub(c, quo(num(1), l2))))
		}
	}
	if f.bare {
		sum = mul(sum, sum)
	}
	return big2{sum, num(0)}
}

// frequencyOf is the angular frequency at a wavelength in um.
func frequencyOf(um float64) float64 { return 2 * math.Pi * schema.LightSpeed / (um * 1e-6) }

// compiled compiles a material or fails the test.
func compiled(t testing.TB, m schema.Material) *Material {
	t.Helper()
	c, err := Compile("film", m)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// permittivity asks for it or fails the test.
func permittivity(t testing.TB, m *Material, w float64, of Numbers, params int) [3]jet.Jet {
	t.Helper()
	var dst [3]jet.Jet
	if err := m.Permittivity(w, of, params, &dst); err != nil {
		t.Fatal(err)
	}
	return dst
}

// index is the index with its derivatives, of a lossless isotropic material.
func index(t testing.TB, m *Material, um float64) jet.Jet {
	t.Helper()
	return jet.Sqrt(permittivity(t, m, frequencyOf(um), nil, 0)[0])
}
