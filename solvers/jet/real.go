package jet

// Real is the algebra of real expressions over jets: it gives an expression
// that is evaluated with it its exact derivatives. Imaginary parts are zero
// throughout. The zero Real is ready to use.
type Real struct{}

// Const is a number of the expression.
func (Real) Const(v float64) Jet { return Jet{V: complex(v, 0)} }

// Value is the real value of a.
func (Real) Value(a Jet) float64 { return real(a.V) }

// Add is a + b.
func (Real) Add(a, b Jet) Jet { return Add(a, b) }

// Sub is a - b.
func (Real) Sub(a, b Jet) Jet { return Sub(a, b) }

// Mul is a b.
func (Real) Mul(a, b Jet) Jet { return Mul(a, b) }

// Div is a / b.
func (Real) Div(a, b Jet) Jet { return Div(a, b) }

// Unary is a real function of a, from its value and first three derivatives
// at Value(a).
func (Real) Unary(a Jet, f [4]float64) Jet {
	return Unary(a, [4]complex128{
		complex(f[0], 0), complex(f[1], 0), complex(f[2], 0), complex(f[3], 0),
	})
}
