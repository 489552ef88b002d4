package expr_test

import (
	"errors"
	"math"
	"testing"

	"betaloom/schema"
	"betaloom/schema/expr"
)

// guide is a point: SI units.
func guide(name string) float64 {
	return map[string]float64{"width": 1.2e-6, "height": 0.8e-6, "temperature": 300, "sidewall": math.Pi / 3, "n": 3, "zero": 0, "one": 1, "minus": -1.5, "big": 1e200, "lost": math.NaN()}[name]
}

// guideDimension is the dimension of each of its parameters.
func guideDimension(name string) (schema.Dimension, bool) {
	d, ok := map[string]schema.Dimension{
		"width": {Length: 1}, "height": {Length: 1}, "temperature": {Temperature: 1}, "sidewall": {Angle: 1},
		"frequency": {Time: -1}, "n": {}, "zero": {}, "one": {}, "minus": {}, "big": {}, "lost": {},
	}[name]
	return d, ok
}

// Values worked out by hand; Go's exact constant arithmetic rounds them once,
// the expression a few times: 1e-15 relative.
func TestFloat(t *testing.T) {
	for _, c := range []struct {
		src  string
		want float64
	}{
		{"1 + 2 * 3", 7}, {"(1 + 2) * 3", 9}, {"7 - 4 - 2", 1}, {"16 / 4 / 2", 2}, {"2 * 3 / 4", 1.5},
		{"-2 ^ 2", -4}, {"(-2) ^ 2", 4}, {"2 ^ -1", 0.5}, {"2 ^ 3 ^ 2", 512}, {"(2 ^ 3) ^ 2", 64}, {"--2", 2}, {"2 * -3", -6}, {"2^-2^2", 0.0625},
		{"-n^2", -9}, {"n^-1", 1.0 / 3}, {"n - -n", 6}, {"minus^3", -3.375}, {"minus^-2", 1 / 2.25}, {"zero^0", 1}, {"zero^2.5", 0}, {"n^one", 3}, {"n^minus", 0.19245008972987525483},
		{"0.25 * height + 20 nm", 0.22e-6}, {"20nm", 20e-9}, {"2 um^2", 2e-12}, {"(2 um)^2", 4e-12}, {"5 S/m", 5}, {"10 / 5 S/m", 2}, {"3e-4 1/K", 3e-4}, {"1 / 2 um", 0.5e6},
		{"17 ps/nm/km", 17e-6}, {"2 um^-1", 2e6}, {"2 um * 3", 6e-6}, {"1 um / n", 1e-6 / 3}, {"20 degC", 293.15}, {"-5 degC", 268.15}, {"min(20 degC, temperature)", 293.15},
		{"height / tan(60 deg)", 0.8e-6 / 1.7320508075688772935}, {"cos(sidewall)", 0.5}, {"sin(pi / 2)", 1}, {"2*pi", 2 * math.Pi},
		{"sqrt(width * height)", 0.9797958971132712393e-6}, {"cbrt(-27)", -3}, {"sqrt(zero)", 0}, {"asin(one)", math.Pi / 2}, {"acos(-1)", math.Pi}, {"log10(1000)", 3}, {"log(exp(2))", 2},
		{"min(3, 1, 2)", 1}, {"max(3, 1, 2)", 3}, {"abs(-2 um)", 2e-6}, {"max(width, height) - min(width, height)", 0.4e-6}, {"1e3", 1000}, {".5", 0.5}, {"1.", 1}, {"exp(-1e9)", 0},
		{"\t1\n+\r\n1", 2},
	} {
		t.Run(c.src, func(t *testing.T) {
			e, err := expr.Parse(c.src)
			if err != nil {
				t.Fatal(err)
			}
			v, err := e.Float(guide)
			if err != nil || !(math.Abs(v-c.want) <= 1e-15*math.Abs(c.want)) {
				t.Errorf("got %v, %v; want %v", v, err, c.want)
			}
		})
	}
}

func TestTrue(t *testing.T) {
	for _, c := range []struct {
		src  string
		want bool
	}{
		{"1 < 2", true}, {"2 < 1", false}, {"1 < 1", false}, {"1 <= 1", true}, {"2 <= 1", false}, {"2 > 1", true}, {"1 > 1", false}, {"1 >= 1", true}, {"1 >= 2", false},
		{"1 == 1", true}, {"1 == 2", false}, {"1 != 2", true}, {"1 != 1", false},
		{"not 1 < 2", false}, {"not not 1 < 2", true}, {"not (1 < 2 and 2 < 1)", true},
		{"1 < 2 and 2 < 3", true}, {"1 < 2 and 3 < 2", false}, {"2 < 1 and 2 < 3", false}, {"2 < 1 or 2 < 3", true}, {"2 < 1 or 3 < 2", false}, {"1 < 2 or 3 < 2", true},
		{"1 < 2 or 1 < 2 and 2 < 1", true}, // and binds tighter
		{"(1 < 2 or 1 < 2) and 2 < 1", false},
		{"2 < 1 and 1 < 2 or 1 < 2", true},
		{"not 2 < 1 and 2 < 1", false}, // not binds tighter
		{"width > 1.4 * height", true}, {"width > 2 * height", false}, {"width > 1 um and temperature > 20 degC", true}, {"temperature > 30 degC", false},
		{"zero != 0 and 1 / zero > 2", false}, {"zero == 0 or 1 / zero > 2", true}, {"max(n, 5) + 1 == 6", true},
	} {
		t.Run(c.src, func(t *testing.T) {
			e, err := expr.Parse(c.src)
			if err != nil {
				t.Fatal(err)
			}
			if !e.IsCondition() {
				t.Error("not taken for a condition")
			}
			if err := e.Condition(guideDimension); err != nil {
				t.Error(err)
			}
			if is, err := e.True(guide); err != nil || is != c.want {
				t.Errorf("got %v, %v; want %v", is, err, c.want)
			}
		})
	}
}

// What cannot be evaluated is an error with the place, the function and the
// value; never NaN.
func TestDomain(t *testing.T) {
	for _, c := range []struct {
		src      string
		offset   int
		found    string
		expected string
	}{
		{"1 + sqrt(minus)", 4, "sqrt of -1.5", "an argument of at least 0"},
		{"log(zero)", 0, "log of 0", "an argument above 0"},
		{"log10(minus)", 0, "log10 of -1.5", "an argument above 0"},
		{"asin(n)", 0, "asin of 3", "an argument from -1 to 1"},
		{"acos(n)", 0, "acos of 3", "an argument from -1 to 1"},
		{"n / zero", 2, "3 / 0", "a divisor other than 0"},
		{"zero^-1", 4, "0 ^ -1", "a base other than 0 under a negative power"},
		{"minus^0.5", 5, "-1.5 ^ 0.5", "a base of at least 0 under a power that is no whole number"},
		{"minus^n", 5, "-1.5 ^ 3", "a base above 0 under a power that varies"},
		{"big^n", 3, "1e+200 ^ 3, which is beyond the range of float64", "a finite result"},
		{"big^2", 3, "1e+200 ^ 2, which is beyond the range of float64", "a finite result"},
		{"exp(big)", 0, "exp of 1e+200, which is beyond the range of float64", "a finite result"},
		{"1 - big * big", 8, "1e+200 * 1e+200, which is beyond the range of float64", "a finite result"},
		{"n + lost", 4, "lost = NaN", "a finite value"},
	} {
		t.Run(c.src, func(t *testing.T) {
			e, err := expr.Parse(c.src)
			if err != nil {
				t.Fatal(err)
			}
			_, err = e.Float(guide)
			isError(t, err, c.offset, c.found, c.expected)
			_, err = expr.Eval(e, taylors{}, func(name string) taylor { return taylor{guide(name), 1} })
			isError(t, err, c.offset, c.found, c.expected)
		})
	}
}

// Where the value exists and a derivative does not, Float gives the value
// and Eval an error.
func TestNoDerivative(t *testing.T) {
	for _, c := range []struct {
		src   string
		found string
		value float64
	}{
		{"sqrt(zero)", "sqrt of 0, where its derivatives are not finite", 0},
		{"cbrt(zero)", "cbrt of 0, where its derivatives are not finite", 0},
		{"asin(one)", "asin of 1, where its derivatives are not finite", math.Pi / 2},
		{"acos(one)", "acos of 1, where its derivatives are not finite", 0},
		{"zero^2.5", "0 ^ 2.5, where its derivatives are not finite", 0},
	} {
		t.Run(c.src, func(t *testing.T) {
			e, err := expr.Parse(c.src)
			if err != nil {
				t.Fatal(err)
			}
			if v, err := e.Float(guide); err != nil || v != c.value {
				t.Errorf("Float: %v, %v", v, err)
			}
			_, err = expr.Eval(e, taylors{}, func(name string) taylor { return taylor{guide(name), 1} })
			if bad := (*expr.Error)(nil); !errors.As(err, &bad) || bad.Found != c.found {
				t.Errorf("Eval: %v", err)
			}
		})
	}
}

func TestWrongKind(t *testing.T) {
	of := func(t *testing.T, src string) *expr.Expr {
		e, err := expr.Parse(src)
		if err != nil {
			t.Fatal(err)
		}
		return e
	}
	t.Run("a condition is no number", func(t *testing.T) {
		e := of(t, "n < 2")
		_, err := e.Float(guide)
		isError(t, err, 0, "a condition", "a number")
		_, err = expr.Eval(e, taylors{}, func(string) taylor { return taylor{} })
		isError(t, err, 0, "a condition", "a number")
		_, err = e.Dimension(guideDimension)
		isError(t, err, 0, "a condition", "a number")
	})
	t.Run("a number is no condition", func(t *testing.T) {
		e := of(t, "n - 2")
		_, err := e.True(guide)
		isError(t, err, 0, "a number", "a condition such as a < b")
		isError(t, e.Condition(guideDimension), 0, "a number", "a condition such as a < b")
	})
}

func isError(t *testing.T, err error, offset int, found, expected string) {
	t.Helper()
	var e *expr.Error
	if !errors.As(err, &e) {
		t.Fatalf("got %v, want an Error", err)
	}
	if e.Offset != offset || e.Found != found || e.Expected != expected {
		t.Errorf("got byte %d: found %s, expected %s\nwant byte %d: found %s, expected %s", e.Offset, e.Found, e.Expected, offset, found, expected)
	}
}

func TestFloatDoesNotAllocate(t *testing.T) {
	for _, src := range []string{"0.25 * height + 20 nm", "sqrt(width^2 + height^2) * sin(sidewall)", "width > 2 * height and n < 4"} {
		t.Run(src, func(t *testing.T) {
			e, err := expr.Parse(src)
			if err != nil {
				t.Fatal(err)
			}
			of := func(string) float64 { return 1.5 }
			n := testing.AllocsPerRun(100, func() {
				if e.IsCondition() {
					_, err = e.True(of)
				} else {
					_, err = e.Float(of)
				}
			})
			if n != 0 || err != nil {
				t.Errorf("%v allocations, %v", n, err)
			}
		})
	}
}

func BenchmarkFloat(b *testing.B) {
	for _, src := range []string{"0.25 * height + 20 nm", "sqrt(width^2 + height^2) * sin(sidewall)", "width > 2 * height and n < 4"} {
		b.Run(src, func(b *testing.B) {
			e, err := expr.Parse(src)
			if err != nil {
				b.Fatal(err)
			}
			of := func(string) float64 { return 1.5 }
			b.ReportAllocs()
			for b.Loop() {
				if e.IsCondition() {
					_, err = e.True(of)
				} else {
					_, err = e.Float(of)
				}
			}
			if err != nil {
				b.Fatal(err)
			}
		})
	}
}
