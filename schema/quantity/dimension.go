package quantity

import "betaloom/schema"

// MaxExponent is the largest exponent of a dimension that is accepted; no
// quantity of physics comes near it.
const MaxExponent = 24

// pure is the dimension of a pure number.
var pure = schema.Dimension{}

// Product is the dimension of a product. ok is false where an exponent
// grows beyond MaxExponent.
func Product(a, b schema.Dimension) (d schema.Dimension, ok bool) {
	return combine(a, b, 1)
}

// Quotient is the dimension of a quotient. ok is false where an exponent
// grows beyond MaxExponent.
func Quotient(a, b schema.Dimension) (d schema.Dimension, ok bool) {
	return combine(a, b, -1)
}

// Power is the dimension of a whole power. ok is false where an exponent
// grows beyond MaxExponent.
func Power(a schema.Dimension, n int) (d schema.Dimension, ok bool) {
	const bound = MaxExponent + 1 // keeps a huge n from overflowing
	return combine(pure, a, max(-bound, min(bound, n)))
}

// Root is the dimension of an n-th root. ok is false where an exponent is
// not a multiple of n.
func Root(a schema.Dimension, n int) (d schema.Dimension, ok bool) {
	e := exponents(a)
	for i := range e {
		if e[i]%n != 0 {
			return pure, false
		}
		e[i] /= n
	}
	return dimension(e), true
}

// combine multiplies a by the n-th power of b.
func combine(a, b schema.Dimension, n int) (schema.Dimension, bool) {
	e, f := exponents(a), exponents(b)
	for i := range e {
		e[i] += n * f[i]
		if e[i] > MaxExponent || e[i] < -MaxExponent {
			return pure, false
		}
	}
	return dimension(e), true
}

// exponents lists a dimension in the order of bases.
func exponents(d schema.Dimension) [6]int {
	return [6]int{d.Mass, d.Length, d.Time, d.Current, d.Temperature, d.Angle}
}

func dimension(e [6]int) schema.Dimension {
	return schema.Dimension{Mass: e[0], Length: e[1], Time: e[2], Current: e[3], Temperature: e[4], Angle: e[5]}
}

// Describe names a dimension for a message: "a length", "a frequency", "a
// pure number", "an angle"; where it has no name, its unit ("1/K", "S/m").
func Describe(d schema.Dimension) string {
	for _, n := range named {
		if n.d == d {
			return n.words
		}
	}
	_, unit, _ := siUnit(d)
	return unit
}

// named lists the dimensions that have a name of their own.
var named = []struct {
	d     schema.Dimension
	words string
}{
	{schema.Dimension{}, "a pure number"},
	{schema.Dimension{Length: 1}, "a length"},
	{schema.Dimension{Length: 2}, "an area"},
	{schema.Dimension{Time: -1}, "a frequency"},
	{schema.Dimension{Time: 1}, "a time"},
	{schema.Dimension{Angle: 1}, "an angle"},
	{schema.Dimension{Temperature: 1}, "a temperature"},
}
