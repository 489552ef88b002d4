package expr_test

import "math/big"

// The elementary functions in 600-bit arithmetic, from their power series
// alone: another route than package math's. They are slow and serve as
// the reference for values and, by differences over 1e-30, for derivatives.

const bits = 600

// precise is a number of 600 bits.
type precise = *big.Float

func num(v float64) precise           { return new(big.Float).SetPrec(bits).SetFloat64(v) }
func whole(n int64) precise           { return new(big.Float).SetPrec(bits).SetInt64(n) }
func add(a, b precise) precise        { return new(big.Float).SetPrec(bits).Add(a, b) }
func sub(a, b precise) precise        { return new(big.Float).SetPrec(bits).Sub(a, b) }
func mul(a, b precise) precise        { return new(big.Float).SetPrec(bits).Mul(a, b) }
func div(a, b precise) precise        { return new(big.Float).SetPrec(bits).Quo(a, b) }
func negative(a precise) precise      { return new(big.Float).SetPrec(bits).Neg(a) }
func root(a precise) precise          { return new(big.Float).SetPrec(bits).Sqrt(a) }
func halved(a precise, n int) precise { return new(big.Float).SetPrec(bits).SetMantExp(a, -n) }

// series sums x^k/k! over k = first, first+step, ..., with alternating signs
// if asked.
func series(x precise, first, step int64, alternate bool) precise {
	sum, term, sign := whole(0), whole(1), int64(1)
	next := first
	for k := int64(0); k < 130; k++ {
		if k > 0 {
			term = div(mul(term, x), whole(k))
		}
		if k == next {
			sum = add(sum, mul(whole(sign), term))
			next += step
			if alternate {
				sign = -sign
			}
		}
	}
	return sum
}

// bigExp reduces x by 2^20 and squares back.
func bigExp(x precise) precise {
	e := series(halved(x, 20), 0, 1, false)
	for range 20 {
		e = mul(e, e)
	}
	return e
}

// bigLog solves exp(y) = x by Halley's method, which triples the digits each time.
func bigLog(x precise) precise {
	y := whole(0)
	for range 14 {
		e := bigExp(y)
		y = add(y, mul(whole(2), div(sub(x, e), add(x, e))))
	}
	return y
}

func bigSin(x precise) precise { return series(x, 1, 2, true) }
func bigCos(x precise) precise { return series(x, 0, 2, true) }
func bigTan(x precise) precise { return div(bigSin(x), bigCos(x)) }

// bigAtan halves the angle eight times, then sums Gregory's series.
func bigAtan(x precise) precise {
	for range 8 {
		x = div(x, add(whole(1), root(add(whole(1), mul(x, x)))))
	}
	square, sum, p := mul(x, x), whole(0), x
	for k := int64(0); k < 60; k++ {
		sum = add(sum, div(p, whole(2*k+1)))
		p = negative(mul(p, square))
	}
	return halved(sum, -8)
}

func bigAsin(x precise) precise {
	return bigAtan(div(x, root(sub(whole(1), mul(x, x)))))
}

func bigAcos(x precise) precise {
	return sub(mul(whole(2), bigAtan(whole(1))), bigAsin(x))
}

func bigSinh(x precise) precise { return halved(sub(bigExp(x), bigExp(negative(x))), 1) }
func bigCosh(x precise) precise { return halved(add(bigExp(x), bigExp(negative(x))), 1) }
func bigTanh(x precise) precise { return div(bigSinh(x), bigCosh(x)) }

func bigPow(x, y precise) precise { return bigExp(mul(y, bigLog(x))) }

func bigAbs(x precise) precise { return new(big.Float).SetPrec(bits).Abs(x) }

// derivatives gives f and its first three derivatives at x by central
// differences over h = 1e-30: their error is of the order h^2, and rounding
// leaves 600 bits less 90 digits, both far below a float64's.
func derivatives(f func(precise) precise, x float64) [4]float64 {
	h, _ := new(big.Float).SetPrec(bits).SetString("1e-30")
	at := func(n int64) precise { return f(add(num(x), mul(whole(n), h))) }
	far, near, mid, left, right := at(-2), at(-1), at(0), at(1), at(2)
	var d [4]float64
	d[0], _ = mid.Float64()
	d[1], _ = div(sub(left, near), mul(whole(2), h)).Float64()
	d[2], _ = div(add(sub(left, mul(whole(2), mid)), near), mul(h, h)).Float64()
	third := add(sub(right, far), mul(whole(2), sub(near, left)))
	d[3], _ = div(third, mul(whole(2), mul(h, mul(h, h)))).Float64()
	return d
}
