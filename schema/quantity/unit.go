package quantity

import (
	"fmt"
	"math"
	"math/big"
	"strconv"
	"strings"

	"betaloom/schema"
)

// Unit is a unit: a value in it times Scale plus Offset is the value in SI
// units (radians for angles). Offset is zero for all but degC.
type Unit struct {
	Text      string // as written, without spaces
	Dimension schema.Dimension
	Scale     float64
	Offset    float64

	factor, offset *big.Rat // Scale and Offset before rounding; offset may be nil
}

// maxFactors is the most names in a compound unit.
const maxFactors = 8

// MaxText is the longest text in bytes that Parse and ParseUnit read.
const MaxText = 256

// ParseUnit reads a unit: names joined with * and /, each with an optional
// whole power, read from left to right ("um", "1/K", "S/m", "um^2",
// "ps^2/km", "V/um"). "1" alone is the unit of pure numbers. The error is an
// *Error.
func ParseUnit(s string) (Unit, error) {
	if len(s) > MaxText {
		return Unit{}, fail(s, fmt.Sprintf("a text of %d bytes", len(s)), fmt.Sprintf("at most %d", MaxText))
	}
	p := unitParser{text: s, rest: s, unit: Unit{factor: decimal("1")}}
	if err := p.product(); err != nil {
		return Unit{}, err
	}
	u := p.unit
	u.Scale, _ = u.factor.Float64()
	if u.Scale == 0 || math.IsInf(u.Scale, 0) {
		return Unit{}, fail(s, "a unit beyond the range of numbers", "smaller powers")
	}
	if u.offset != nil {
		u.Offset, _ = u.offset.Float64()
	}
	return u, nil
}

// unitParser reads a unit from left to right.
type unitParser struct {
	text, rest string
	factors    int
	unit       Unit
}

func (p *unitParser) product() error {
	if err := p.first(); err != nil {
		return err
	}
	for p.space(); p.rest != ""; p.space() {
		sign := 1
		switch p.rest[0] {
		case '/':
			sign = -1
		case '*':
		default:
			return fail(p.text, Excerpt(p.rest)+" after the unit", "its end, or * or / and another unit")
		}
		p.take(1)
		p.space()
		if err := p.factor(sign); err != nil {
			return err
		}
	}
	return nil
}

// first reads the first factor, which may be "1".
func (p *unitParser) first() error {
	p.space()
	if p.rest == "" {
		return fail(p.text, "no unit", "a unit such as um, THz or 1/K")
	}
	if p.rest[0] == '1' && (len(p.rest) == 1 || strings.IndexByte(" \t/*", p.rest[1]) >= 0) {
		p.take(1)
		return nil
	}
	return p.factor(1)
}

// factor reads a name and its power.
func (p *unitParser) factor(sign int) error {
	if p.factors++; p.factors > maxFactors {
		return fail(p.text, "a unit of more factors", fmt.Sprintf("at most %d", maxFactors))
	}
	end := 0
	for end < len(p.rest) && (isLetter(p.rest[end]) || p.rest[end] >= 0x80) {
		end++
	}
	word := p.rest[:end]
	if word == "" {
		return fail(p.text, p.next(), "a unit such as um, THz or 1/K")
	}
	n, ok := lookup(word)
	if !ok {
		return fail(p.text, "the unknown unit "+Excerpt(word), "a unit such as um, THz or 1/K"+suggest(word))
	}
	p.take(end)
	e, err := p.power()
	if err != nil {
		return err
	}
	return p.multiply(n, sign*e)
}

// next quotes what stands next, for a message.
func (p *unitParser) next() string {
	if p.rest == "" {
		return "the end"
	}
	return Excerpt(p.rest)
}

// power reads an optional power: ^2, ^-1.
func (p *unitParser) power() (int, error) {
	if !strings.HasPrefix(strings.TrimLeft(p.rest, " \t"), "^") {
		return 1, nil
	}
	p.space()
	p.take(1)
	end := 0
	if strings.HasPrefix(p.rest, "-") {
		end = 1
	}
	for end < len(p.rest) && isDigit(p.rest[end]) {
		end++
	}
	e, err := strconv.Atoi(p.rest[:end])
	if err != nil || e == 0 || e > MaxExponent || e < -MaxExponent || strings.HasPrefix(p.rest[end:], ".") {
		return 0, fail(p.text, "the power "+p.next(), fmt.Sprintf("a whole number from 1 to %d or its negative", MaxExponent))
	}
	p.take(end)
	return e, nil
}

func (p *unitParser) multiply(n name, e int) error {
	if n.offset != nil {
		if p.unit.Text != n.text || e != 1 || strings.Trim(p.rest, " \t") != "" {
			return fail(p.text, n.text+" in a compound unit", "K ("+n.text+" is an absolute temperature and stands alone)")
		}
		p.unit.offset = n.offset
	}
	d, ok := Power(n.d, e)
	if ok {
		d, ok = Product(p.unit.Dimension, d)
	}
	if !ok {
		return fail(p.text, "too high a power", fmt.Sprintf("exponents of at most %d", MaxExponent))
	}
	p.unit.Dimension = d
	p.unit.factor = new(big.Rat).Mul(p.unit.factor, ratPower(n.factor, e))
	return nil
}

// take moves the next n bytes to the unit's text.
func (p *unitParser) take(n int) {
	p.unit.Text += p.rest[:n]
	p.rest = p.rest[n:]
}

func (p *unitParser) space() { p.rest = strings.TrimLeft(p.rest, " \t") }

func ratPower(r *big.Rat, e int) *big.Rat {
	n := big.NewInt(int64(max(e, -e)))
	num, den := new(big.Int).Exp(r.Num(), n, nil), new(big.Int).Exp(r.Denom(), n, nil)
	if e < 0 {
		num, den = den, num
	}
	return new(big.Rat).SetFrac(num, den)
}

func isLetter(c byte) bool { return c|0x20 >= 'a' && c|0x20 <= 'z' }
func isDigit(c byte) bool  { return c >= '0' && c <= '9' }
