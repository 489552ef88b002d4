package jet

// Jet holds derivatives, not Taylor coefficients. P and WP have one entry a
// base parameter; both may be nil, which means zero.
type Jet struct {
	V, W, WW, WWW complex128   // value, d/dw, d2/dw2, d3/dw3
	P, WP         []complex128 // d/dp, d2/dwdp
}

// Const is a quantity that depends on nothing.
func Const(v complex128) Jet { return Jet{V: v} }

// Frequency is the angular frequency w itself.
func Frequency(w float64) Jet { return Jet{V: complex(w, 0), W: 1} }

// Parameter is the base parameter of that index among params of them, with
// value v.
func Parameter(v float64, index, params int) Jet {
	j := Jet{V: complex(v, 0), P: make([]complex128, params)}
	j.P[index] = 1
	return j
}

// Add is a + b.
func Add(a, b Jet) Jet {
	return Jet{
		V: a.V + b.V, W: a.W + b.W, WW: a.WW + b.WW, WWW: a.WWW + b.WWW,
		P:  combine(part{1, a.P}, part{1, b.P}),
		WP: combine(part{1, a.WP}, part{1, b.WP}),
	}
}

// Sub is a - b.
func Sub(a, b Jet) Jet {
	return Jet{
		V: a.V - b.V, W: a.W - b.W, WW: a.WW - b.WW, WWW: a.WWW - b.WWW,
		P:  combine(part{1, a.P}, part{-1, b.P}),
		WP: combine(part{1, a.WP}, part{-1, b.WP}),
	}
}

// Neg is -a.
func Neg(a Jet) Jet { return Scale(a, -1) }

// Scale is c a for a constant c.
func Scale(a Jet, c complex128) Jet {
	return Jet{
		V: c * a.V, W: c * a.W, WW: c * a.WW, WWW: c * a.WWW,
		P: combine(part{c, a.P}), WP: combine(part{c, a.WP}),
	}
}

// Mul is a b.
func Mul(a, b Jet) Jet {
	return Jet{
		V:   a.V * b.V,
		W:   a.W*b.V + a.V*b.W,
		WW:  a.WW*b.V + 2*a.W*b.W + a.V*b.WW,
		WWW: a.WWW*b.V + 3*(a.WW*b.W+a.W*b.WW) + a.V*b.WWW,
		P:   combine(part{b.V, a.P}, part{a.V, b.P}),
		WP:  combine(part{b.V, a.WP}, part{b.W, a.P}, part{a.W, b.P}, part{a.V, b.WP}),
	}
}

// Div is a / b. Where b is zero the result is not finite.
func Div(a, b Jet) Jet {
	r := 1 / b.V
	q := Jet{V: a.V / b.V}
	q.W = r * (a.W - q.V*b.W)
	q.WW = r * (a.WW - 2*q.W*b.W - q.V*b.WW)
	q.WWW = r * (a.WWW - 3*(q.WW*b.W+q.W*b.WW) - q.V*b.WWW)
	q.P = combine(part{r, a.P}, part{-r * q.V, b.P})
	q.WP = combine(part{r, a.WP}, part{-r * q.W, b.P}, part{-r * b.W, q.P}, part{-r * q.V, b.WP})
	return q
}

// part is one term c x of a linear combination.
type part struct {
	c complex128
	x []complex128
}

// combine sums the parts; it is nil where every part is.
func combine(parts ...part) []complex128 {
	var sum []complex128
	for _, p := range parts {
		if p.x == nil || p.c == 0 {
			continue
		}
		if sum == nil {
			sum = make([]complex128, len(p.x))
		}
		for i, x := range p.x {
			sum[i] += p.c * x
		}
	}
	return sum
}
