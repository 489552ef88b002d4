package expr_test

// taylor holds the value and the first three derivatives in one variable:
// the algebra that the tests evaluate in.
type taylor [4]float64

type taylors struct{}

func (taylors) Const(v float64) taylor { return taylor{v} }

func (taylors) Value(a taylor) float64 { return a[0] }

func (taylors) Add(a, b taylor) taylor {
	return taylor{a[0] + b[0], a[1] + b[1], a[2] + b[2], a[3] + b[3]}
}

func (taylors) Sub(a, b taylor) taylor {
	return taylor{a[0] - b[0], a[1] - b[1], a[2] - b[2], a[3] - b[3]}
}

// Mul is Leibniz' rule.
func (taylors) Mul(a, b taylor) taylor {
	return taylor{
		a[0] * b[0],
		a[1]*b[0] + a[0]*b[1],
		a[2]*b[0] + 2*a[1]*b[1] + a[0]*b[2],
		a[3]*b[0] + 3*a[2]*b[1] + 3*a[1]*b[2] + a[0]*b[3],
	}
}

// Div solves Leibniz' rule of q b = a for q.
func (taylors) Div(a, b taylor) taylor {
	var q taylor
	q[0] = a[0] / b[0]
	q[1] = (a[1] - q[0]*b[1]) / b[0]
	q[2] = (a[2] - 2*q[1]*b[1] - q[0]*b[2]) / b[0]
	q[3] = (a[3] - 3*q[2]*b[1] - 3*q[1]*b[2] - q[0]*b[3]) / b[0]
	return q
}

// Unary is the formula of Faa di Bruno to the third derivative.
func (taylors) Unary(a taylor, f [4]float64) taylor {
	return taylor{
		f[0],
		f[1] * a[1],
		f[2]*a[1]*a[1] + f[1]*a[2],
		f[3]*a[1]*a[1]*a[1] + 3*f[2]*a[1]*a[2] + f[1]*a[3],
	}
}
