package expr_test

import (
	"fmt"
	"math"
	"testing"

	"betaloom/schema/expr"
)

// near compares to 1e-13 of the larger of the value and 1e-3 of the largest
// derivative: a handful of roundings, some of them in sums that cancel.
func near(got taylor, want [4]float64) bool {
	largest := 0.0
	for _, w := range want {
		largest = max(largest, math.Abs(w))
	}
	for i := range want {
		if !(math.Abs(got[i]-want[i]) <= 1e-13*max(math.Abs(want[i]), 1e-3*largest)) {
			return false
		}
	}
	return true
}

// at evaluates an expression of w at w = x with its derivatives in w.
func at(t *testing.T, src string, x float64) taylor {
	t.Helper()
	e, err := expr.Parse(src)
	if err != nil {
		t.Fatal(err)
	}
	v, err := expr.Eval(e, taylors{}, func(string) taylor { return taylor{x, 1} })
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// Every function, its value and three derivatives, against 600-bit
// arithmetic.
func TestFunctionDerivatives(t *testing.T) {
	third := div(whole(1), whole(3))
	wide := []float64{-2.5, -0.3, 0.7, 1.9}
	positive := []float64{0.02, 0.7, 1, 3.3, 12}
	inside := []float64{-0.95, -0.3, 0.1, 0.8}
	for _, c := range []struct {
		src string
		f   func(precise) precise
		at  []float64
	}{
		{"sqrt(w)", root, positive},
		{"cbrt(w)", func(x precise) precise { return bigPow(x, third) }, positive},
		{"exp(w)", bigExp, wide},
		{"log(w)", bigLog, positive},
		{"log10(w)", func(x precise) precise { return div(bigLog(x), bigLog(whole(10))) }, positive},
		{"sin(w)", bigSin, wide},
		{"cos(w)", bigCos, wide},
		{"tan(w)", bigTan, wide},
		{"asin(w)", bigAsin, inside},
		{"acos(w)", bigAcos, inside},
		{"atan(w)", bigAtan, wide},
		{"sinh(w)", bigSinh, wide},
		{"cosh(w)", bigCosh, wide},
		{"tanh(w)", bigTanh, wide},
		{"abs(w)", bigAbs, wide},
		{"-w", negative, wide},
		{"w^3", func(x precise) precise { return mul(x, mul(x, x)) }, wide},
		{"w^-2", func(x precise) precise { return div(whole(1), mul(x, x)) }, wide},
		{"w^2.5", func(x precise) precise { return bigPow(x, num(2.5)) }, positive},
		{"w^w", func(x precise) precise { return bigPow(x, x) }, positive},
		{"2^w", func(x precise) precise { return bigPow(whole(2), x) }, wide},
		{"min(w, w^2)", func(x precise) precise {
			if y := mul(x, x); y.Cmp(x) < 0 {
				return y
			}
			return x
		}, []float64{0.4, 2, -1}},
		{"max(w, 1, w^2)", func(x precise) precise {
			if y := mul(x, x); y.Cmp(whole(1)) > 0 {
				return y
			}
			return whole(1)
		}, []float64{0.4, 2, -3}},
	} {
		for _, x := range c.at {
			t.Run(fmt.Sprintf("%s at %v", c.src, x), func(t *testing.T) {
				if got, want := at(t, c.src, x), derivatives(c.f, x); !near(got, want) {
					t.Errorf("got %v, want %v", got, want)
				}
			})
		}
	}
}

// Composed expressions, among them the forms a sweep file has: a Sellmeier
// index, a profile, a thermo-optic term.
func TestComposedDerivatives(t *testing.T) {
	one := whole(1)
	for _, c := range []struct {
		src string
		f   func(precise) precise
		at  []float64
	}{
		{"sqrt(1 + 0.6961663*w^2/(w^2 - 0.0684043^2))", func(x precise) precise {
			x2 := mul(x, x)
			return root(add(one, div(mul(num(0.6961663), x2), sub(x2, mul(num(0.0684043), num(0.0684043))))))
		}, []float64{0.5, 1.55}},
		{"1.45 - 0.01*(w/3)^2 - 3e-4*(w - 2)", func(x precise) precise {
			r := div(x, whole(3))
			return sub(sub(num(1.45), mul(num(0.01), mul(r, r))), mul(num(3e-4), sub(x, whole(2))))
		}, []float64{0, 1.2}},
		{"exp(-w/3)*sin(2*w)/cosh(w)", func(x precise) precise {
			return div(mul(bigExp(negative(div(x, whole(3)))), bigSin(mul(whole(2), x))), bigCosh(x))
		}, []float64{-1.1, 0.3, 2}},
		{"log(1 + w^2)^1.5 + atan(w)/w", func(x precise) precise {
			return add(bigPow(bigLog(add(one, mul(x, x))), num(1.5)), div(bigAtan(x), x))
		}, []float64{0.6, 2}},
		{"(1 + w)^(w/2) - tanh(w - 1)", func(x precise) precise {
			return sub(bigPow(add(one, x), halved(x, 1)), bigTanh(sub(x, one)))
		}, []float64{0.2, 1.7}},
	} {
		for _, x := range c.at {
			t.Run(fmt.Sprintf("%s at %v", c.src, x), func(t *testing.T) {
				if got, want := at(t, c.src, x), derivatives(c.f, x); !near(got, want) {
					t.Errorf("got %v, want %v", got, want)
				}
			})
		}
	}
}

// Derivatives that are known exactly where formulas are apt to fail.
func TestExactDerivatives(t *testing.T) {
	for _, c := range []struct {
		src  string
		x    float64
		want taylor
	}{
		{"w^0", 0, taylor{1, 0, 0, 0}},
		{"w^1", 0, taylor{0, 1, 0, 0}},
		{"w^2", 0, taylor{0, 0, 2, 0}},
		{"w^3", 0, taylor{0, 0, 0, 6}},
		{"w^3", -2, taylor{-8, 12, -12, 6}},
		{"w^-1", -2, taylor{-0.5, -0.25, -0.25, -0.375}},
		{"abs(w)", 0, taylor{0, 1, 0, 0}},
		{"abs(w)", -3, taylor{3, -1, 0, 0}},
		{"min(w, -w)", 0, taylor{0, 1, 0, 0}}, // the first of equals
		{"max(-w, w)", 0, taylor{0, -1, 0, 0}},
		{"sqrt(4) + 0*w", 5, taylor{2, 0, 0, 0}},
		{"sqrt(0) + w", 5, taylor{5, 1, 0, 0}}, // a constant needs no derivative
		{"tanh(w)", 400, taylor{1, 0, 0, 0}},
		{"atan(w)", 0, taylor{0, 1, 0, -2}},
		{"asin(w)", 0, taylor{0, 1, 0, 1}},
	} {
		t.Run(fmt.Sprintf("%s at %v", c.src, c.x), func(t *testing.T) {
			if got := at(t, c.src, c.x); got != c.want {
				t.Errorf("got %v, want %v", got, c.want)
			}
		})
	}
}
