package section

import (
	"math"

	"betaloom/solvers/jet"
)

// Length is a number of the geometry with its derivatives in the base
// parameters, per SI unit. P is nil where it depends on none.
type Length struct {
	V float64
	P []float64
}

// fromJet takes the real parts; a dimension has no others.
func fromJet(j jet.Jet) Length {
	l := Length{V: real(j.V)}
	for i, p := range j.P {
		if p != 0 {
			if l.P == nil {
				l.P = make([]float64, len(j.P))
			}
			l.P[i] = real(p)
		}
	}
	return l
}

func (a Length) jet() jet.Jet {
	j := jet.Jet{V: complex(a.V, 0)}
	if a.P != nil {
		j.P = make([]complex128, len(a.P))
		for i, p := range a.P {
			j.P[i] = complex(p, 0)
		}
	}
	return j
}

// at is the derivative in parameter p.
func (a Length) at(p int) float64 {
	if a.P == nil {
		return 0
	}
	return a.P[p]
}

// join is u a + v b, with value set apart so that it is rounded once.
func join(value float64, u float64, a Length, v float64, b Length) Length {
	n := max(len(a.P), len(b.P))
	if n == 0 {
		return Length{V: value}
	}
	p := make([]float64, n)
	for i := range p {
		p[i] = u*a.at(i) + v*b.at(i)
	}
	return Length{V: value, P: p}
}

func (a Length) plus(b Length) Length  { return join(a.V+b.V, 1, a, 1, b) }
func (a Length) minus(b Length) Length { return join(a.V-b.V, 1, a, -1, b) }
func (a Length) times(b Length) Length { return join(a.V*b.V, b.V, a, a.V, b) }

func (a Length) over(b Length) Length {
	q := a.V / b.V
	return join(q, 1/b.V, a, -q/b.V, b)
}

func (a Length) scaled(c float64) Length { return join(c*a.V, c, a, 0, a) }

// shifted keeps the derivatives.
func (a Length) shifted(d float64) Length { return Length{V: a.V + d, P: a.P} }

// mean is (a + b)/2.
func mean(a, b Length) Length { return join(a.V+(b.V-a.V)/2, 0.5, a, 0.5, b) }

// lerp is a at t = 0 and b at t = 1, exactly so.
func lerp(a, b, t float64) float64 {
	if t > 0.5 {
		return b - (1-t)*(b-a)
	}
	return a + t*(b-a)
}

// averaged gives a the mean derivatives of a and s b: s = -1 for lengths
// that a mirror turns round.
func averaged(a, b Length, s float64) Length { return join(a.V, 0.5, a, 0.5*s, b) }

// lean is the cotangent of a wall's angle: exactly zero within a few
// roundings of a right angle.
func lean(angle Length) Length {
	off := math.Pi/2 - angle.V
	if math.Abs(off) <= 4*epsilon {
		off = 0
	}
	t := math.Tan(off)
	return join(t, -(1 + t*t), angle, 0, angle)
}

const epsilon = 0x1p-52

func finite(all ...Length) bool {
	rest := 0.0
	for _, l := range all {
		rest += l.V - l.V
		for _, p := range l.P {
			rest += p - p
		}
	}
	return rest == 0
}
