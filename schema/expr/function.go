package expr

import (
	"math"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// function is a function of one argument.
type function struct {
	name string
	// at gives the value and the first three derivatives at x. Where x is
	// outside its domain, expected says what it takes.
	at func(x float64) (f [4]float64, expected string)
	// dimension maps the argument's dimension; expected is set where the
	// argument is of a wrong one.
	dimension func(d schema.Dimension) (of schema.Dimension, expected string)
}

// functions lists the functions of one argument. The derivatives are those
// of DLMF sections 4.7, 4.20, 4.24 and 4.34, written out to the third.
var functions = []function{
	{"sqrt", sqrtAt, root(2)},
	{"cbrt", cbrtAt, root(3)},
	{"exp", expAt, ofPure},
	{"log", logAt, ofPure},
	{"log10", log10At, ofPure},
	{"sin", sinAt, ofAngle},
	{"cos", cosAt, ofAngle},
	{"tan", tanAt, ofAngle},
	{"asin", asinAt, givesAngle},
	{"acos", acosAt, givesAngle},
	{"atan", atanAt, givesAngle},
	{"sinh", sinhAt, ofPure},
	{"cosh", coshAt, ofPure},
	{"tanh", tanhAt, ofPure},
	{"abs", absAt, ofAny},
}

// several lists the functions of two or more arguments.
var several = []struct {
	name string
	op   op
}{{"min", opMin}, {"max", opMax}}

// Reserved lists the words of the language: its functions, constants and
// keywords. A parameter may not carry one.
func Reserved() []string {
	words := []string{"pi", "and", "or", "not"}
	for _, f := range several {
		words = append(words, f.name)
	}
	for _, f := range functions {
		words = append(words, f.name)
	}
	return words
}

func functionIndex(name string) (int, bool) {
	for i := range functions {
		if functions[i].name == name {
			return i, true
		}
	}
	return 0, false
}

func severalOp(name string) (op, bool) {
	for _, f := range several {
		if f.name == name {
			return f.op, true
		}
	}
	return 0, false
}

func root(n int) func(schema.Dimension) (schema.Dimension, string) {
	return func(d schema.Dimension) (schema.Dimension, string) {
		of, ok := quantity.Root(d, n)
		if !ok {
			return of, map[int]string{2: "a dimension with even exponents, such as an area", 3: "a dimension with exponents in threes, such as a volume"}[n]
		}
		return of, ""
	}
}

func ofAny(d schema.Dimension) (schema.Dimension, string) { return d, "" }

func ofPure(d schema.Dimension) (schema.Dimension, string) {
	if d != (schema.Dimension{}) {
		return d, "a pure number"
	}
	return d, ""
}

func ofAngle(d schema.Dimension) (schema.Dimension, string) {
	if d != (schema.Dimension{}) && d != (schema.Dimension{Angle: 1}) {
		return d, "an angle, or a pure number in radians"
	}
	return schema.Dimension{}, ""
}

func givesAngle(d schema.Dimension) (schema.Dimension, string) {
	_, expected := ofPure(d)
	return schema.Dimension{Angle: 1}, expected
}

func sqrtAt(x float64) (f [4]float64, expected string) {
	if x < 0 {
		return f, "an argument of at least 0"
	}
	r := math.Sqrt(x)
	return [4]float64{r, 0.5 / r, -0.25 / (r * x), 0.375 / (r * x * x)}, ""
}

func cbrtAt(x float64) ([4]float64, string) {
	r := math.Cbrt(x)
	q := 1 / (r * r) // x^(-2/3)
	return [4]float64{r, q / 3, -2 * q / (9 * x), 10 * q / (27 * x * x)}, ""
}

func expAt(x float64) ([4]float64, string) {
	e := math.Exp(x)
	return [4]float64{e, e, e, e}, ""
}

func logAt(x float64) (f [4]float64, expected string) {
	if x <= 0 {
		return f, "an argument above 0"
	}
	return [4]float64{math.Log(x), 1 / x, -1 / (x * x), 2 / (x * x * x)}, ""
}

func log10At(x float64) (f [4]float64, expected string) {
	f, expected = logAt(x)
	if expected == "" {
		f = [4]float64{math.Log10(x), f[1] / math.Ln10, f[2] / math.Ln10, f[3] / math.Ln10}
	}
	return f, expected
}

func sinAt(x float64) ([4]float64, string) {
	s, c := math.Sincos(x)
	return [4]float64{s, c, -s, -c}, ""
}

func cosAt(x float64) ([4]float64, string) {
	s, c := math.Sincos(x)
	return [4]float64{c, -s, -c, s}, ""
}

func tanAt(x float64) ([4]float64, string) {
	t := math.Tan(x)
	q := 1 + t*t
	return [4]float64{t, q, 2 * t * q, 2 * q * (1 + 3*t*t)}, ""
}

func asinAt(x float64) (f [4]float64, expected string) {
	if x < -1 || x > 1 {
		return f, "an argument from -1 to 1"
	}
	q := (1 - x) * (1 + x)
	r := math.Sqrt(q)
	return [4]float64{math.Asin(x), 1 / r, x / (q * r), (1 + 2*x*x) / (q * q * r)}, ""
}

func acosAt(x float64) ([4]float64, string) {
	f, expected := asinAt(x)
	return [4]float64{math.Acos(x), -f[1], -f[2], -f[3]}, expected
}

func atanAt(x float64) ([4]float64, string) {
	q := 1 / (1 + x*x)
	return [4]float64{math.Atan(x), q, -2 * (x * q) * q, 2 * (3*(x*q)*(x*q) - q*q) * q}, ""
}

func sinhAt(x float64) ([4]float64, string) {
	s, c := math.Sinh(x), math.Cosh(x)
	return [4]float64{s, c, s, c}, ""
}

func coshAt(x float64) ([4]float64, string) {
	s, c := math.Sinh(x), math.Cosh(x)
	return [4]float64{c, s, c, s}, ""
}

func tanhAt(x float64) ([4]float64, string) {
	t := math.Tanh(x)
	r := 1 / math.Cosh(x)
	q := r * r
	return [4]float64{t, q, -2 * t * q, q * (4*t*t - 2*q)}, ""
}

func absAt(x float64) ([4]float64, string) {
	if x < 0 {
		return [4]float64{-x, -1}, ""
	}
	return [4]float64{x, 1}, ""
}

// powAt gives x^c with its first three derivatives in x.
func powAt(x, c float64) (f [4]float64, expected string) {
	if x < 0 && c != math.Trunc(c) {
		return f, "a base of at least 0 under a power that is no whole number"
	}
	if x == 0 && c < 0 {
		return f, "a base other than 0 under a negative power"
	}
	factor := 1.0
	for i := range f {
		if factor != 0 { // 0 times an infinite power of 0 is 0 here
			f[i] = factor * math.Pow(x, c-float64(i))
		}
		factor *= c - float64(i)
	}
	return f, ""
}
