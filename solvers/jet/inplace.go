package jet

import "slices"

// Reset makes z the constant v with room for params parameters: P and WP are
// that many zeros, or nil for none. Storage is re-used.
func (z *Jet) Reset(v complex128, params int) {
	p, wp := z.P[:0], z.WP[:0]
	*z = Jet{V: v}
	if params > 0 {
		z.P, z.WP = zeros(p, params), zeros(wp, params)
	}
}

// Set makes z a copy of a that shares no storage with it, with room for both
// P and WP where a has either. Storage of z is re-used.
func (z *Jet) Set(a *Jet) {
	z.Reset(a.V, max(len(a.P), len(a.WP)))
	z.W, z.WW, z.WWW = a.W, a.WW, a.WWW
	copy(z.P, a.P)
	copy(z.WP, a.WP)
}

// Apply makes z f(z), from f and its first three derivatives at z.V.
func (z *Jet) Apply(f [4]complex128) {
	for i := range z.WP {
		z.WP[i] = f[1]*z.WP[i] + f[2]*z.W*z.P[i]
	}
	for i := range z.P {
		z.P[i] *= f[1]
	}
	z.chain(f)
}

// Root makes z its principal square root.
func (z *Jet) Root() { z.Apply(sqrtAt(z.V)) }

// Square makes z its square.
func (z *Jet) Square() { z.Apply([4]complex128{z.V * z.V, 2 * z.V, 2, 0}) }

// Accumulate adds c a to z, for a constant c.
func (z *Jet) Accumulate(c complex128, a *Jet) {
	z.V += c * a.V
	z.W += c * a.W
	z.WW += c * a.WW
	z.WWW += c * a.WWW
	z.Depend(c, 0, a)
}

// AccumulateProduct adds c a b to z, for a constant c.
func (z *Jet) AccumulateProduct(c complex128, a, b *Jet) {
	z.V += c * a.V * b.V
	z.W += c * (a.W*b.V + a.V*b.W)
	z.WW += c * (a.WW*b.V + 2*a.W*b.W + a.V*b.WW)
	z.WWW += c * (a.WWW*b.V + 3*(a.WW*b.W+a.W*b.WW) + a.V*b.WWW)
	z.Depend(c*b.V, c*b.W, a)
	z.Depend(c*a.V, c*a.W, b)
}

// Depend tells z that it depends on a with the partial derivative d, whose
// own derivative in w is dw: only P and WP of z change. Where a has either,
// z must have room for both (Reset).
func (z *Jet) Depend(d, dw complex128, a *Jet) {
	for i, p := range a.P {
		z.P[i] += d * p
		z.WP[i] += dw * p
	}
	for i, wp := range a.WP {
		z.WP[i] += d * wp
	}
}

func zeros(s []complex128, n int) []complex128 {
	s = slices.Grow(s, n)[:n]
	clear(s)
	return s
}
