package expr_test

import (
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/schema/expr"
	"betaloom/schema/quantity"
)

func TestParseRefuses(t *testing.T) {
	primary := "a number, a parameter, a function or ("
	character := "a number, a name, an operator or a parenthesis"
	for _, c := range []struct {
		src      string
		offset   int
		found    string
		expected string
	}{
		{"", 0, "the end", primary},
		{"  ", 2, "the end", primary},
		{"1 +", 3, "the end", primary},
		{"1 + + 2", 4, `"+"`, primary},
		{"* 2", 0, `"*"`, primary},
		{"(1 + 2", 6, "the end", "an operator or )"},
		{"1 + 2)", 5, `")"`, "an operator or the end"},
		{"()", 1, `")"`, primary},
		{"width height", 6, `"height"`, "an operator or the end"},
		{"2 height", 2, `"height" after a number`, "an operator or a unit"},
		{"2 unm", 2, `"unm" after a number`, "an operator or a unit; did you mean nm?"},
		{"2 Um", 2, `"Um" after a number`, "an operator or a unit; did you mean um?"},
		{"1.2.3", 3, `".3" after a number`, "an operator or a unit"},
		{"1 2", 2, `"2" after a number`, "an operator or a unit"},
		{"0x10", 1, `"x10" after a number`, "an operator or a unit"},
		{"1e999", 0, "a number beyond the range of float64", "a magnitude from 5e-324 to 1.8e308 in SI units, or 0"},
		{"sqr(2)", 0, `the unknown function "sqr"`, "a function; did you mean sqrt?"},
		{"2 + Sin(2)", 4, `the unknown function "Sin"`, "a function; did you mean sin?"},
		{"height(2)", 0, `the unknown function "height"`, "a function"},
		{"pi(2)", 0, `the unknown function "pi"`, "a function"},
		{"sin 2", 4, `"2"`, "( after the function sin"},
		{"max", 3, "the end", "( after the function max"},
		{"sin(1, 2)", 5, "a second argument of sin", ") after the first"},
		{"sin()", 4, `")"`, primary},
		{"sin(1", 5, "the end", "an operator or )"},
		{"min(1)", 5, `")"`, ", and a second argument of min"},
		{"max(1, 2", 8, "the end", "an operator or )"},
		{"min(1, )", 7, `")"`, primary},
		{"min(1 < 2, 2)", 4, "a condition", "a number"},
		{"min(1, 1 < 2)", 7, "a condition", "a number"},
		{"1 + (1 < 2)", 4, "a condition", "a number"},
		{"sin(1 < 2)", 4, "a condition", "a number"},
		{"-(1 < 2)", 1, "a condition", "a number"},
		{"(1 < 2) < 3", 0, "a condition", "a number"},
		{"1 < 2 < 3", 6, "a second comparison", "and between two, as in a < b and b < c"},
		{"1 and 2 < 3", 0, "a number", "a condition such as a < b"},
		{"1 < 2 or 3", 9, "a number", "a condition such as a < b"},
		{"not 3", 4, "a number", "a condition such as a < b"},
		{"and", 0, `"and"`, primary},
		{"not", 3, "the end", primary},
		{"1 < not 2", 4, `"not"`, primary},
		{"1 = 2", 2, `"="`, "== to compare"},
		{"2 ** 3", 2, `"*"`, "^ for a power"},
		{"1 < 2 && 2 < 3", 6, `"&"`, "and"},
		{"1 < 2 || 2 < 3", 6, `"|"`, "or"},
		{"!(1 < 2)", 0, `"!"`, "not"},
		{"2 µm", 2, `"µ"`, "u for micro, as in um"},
		{"2 * π", 4, `"π"`, "pi"},
		{"a.b", 1, `"."`, character},
		{"a[1]", 1, `"["`, character},
		{"1; 2", 1, `";"`, character},
		{"\xff", 0, `"\xff"`, character},
		{"1 / (2 - 2)", 2, "1 / 0", "a divisor other than 0"},
		{"sqrt(-1)", 0, "sqrt of -1", "an argument of at least 0"},
		{"width + 10^400", 10, "10 ^ 400, which is beyond the range of float64", "a finite result"},
	} {
		t.Run(c.src, func(t *testing.T) {
			_, err := expr.Parse(c.src)
			isError(t, err, c.offset, c.found, c.expected)
		})
	}
}

func TestParseRefusesUnits(t *testing.T) {
	unitPower := "one whole number: a power behind a unit belongs to the unit; write (2 um)^x for a power of the quantity"
	for _, c := range []struct {
		src      string
		offset   int
		found    string
		expected string
	}{
		{"3e-4/K", 5, "the unit K without a number", "a number before it, as in 1 K"},
		{"um", 0, "the unit um without a number", "a number before it, as in 1 um"},
		{"2 um^0.5", 0, `the power "0.5"`, "a whole number from 1 to 24 or its negative"},
		{"2 um^n", 5, `"n"`, unitPower},
		{"2 um^(1/2)", 5, `"("`, unitPower},
		{"2 um^2^3", 6, `"^"`, unitPower},
		{"2 um^", 5, "the end", unitPower},
		{"2 um^-", 6, "the end", unitPower},
		{"20 degC + 5 K", 0, "a temperature in degC within arithmetic", "kelvin: 293.15 K"},
		{"temperature - 20 degC", 14, "a temperature in degC within arithmetic", "kelvin: 293.15 K"},
		{"2 * (20 degC)", 4, "a temperature in degC within arithmetic", "kelvin: 293.15 K"},
		{"-(20 degC)", 1, "a temperature in degC within arithmetic", "kelvin: 293.15 K"},
		{"sqrt(20 degC)", 5, "a temperature in degC within arithmetic", "kelvin: 293.15 K"},
		{"(20 degC)^2", 0, "a temperature in degC within arithmetic", "kelvin: 293.15 K"},
		{"20 degC/m", 0, "degC in a compound unit", "K (degC is an absolute temperature and stands alone)"},
	} {
		t.Run(c.src, func(t *testing.T) {
			_, err := expr.Parse(c.src)
			isError(t, err, c.offset, c.found, c.expected)
		})
	}
}

func TestErrorText(t *testing.T) {
	_, err := expr.Parse("1 +")
	const want = "expression, byte 3: found the end, expected a number, a parameter, a function or ("
	if err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

// The limits, each just inside and just outside.
func TestLimits(t *testing.T) {
	nest := func(open, close string) func(int) string {
		return func(n int) string { return strings.Repeat(open, n) + "1" + strings.Repeat(close, n) }
	}
	for _, c := range []struct {
		name     string
		src      func(int) string
		most     int
		expected string
	}{
		{"parentheses", nest("(", ")"), expr.MaxDepth - 1, "at most 64 levels"},
		{"functions", nest("sin(", ")"), expr.MaxDepth - 1, "at most 64 levels"},
		{"signs", nest("-", ""), expr.MaxDepth - 1, "at most 64 levels"},
		{"powers", nest("1^", ""), expr.MaxDepth - 1, "at most 64 levels"},
		{"not", func(n int) string { return strings.Repeat("not ", n) + "1<2" }, expr.MaxDepth - 1, "at most 64 levels"},
		{"terms", func(n int) string { return "1" + strings.Repeat("+1", n) }, (expr.MaxNodes - 1) / 2, "at most 1000 numbers, names and operators"},
		{"bytes", func(n int) string { return "1" + strings.Repeat(" ", n) }, expr.MaxSource - 1, "at most 4096"},
	} {
		t.Run(c.name, func(t *testing.T) {
			if _, err := expr.Parse(c.src(c.most)); err != nil {
				t.Errorf("at the limit: %v", err)
			}
			_, err := expr.Parse(c.src(c.most + 1))
			if bad := (*expr.Error)(nil); !errors.As(err, &bad) || bad.Expected != c.expected {
				t.Errorf("beyond it: %v", err)
			}
		})
	}
	t.Run("a deep stack", func(t *testing.T) {
		e, err := expr.Parse(strings.Repeat("n+(", 60) + "n" + strings.Repeat(")", 60))
		if err != nil {
			t.Fatal(err)
		}
		if v, err := e.Float(guide); v != 61*3 || err != nil {
			t.Errorf("got %v, %v", v, err)
		}
	})
}

func TestNames(t *testing.T) {
	e, err := expr.Parse("width * height + width * sin(angle_1) - 2 um * pi")
	if err != nil {
		t.Fatal(err)
	}
	if got := e.Names(); !slices.Equal(got, []string{"angle_1", "height", "width"}) {
		t.Errorf("got %v", got)
	}
	if e.String() != "width * height + width * sin(angle_1) - 2 um * pi" {
		t.Errorf("String: %s", e)
	}
}

// No word of the language is a unit, and none can be read as a parameter.
func TestReserved(t *testing.T) {
	words := expr.Reserved()
	if len(words) == 0 {
		t.Fatal("none")
	}
	for _, w := range words {
		t.Run(w, func(t *testing.T) {
			if quantity.IsName(w) {
				t.Error("is a unit")
			}
			if e, err := expr.Parse(w); err == nil && len(e.Names()) > 0 {
				t.Error("is read as a parameter")
			}
		})
	}
}

func TestDimension(t *testing.T) {
	for _, c := range []struct {
		src  string
		want schema.Dimension
	}{
		{"1", schema.Dimension{}}, {"0.25 * height + 20 nm", schema.Dimension{Length: 1}}, {"width / height", schema.Dimension{}},
		{"width * height", schema.Dimension{Length: 2}}, {"sqrt(width * height)", schema.Dimension{Length: 1}}, {"cbrt(width * height^2)", schema.Dimension{Length: 1}},
		{"width^-2", schema.Dimension{Length: -2}}, {"width^(1 + 1)", schema.Dimension{Length: 2}}, {"n^0.5", schema.Dimension{}}, {"n^one", schema.Dimension{}}, {"width^0", schema.Dimension{}},
		{"299792458 m/s * 1 / frequency", schema.Dimension{Length: 1}}, {"-3e-4 1/K * (temperature - 293.15 K)", schema.Dimension{}},
		{"atan(width / height)", schema.Dimension{Angle: 1}}, {"height / tan(sidewall)", schema.Dimension{Length: 1}}, {"sin(n)", schema.Dimension{}}, {"90 deg - sidewall", schema.Dimension{Angle: 1}},
		{"min(width, height, 1 um)", schema.Dimension{Length: 1}}, {"abs(temperature)", schema.Dimension{Temperature: 1}}, {"20 degC", schema.Dimension{Temperature: 1}},
		{"exp(-width / height)", schema.Dimension{}}, {"2 um^2 / 1 um", schema.Dimension{Length: 1}}, {"pi * 1 rad", schema.Dimension{Angle: 1}},
	} {
		t.Run(c.src, func(t *testing.T) {
			e, err := expr.Parse(c.src)
			if err != nil {
				t.Fatal(err)
			}
			if d, err := e.Dimension(guideDimension); err != nil || d != c.want {
				t.Errorf("got %+v, %v; want %+v", d, err, c.want)
			}
		})
	}
}

func TestDimensionRefuses(t *testing.T) {
	for _, c := range []struct {
		src      string
		offset   int
		found    string
		expected string
	}{
		{"width + 1", 8, "a pure number", "a length, as on the left of +"},
		{"1 - (width)", 4, "a length", "a pure number, as on the left of -"},
		{"width + height * height", 8, "an area", "a length, as on the left of +"},
		{"width + temperature", 8, "a temperature", "a length, as on the left of +"},
		{"n + sidewall", 4, "an angle", "a pure number, as on the left of +"},
		{"min(width, 1 K)", 11, "a temperature", "a length, as before it in min"},
		{"max(width, height, 2)", 19, "a pure number", "a length, as before it in max"},
		{"sqrt(width)", 5, "a length in sqrt", "a dimension with even exponents, such as an area"},
		{"cbrt(width)", 5, "a length in cbrt", "a dimension with exponents in threes, such as a volume"},
		{"exp(width)", 4, "a length in exp", "a pure number"},
		{"log(1 um)", 4, "a length in log", "a pure number"},
		{"sinh(sidewall)", 5, "an angle in sinh", "a pure number"},
		{"asin(30 deg)", 5, "an angle in asin", "a pure number"},
		{"sin(width)", 4, "a length in sin", "an angle, or a pure number in radians"},
		{"atan(width)", 5, "a length in atan", "a pure number"},
		{"2^width", 2, "a length as a power", "a pure number"},
		{"width^0.5", 6, "the power 0.5 of a length", "a whole number (sqrt and cbrt take roots)"},
		{"width^n", 0, "a length under a power that varies", "a pure number"},
		{"width^25", 5, "too high a power of a unit", "exponents of at most 24"},
		{"width^1e300", 5, "too high a power of a unit", "exponents of at most 24"},
		{"width^20 * width^20", 9, "too high a power of a unit", "exponents of at most 24"},
		{"2 * heigth", 4, `the unknown name "heigth"`, "the name of a parameter"},
	} {
		t.Run(c.src, func(t *testing.T) {
			e, err := expr.Parse(c.src)
			if err != nil {
				t.Fatal(err)
			}
			_, err = e.Dimension(guideDimension)
			isError(t, err, c.offset, c.found, c.expected)
		})
	}
	t.Run("in a condition", func(t *testing.T) {
		e, err := expr.Parse("1 < 2 and width > 0")
		if err != nil {
			t.Fatal(err)
		}
		isError(t, e.Condition(guideDimension), 18, "a pure number", "a length, as on the left of >")
	})
	t.Run("the unknown name is told", func(t *testing.T) {
		e, err := expr.Parse("heigth + 1 um")
		if err != nil {
			t.Fatal(err)
		}
		_, err = e.Dimension(guideDimension)
		if bad := (*expr.Error)(nil); !errors.As(err, &bad) || bad.Name != "heigth" {
			t.Errorf("got %v", err)
		}
	})
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{
		"0.25 * height + 20 nm", "sqrt(width^2 + height^2) * sin(sidewall)", "width > 2 * height and not (n < 4 or temperature < 20 degC)",
		"3e-4 1/K * (temperature - 293.15 K)", "2 um^-2*K/s", "n^n^n", "-5 degC", "min(n, 1, max(2, n))", "((((", "1/(n-n)", "zero^-1", "n^minus", "1..2", "\xff", "1e308*10*n",
	} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, src string) {
		e, err := expr.Parse(src)
		if err != nil {
			checkError(t, src, err)
			return
		}
		if e.IsCondition() {
			checkError(t, src, e.Condition(guideDimension))
			_, err := e.True(guide)
			checkError(t, src, err)
			return
		}
		_, err = e.Dimension(guideDimension)
		checkError(t, src, err)
		v, err := e.Float(guide)
		checkError(t, src, err)
		w, jetErr := expr.Eval(e, taylors{}, func(name string) taylor { return taylor{guide(name), 1} })
		checkError(t, src, jetErr)
		if math.IsNaN(v) || math.IsInf(v, 0) || err != nil && jetErr == nil || jetErr == nil && w[0] != v {
			t.Fatalf("%q: %v, %v; with derivatives %v, %v", src, v, err, w, jetErr)
		}
	})
}

// checkError holds an error to what the package promises of one.
func checkError(t *testing.T, src string, err error) {
	t.Helper()
	if err == nil {
		return
	}
	var e *expr.Error
	if !errors.As(err, &e) || e.Offset < 0 || e.Offset > len(src) || e.Found == "" || e.Expected == "" || len(e.Error()) > 1000 {
		t.Fatalf("%q: not a proper error: %v", src, err)
	}
}
