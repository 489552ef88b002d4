package jet

import (
	"math"
	"math/cmplx"
	"testing"
)

// Rounding only: every check below is against a closed form, and no
// operation loses more than a few of the 2^-53 that a float64 carries.
const rounding = 1e-13

// at is where the closed forms are taken: w and one parameter p of two.
const (
	w0 = 1.7
	p0 = 0.6
)

// w and p as jets: p is parameter 1 of 2.
func variables() (w, p Jet) { return Frequency(w0), Parameter(p0, 1, 2) }

// close reports whether two jets agree to rounding, nil counting as zeros.
func closeTo(t *testing.T, got, want Jet) {
	t.Helper()
	check := func(name string, g, w complex128) {
		t.Helper()
		if !(cmplx.Abs(g-w) <= rounding*max(1, cmplx.Abs(w))) {
			t.Errorf("%s = %v, want %v", name, g, w)
		}
	}
	check("V", got.V, want.V)
	check("W", got.W, want.W)
	check("WW", got.WW, want.WW)
	check("WWW", got.WWW, want.WWW)
	entry := func(s []complex128, i int) complex128 {
		if s == nil {
			return 0
		}
		return s[i]
	}
	for i := range 2 {
		check("P", entry(got.P, i), entry(want.P, i))
		check("WP", entry(got.WP, i), entry(want.WP, i))
	}
}

// closed is a jet of real values whose parameter 1 of 2 has p and wp.
func closed(v, w, ww, www, p, wp float64) Jet {
	c := func(x float64) complex128 { return complex(x, 0) }
	return Jet{c(v), c(w), c(ww), c(www), []complex128{0, c(p)}, []complex128{0, c(wp)}}
}

func TestClosedForms(t *testing.T) {
	w, p := variables()
	square := func(a Jet) Jet { return Mul(a, a) }
	cube := func(a Jet) Jet { return Mul(a, square(a)) }
	e := math.Exp(w0 * p0)
	s, c := math.Sincos(w0 * w0 * p0)
	cases := []struct {
		name      string
		got, want Jet
	}{
		{"constant", Const(3), Jet{V: 3}},
		{"w^2 p + w p^2 as a product of w p and w + p", Mul(Mul(w, p), Add(w, p)),
			closed(w0*w0*p0+w0*p0*p0, 2*w0*p0+p0*p0, 2*p0, 0, w0*w0+2*w0*p0, 2*w0+2*p0)},
		{"w^2 + w p + p^2 as a quotient of w^3 - p^3 and w - p", Div(Sub(cube(w), cube(p)), Sub(w, p)),
			closed(w0*w0+w0*p0+p0*p0, 2*w0+p0, 2, 0, w0+2*p0, 1)},
		{"w^-1 p^-2", Div(Const(1), Mul(w, square(p))),
			closed(1/(w0*p0*p0), -1/(w0*w0*p0*p0), 2/(w0*w0*w0*p0*p0), -6/(w0*w0*w0*w0*p0*p0),
				-2/(w0*p0*p0*p0), 2/(w0*w0*p0*p0*p0))},
		{"(w + p)^2 as the root of its square", Sqrt(square(square(Add(w, p)))),
			closed((w0+p0)*(w0+p0), 2*(w0+p0), 2, 0, 2*(w0+p0), 2)},
		{"(w p)^(1/2)", Sqrt(Mul(w, p)),
			closed(math.Sqrt(w0*p0), 0.5*math.Sqrt(p0/w0), -0.25*math.Sqrt(p0)*math.Pow(w0, -1.5),
				0.375*math.Sqrt(p0)*math.Pow(w0, -2.5), 0.5*math.Sqrt(w0/p0), 0.25/math.Sqrt(w0*p0))},
		{"exp(w p)", Real{}.Unary(Mul(w, p), [4]float64{e, e, e, e}),
			closed(e, p0*e, p0*p0*e, p0*p0*p0*e, w0*e, (1+w0*p0)*e)},
		{"sin(w^2 p)", Real{}.Unary(Mul(square(w), p), [4]float64{s, c, -s, -c}),
			closed(s, 2*w0*p0*c, 2*p0*c-4*w0*w0*p0*p0*s, -12*w0*p0*p0*s-8*w0*w0*w0*p0*p0*p0*c,
				w0*w0*c, 2*w0*c-2*w0*w0*w0*p0*s)},
		{"difference of equal jets", Sub(Mul(w, p), Mul(p, w)), Jet{}},
		{"negative", Add(Neg(Mul(w, p)), Mul(p, w)), Jet{}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) { closeTo(t, c.got, c.want) })
	}
}

// The root of (w - jp)^2 is w - jp on the branch of positive real part, where
// a lossy index lies.
func TestSqrtOfLossyPermittivity(t *testing.T) {
	w, p := variables()
	n := Sub(w, Scale(p, 1i))
	closeTo(t, Sqrt(Mul(n, n)), Jet{V: complex(w0, -p0), W: 1, P: []complex128{0, -1i}})
}

func TestInPlaceAgreesWithValues(t *testing.T) {
	w, p := variables()
	a := Div(Mul(w, p), Add(w, Const(2+1i)))
	b := Mul(Add(p, Const(1-2i)), w)
	set := func(z *Jet) { z.Set(&a) }
	cases := []struct {
		name string
		do   func(z *Jet)
		want Jet
	}{
		{"Set", func(*Jet) {}, a},
		{"Root", (*Jet).Root, Sqrt(a)},
		{"Square", (*Jet).Square, Mul(a, a)},
		{"Accumulate", func(z *Jet) { z.Accumulate(2i, &b) }, Add(a, Scale(b, 2i))},
		{"AccumulateProduct", func(z *Jet) { z.AccumulateProduct(-1i, &a, &b) }, Add(a, Scale(Mul(a, b), -1i))},
		{"AccumulateProduct of a plain parameter", func(z *Jet) { z.AccumulateProduct(1, &p, &w) }, Add(a, Mul(p, w))},
		{"Reset", func(z *Jet) { z.Reset(4, 2) }, Const(4)},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			var z Jet
			set(&z)
			c.do(&z)
			closeTo(t, z, c.want)
		})
	}
}

func TestOperandsKeepTheirValues(t *testing.T) {
	w, p := variables()
	a := Mul(w, p)
	var z Jet
	z.Set(&a)
	z.Square()
	for _, r := range []Jet{Add(a, a), Mul(a, a), Div(a, a), Sqrt(a), Neg(a)} {
		r.P[1], r.WP = 99, nil
	}
	closeTo(t, a, closed(w0*p0, p0, 0, 0, w0, 1))
}

var sink Jet

func TestNoAllocation(t *testing.T) {
	a, b := Frequency(w0), Const(2-1i)
	t.Run("values without parameters", func(t *testing.T) {
		n := testing.AllocsPerRun(100, func() {
			sink = Div(Mul(Add(a, b), Sub(a, b)), Sqrt(Scale(a, 3)))
		})
		if n != 0 {
			t.Errorf("%v allocations, want none", n)
		}
	})
	t.Run("in place with parameters", func(t *testing.T) {
		p := Parameter(p0, 0, 3)
		var z Jet
		z.Reset(1, 3)
		n := testing.AllocsPerRun(100, func() {
			z.Reset(1, 3)
			z.AccumulateProduct(1, &p, &a)
			z.Root()
			z.Square()
		})
		if n != 0 {
			t.Errorf("%v allocations, want none", n)
		}
	})
}

// algebra is the shape that expressions are evaluated over.
type algebra[T any] interface {
	Const(v float64) T
	Value(a T) float64
	Add(a, b T) T
	Sub(a, b T) T
	Mul(a, b T) T
	Div(a, b T) T
	Unary(a T, f [4]float64) T
}

func TestRealIsAnAlgebra(t *testing.T) {
	var alg algebra[Jet] = Real{}
	w, p := variables()
	// (2 w - p)/4 + w p: all operations once
	got := alg.Add(alg.Div(alg.Sub(alg.Mul(alg.Const(2), w), p), alg.Const(4)), alg.Mul(w, p))
	closeTo(t, got, closed((2*w0-p0)/4+w0*p0, 0.5+p0, 0, 0, w0-0.25, 1))
	if v := alg.Value(got); v != real(got.V) {
		t.Errorf("value %v, want %v", v, real(got.V))
	}
}
