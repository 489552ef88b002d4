package material

import (
	"math"

	"betaloom/schema"
	"betaloom/solvers/jet"
)

// point is where a material is asked for.
type point struct {
	w      float64 // rad/s
	of     Numbers
	params int
}

// wavelength is in m.
func (p point) wavelength() float64 { return 2 * math.Pi * schema.LightSpeed / p.w }

// number is the jet of a number at the point.
func (p point) number(n schema.Number, what string) (jet.Jet, *fault) {
	if n.Parameter == "" {
		return jet.Const(complex(n.Value, 0)), nil
	}
	var j *jet.Jet
	if p.of != nil {
		j = p.of(n)
	}
	if j == nil {
		return jet.Jet{}, &fault{what + ": no value of parameter " + n.Parameter, "one"}
	}
	if v := real(j.V); math.IsNaN(v) || math.IsInf(v, 0) {
		return jet.Jet{}, found(what, v, "a finite number")
	}
	return *j, nil
}

// source is where the index of a material comes from before it is shifted.
type source interface {
	// set makes z the index n - jk at p or, where the source is squared, the
	// permittivity. z is a zero with room for the parameters.
	set(z *jet.Jet, p point) *fault
	squared() bool
}

// constant is an index given as a number.
type constant struct{ n schema.Number }

func (constant) squared() bool { return false }

func (s constant) set(z *jet.Jet, p point) *fault {
	n, f := p.number(s.n, "index")
	if f != nil {
		return f
	}
	z.Accumulate(1, &n)
	return nil
}

// dielectric is a permittivity eps (1 - j tan d).
type dielectric struct{ eps, tangent schema.Number }

func (dielectric) squared() bool { return true }

func (s dielectric) set(z *jet.Jet, p point) *fault {
	eps, f := p.number(s.eps, "permittivity")
	if f != nil {
		return f
	}
	tangent, f := p.number(s.tangent, "loss_tangent")
	if f != nil {
		return f
	}
	z.Accumulate(1, &eps)
	z.AccumulateProduct(-1i, &eps, &tangent)
	return nil
}

// series is a Sellmeier formula of numbers that may be parameters. With
// x = 1/L^2 a term is b/(1 - c^2 x), which has no singularity but its pole.
type series struct {
	constant schema.Number
	terms    [][2]schema.Number
}

func (series) squared() bool { return true }

func (s series) set(z *jet.Jet, p point) *fault {
	a, f := p.number(s.constant, "sellmeier: constant")
	if f != nil {
		return f
	}
	z.Accumulate(1, &a)
	for _, t := range s.terms {
		b, f := p.number(t[0], "sellmeier: b")
		if f != nil {
			return f
		}
		c, f := p.number(t[1], "sellmeier: c")
		if f != nil {
			return f
		}
		addTerm(z, &b, &c, inverseSquare(p.w))
	}
	return nil
}

// addTerm adds the term b/(1 - c^2 x). Its derivatives by b and c are
// t = 1/(1 - c^2 x) and 2 b c x t^2.
func addTerm(z, b, c *jet.Jet, x jet.Jet) {
	bare := jet.Jet{V: c.V, W: c.W, WW: c.WW, WWW: c.WWW}
	cx := jet.Mul(bare, x)
	t := jet.Div(jet.Const(1), jet.Sub(jet.Const(1), jet.Mul(bare, cx)))
	z.AccumulateProduct(1, b, &t)
	bareB := jet.Jet{V: b.V, W: b.W, WW: b.WW, WWW: b.WWW}
	by := jet.Scale(jet.Mul(jet.Mul(bareB, cx), jet.Mul(t, t)), 2)
	z.Depend(by.V, by.W, c)
}

// inverseSquare is x = 1/L^2 in 1/um^2, L being the wavelength at w.
func inverseSquare(w float64) jet.Jet {
	s := 1 / (2 * math.Pi * schema.LightSpeed * metre)
	k := s * s
	return jet.Jet{V: complex(k*w*w, 0), W: complex(2*k*w, 0), WW: complex(2*k, 0)}
}

// metre is a metre in micrometres, the unit of published formulas.
const metre = 1e6
