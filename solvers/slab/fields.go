package slab

import (
	"fmt"
	"math"

	"betaloom/solvers"
)

// Fields is a mode's fields at a list of heights, for the mode's power as it comes. The time
// factor is exp(j(wt - bz)) and mu0 is 4 pi 1e-7 H/m.
type Fields struct {
	E     [3][]complex128 // along x, y and z at each height, V/m
	H     [3][]complex128 // A/m
	Power float64         // axial, W per metre of width
}

// vacuum is mu0 c, the impedance in ohm that E and H of vacuum have.
const vacuum = 4e-7 * math.Pi * lightSpeed

// Fields evaluates the fields of mode i of the last Solve, whose stack must be as it was, at heights y above the lowest
// interface or ground, in metres. A height on an interface belongs to the layer below; in
// a ground there is no field. The error is an *solvers.InputError for a mode that Solve did not give.
func (s *Solver) Fields(i int, y []float64) (*Fields, error) {
	if i < 0 || i >= len(s.picks) {
		return nil, &solvers.InputError{Where: "slab", Found: fmt.Sprintf("mode %d", i), Expected: fmt.Sprintf("one of the %d solved last", len(s.picks))}
	}
	p := &s.picks[i]
	if lossless(s.out.stack) {
		return fieldsOf(&s.out, &s.real.lines[index(p.tm)], p, y), nil
	}
	return fieldsOf(&s.out, &s.loss.lines[index(p.tm)], p, y), nil
}

func fieldsOf[T scalar](o *output, q *line[T], p *pick, y []float64) *Fields {
	q.turn(index(p.odd))
	derive(q, p)
	defer release(q, p)
	n := widen(root(q.square()).a)
	f := &Fields{Power: axial(o, q, n)}
	for c := range f.E {
		f.E[c], f.H[c] = make([]complex128, len(y)), make([]complex128, len(y))
	}
	for i, v := range y {
		eps, ok := o.medium(v)
		if !ok {
			continue
		}
		psi, phi := q.wave(o.k*v, o.total, p.odd)
		if q.tm { // Hx, and E from curl H = j w eps E
			f.H[0][i] = psi
			f.E[1][i], f.E[2][i] = -n*vacuum*psi/eps, 1i*vacuum*phi
		} else { // Ex, and H from curl E = -j w mu H
			f.E[0][i] = psi
			f.H[1][i], f.H[2][i] = n*psi/vacuum, -1i*phi/vacuum
		}
	}
	return f
}

// medium is the permittivity along y of the layer at a height; there is none in a ground.
func (o *output) medium(y float64) (complex128, bool) {
	s := o.stack
	last := len(s.Layers) - 1
	if s.GroundBottom && y < 0 {
		return 0, false
	}
	top := 0.0
	for i := range s.Layers {
		if l := &s.Layers[i]; !l.HalfSpace {
			top += real(l.Thickness.V)
		}
		if y <= top || i == last && !s.GroundTop {
			return s.Layers[i].Eps[1].V, true
		}
	}
	return 0, false
}

// wave is psi and phi at y over 1/k from the lowest film's lower face, of a stack whose films are total
// high; the upper half of a mirrored one is the image of the lower.
func (q *line[T]) wave(y, total float64, odd bool) (psi, phi complex128) {
	if q.mirror && y > total/2 {
		psi, phi = q.wave(total-y, total, odd)
		if odd {
			return -psi, phi
		}
		return psi, -phi
	}
	y -= q.origin
	if y < 0 {
		return q.beyond(0, -y, 1)
	}
	for i := range q.films {
		f := &q.films[i]
		if y > f.d && (i+1 < len(q.films) || q.ends[1].closure == open) {
			y -= f.d
			continue
		}
		sign := 1.0
		if i >= q.meets {
			y, sign = f.d-y, -1
		}
		v, rise := q.faces[i].slope(y, q.z[i].a, f.d)
		return widen(v), widen(rise/f.live.inv.a) * complex(sign, 0)
	}
	return q.beyond(1, y, -1)
}

// beyond is psi and phi at a distance from the films in a half-space.
func (q *line[T]) beyond(end int, away, sign float64) (psi, phi complex128) {
	e := &q.ends[end]
	if e.closure != open {
		return 0, 0
	}
	v := q.edges[end] * exp(-q.rates[end]*num[T](away))
	return widen(v), widen(q.rates[end]*v/e.live.inv.a) * complex(sign, 0)
}

// slope is psi and psi' at the distance y from the face that was entered.
func (f *face[T]) slope(y float64, z T, d float64) (psi, rise T) {
	if d == 0 {
		return f.psi, f.rise
	}
	r := y / d
	if !evanescent(z) {
		fn, factor := entire(z * num[T](r*r))
		bend := z * num[T](r/d) // k^2 y
		return (f.psi*fn[0] + f.rise*num[T](y)*fn[1]) * num[T](1/factor), (f.rise*fn[0] - f.psi*bend*fn[1]) * num[T](1/factor)
	}
	x := sqrt(-z)
	e := exp(-x)
	a, b := (f.psi-f.end*e)/(1-e*e)*exp(-x*num[T](r)), (f.end-f.psi*e)/(1-e*e)*exp(-x*num[T](1-r))
	return a + b, (b - a) * x * num[T](1/d)
}

// axial is the axial power of psi, W per metre of width.
func axial[T scalar](o *output, q *line[T], n complex128) float64 {
	sum := 0.0
	add := func(c *coefs[T], i2 float64) {
		if q.tm {
			sum += vacuum * real(n*widen(c.b.a)) * i2
		} else {
			sum += real(n) / vacuum * i2
		}
	}
	for i := range q.films {
		i2, _ := q.moments(i)
		add(&q.films[i].live, i2)
	}
	for i := range q.ends {
		if e := &q.ends[i]; e.closure == open {
			v := modulus(q.edges[i])
			add(&e.live, v*v/(2*re(q.rates[i])))
		}
	}
	if q.mirror {
		sum *= 2
	}
	return sum / (2 * o.k)
}
