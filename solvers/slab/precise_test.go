package slab

import (
	"math/big"
)

// The tests' own complex arithmetic of 420 bits, on math/big: with it the characteristic
// equation is solved by another route than the solver's.

const precision = 420

type num2 struct{ re, im *big.Float }

func fl(x float64) *big.Float   { return new(big.Float).SetPrec(precision).SetFloat64(x) }
func zero() *big.Float          { return new(big.Float).SetPrec(precision) }
func cx(x complex128) num2      { return num2{fl(real(x)), fl(imag(x))} }
func rx(x float64) num2         { return num2{fl(x), zero()} }
func (a num2) add(b num2) num2  { return num2{zero().Add(a.re, b.re), zero().Add(a.im, b.im)} }
func (a num2) sub(b num2) num2  { return num2{zero().Sub(a.re, b.re), zero().Sub(a.im, b.im)} }
func (a num2) neg() num2        { return rx(0).sub(a) }
func (a num2) times(x int) num2 { return a.mul(rx(float64(x))) }

func (a num2) mul(b num2) num2 {
	if a.im.Sign() == 0 && b.im.Sign() == 0 {
		return num2{zero().Mul(a.re, b.re), zero()}
	}
	x := zero().Sub(zero().Mul(a.re, b.re), zero().Mul(a.im, b.im))
	y := zero().Add(zero().Mul(a.re, b.im), zero().Mul(a.im, b.re))
	return num2{x, y}
}

func (a num2) abs2() *big.Float {
	return zero().Add(zero().Mul(a.re, a.re), zero().Mul(a.im, a.im))
}

func (a num2) div(b num2) num2 {
	if a.im.Sign() == 0 && b.im.Sign() == 0 {
		return num2{zero().Quo(a.re, b.re), zero()}
	}
	d := b.abs2()
	n := a.mul(num2{b.re, zero().Neg(b.im)})
	return num2{zero().Quo(n.re, d), zero().Quo(n.im, d)}
}

// sqrt is the principal root.
func (a num2) sqrt() num2 {
	if a.im.Sign() == 0 {
		if a.re.Sign() >= 0 {
			return num2{zero().Sqrt(a.re), zero()}
		}
		return num2{zero(), zero().Sqrt(zero().Neg(a.re))}
	}
	m := zero().Sqrt(a.abs2())
	half := fl(0.5)
	re := zero().Sqrt(zero().Mul(half, zero().Add(m, a.re)))
	im := zero().Sqrt(zero().Mul(half, zero().Sub(m, a.re)))
	if a.re.Sign() > 0 {
		im = zero().Quo(zero().Mul(half, a.im), re)
		return num2{re, im}
	}
	if a.im.Sign() < 0 {
		im.Neg(im)
	}
	re = zero().Quo(zero().Mul(half, a.im), im)
	return num2{re, im}
}

// coshSinhc gives cosh x and sinh x / x for x^2 = z by their power series, after
// halving x often enough, and doubling back.
func coshSinhc(z num2) (c, s num2) {
	halvings := 0
	for size := z.abs2(); size.Cmp(fl(1e-12)) > 0; halvings++ {
		z = z.mul(rx(0.25))
		size = z.abs2()
	}
	c, s = rx(1), rx(1)
	tc, ts := rx(1), rx(1)
	for k := 1; k < 60; k++ {
		tc = tc.mul(z).div(rx(float64((2*k - 1) * (2 * k))))
		ts = ts.mul(z).div(rx(float64((2 * k) * (2*k + 1))))
		c, s = c.add(tc), s.add(ts)
	}
	for range halvings {
		s = s.mul(c)                     // sinh 2x / 2x
		c = c.mul(c).times(2).sub(rx(1)) // cosh 2x
	}
	return c, s
}

// atan of a real number: halved until small, then its series.
func atan(x *big.Float) *big.Float {
	one := fl(1)
	doublings := 0
	x = zero().Set(x)
	for zero().Abs(x).Cmp(fl(1e-6)) > 0 {
		r := zero().Sqrt(zero().Add(one, zero().Mul(x, x)))
		x.Quo(x, zero().Add(one, r))
		doublings++
	}
	sum, term, xx := zero().Set(x), zero().Set(x), zero().Mul(x, x)
	for k := 3; k < 100; k += 2 {
		term.Mul(term, xx).Neg(term)
		sum.Add(sum, zero().Quo(term, fl(float64(k))))
	}
	for range doublings {
		sum.Add(sum, sum)
	}
	return sum
}

func bigPi() *big.Float { return zero().Mul(fl(4), atan(fl(1))) }

func (a num2) float() complex128 {
	x, _ := a.re.Float64()
	y, _ := a.im.Float64()
	return complex(x, y)
}
