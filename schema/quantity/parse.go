package quantity

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"

	"betaloom/schema"
)

// Parse reads a quantity: a decimal number, then a unit unless it is a pure
// number ("1.30 um", "1.30um", "-3e-4 1/K", "88 deg", "20 degC", "0.5"). The
// value is in SI units (radians, kelvin), rounded once to the nearest
// float64. The error is an *Error.
func Parse(s string) (v float64, d schema.Dimension, err error) {
	if len(s) > MaxText {
		return 0, pure, fail(s, fmt.Sprintf("a text of %d bytes", len(s)), fmt.Sprintf("at most %d", MaxText))
	}
	text := strings.Trim(s, " \t")
	n := NumberLength(text)
	rest := strings.TrimLeft(text[n:], " \t")
	if n == 0 || isGlued(text[n:]) {
		return 0, pure, notNumber(s, text)
	}
	if rest == "" {
		v, err = Unit{}.Value(text)
		return v, pure, err
	}
	u, err := ParseUnit(rest)
	if err != nil {
		err.(*Error).Text = Excerpt(s)
		return 0, pure, err
	}
	v, err = u.Value(text[:n])
	return v, u.Dimension, err
}

// Value reads a bare decimal number as a value in the unit and gives it in
// SI units, rounded once to the nearest float64. The zero Unit serves for
// pure numbers. The error is an *Error.
func (u Unit) Value(number string) (float64, error) {
	if NumberLength(number) != len(number) || number == "" || len(number) > MaxText {
		return 0, notNumber(number, number)
	}
	r, err := rational(number)
	if err != nil {
		return 0, err
	}
	if u.factor != nil {
		r.Mul(r, u.factor)
	}
	zero := r.Sign() == 0
	if u.offset != nil {
		if r.Add(r, u.offset); r.Sign() < 0 {
			return 0, fail(number, number+" "+u.Text, "a temperature above -273.15 degC")
		}
		zero = r.Sign() == 0
	}
	v, _ := r.Float64()
	if math.IsInf(v, 0) || v == 0 && !zero {
		return 0, outOfRange(number)
	}
	return v, nil
}

// rational reads a decimal number exactly. The length of the number and the
// size of its exponent are bounded, and so is the work.
func rational(number string) (*big.Rat, error) {
	const most = 1000 // beyond float64 whatever the (at most MaxText) digits before it
	if i := strings.IndexAny(number, "eE"); i >= 0 {
		if e, err := strconv.Atoi(number[i+1:]); err != nil || e > most || e < -most {
			return nil, outOfRange(number)
		}
	}
	r, ok := new(big.Rat).SetString(number)
	if !ok {
		return nil, notNumber(number, number)
	}
	return r, nil
}

func outOfRange(number string) *Error {
	return fail(number, "a number beyond the range of float64", "a magnitude from 5e-324 to 1.8e308 in SI units, or 0")
}

// NumberLength is the length of the decimal number that s starts with: an
// optional sign, digits with an optional point, an optional exponent. It is
// 0 where s starts with no number.
func NumberLength(s string) int {
	i := 0
	if i < len(s) && (s[i] == '+' || s[i] == '-') {
		i++
	}
	start := i
	i = digits(s, i)
	count := i - start
	if i < len(s) && s[i] == '.' {
		end := digits(s, i+1)
		count += end - i - 1
		i = end
	}
	if count == 0 {
		return 0
	}
	return exponent(s, i)
}

// exponent gives where an exponent that starts at i ends; i if none does.
func exponent(s string, i int) int {
	if i >= len(s) || s[i]|0x20 != 'e' {
		return i
	}
	start := i + 1
	if start < len(s) && (s[start] == '+' || s[start] == '-') {
		start++
	}
	if end := digits(s, start); end > start {
		return end
	}
	return i
}

func digits(s string, i int) int {
	for i < len(s) && isDigit(s[i]) {
		i++
	}
	return i
}

// isGlued reports whether what follows a number without a space can be the
// start of no unit: a second point, a comma, the x of a hexadecimal number.
func isGlued(rest string) bool {
	return rest != "" && rest[0] != ' ' && rest[0] != '\t' && !isLetter(rest[0]) && rest[0] < 0x80 ||
		len(rest) > 1 && rest[0]|0x20 == 'x' && isHex(rest[1])
}

func isHex(c byte) bool { return isDigit(c) || c|0x20 >= 'a' && c|0x20 <= 'f' }

// notNumber says why text does not start with a number, or what is glued to
// the number it starts with.
func notNumber(s, text string) *Error {
	expected := `a decimal number and its unit, such as "1.30 um"`
	bare := strings.ToLower(strings.TrimLeft(text, "+-"))
	n := NumberLength(text)
	switch {
	case text == "":
		return fail(s, "nothing", expected)
	case strings.HasPrefix(bare, "nan"), strings.HasPrefix(bare, "inf"):
		return fail(s, Excerpt(text), "a finite decimal number")
	case strings.HasPrefix(bare, "0x"):
		return fail(s, "a hexadecimal number", expected)
	case n > 0 && text[n:] == "":
		return fail(s, fmt.Sprintf("a number of %d digits", n), fmt.Sprintf("at most %d", MaxText))
	case n > 0 && text[n] == ',':
		return fail(s, "a comma after "+Excerpt(text[:n]), "a decimal point, and no separators")
	case n > 0:
		return fail(s, Excerpt(text[n:])+" after the number "+Excerpt(text[:n]), "a unit there, such as um or 1/K")
	case IsName(text):
		return fail(s, "the unit "+text+" without a number", expected)
	}
	return fail(s, Excerpt(text), expected)
}
