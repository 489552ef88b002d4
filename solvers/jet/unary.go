package jet

import (
	"math"
	"math/cmplx"
)

// Unary is f(a) from f and its first three derivatives at a.V.
func Unary(a Jet, f [4]complex128) Jet {
	a.P, a.WP = combine(part{f[1], a.P}), combine(part{f[1], a.WP}, part{f[2] * a.W, a.P})
	a.chain(f)
	return a
}

// Sqrt is the principal square root. Where a is zero its derivatives are not
// finite.
func Sqrt(a Jet) Jet { return Unary(a, sqrtAt(a.V)) }

// sqrtAt gives the square root at v with its first three derivatives. A
// positive real v has a real root exactly, and is the case that must be fast.
func sqrtAt(v complex128) [4]complex128 {
	if x := real(v); imag(v) == 0 && x > 0 {
		s := math.Sqrt(x)
		f1, r := 0.5/s, 1/x
		return [4]complex128{
			complex(s, 0), complex(f1, 0), complex(-0.5*f1*r, 0), complex(0.75*f1*r*r, 0),
		}
	}
	s := cmplx.Sqrt(v)
	f1, r := 0.5/s, 1/v
	return [4]complex128{s, f1, -0.5 * f1 * r, 0.75 * f1 * r * r}
}

// chain applies the rule for a function of a function to V and its
// derivatives in w (Faa di Bruno, to third order).
func (z *Jet) chain(f [4]complex128) {
	w, ww := z.W, z.WW
	z.V = f[0]
	z.W = f[1] * w
	z.WW = f[1]*ww + f[2]*w*w
	z.WWW = f[1]*z.WWW + 3*f[2]*w*ww + f[3]*w*w*w
}
