package slab

import (
	"math"
	"math/cmplx"

	"betaloom/solvers"
)

// shape writes what the axial power says: its share in each layer and the width
// (int S)^2 / int S^2, with S = Re(weight) |psi|^2, weight 1 or n/eps_y.
func shape[T scalar](o *output, q *line[T], n complex128, m *solvers.Mode) {
	var one, two float64
	put := func(layer, twin int, c *coefs[T], i2, i4 float64) {
		s := 1.0
		if q.tm {
			s = real(n * widen(c.b.a))
		}
		one += s * i2
		two += s * s * i4
		if twin >= 0 {
			i2 /= 2
			m.Confinement[twin] += s * i2
		}
		m.Confinement[layer] += s * i2
	}
	for i := range q.films {
		f := &q.films[i]
		i2, i4 := q.moments(i)
		put(f.layer, f.twin, &f.live, i2, i4)
	}
	for i := range q.ends {
		if e := &q.ends[i]; e.closure == open {
			g := 2 * re(q.rates[i])
			v := modulus(q.edges[i])
			put(e.layer, e.twin, &e.live, v*v/g, v*v*v*v/(2*g))
		}
	}
	for i := range m.Confinement {
		m.Confinement[i] /= one
	}
	m.Weff = one * one / (two * o.k)
	if q.mirror {
		m.Weff *= 2
	}
	if !(m.Weff > 0) || math.IsInf(m.Weff, 0) { // beyond the range of numbers
		m.Weff = math.NaN()
	}
}

// sampled is how much of the films' extent a signature shows beyond each
// open face.
const sampled = 0.25

// sample writes the signature: psi at sixteen places, evenly spread over
// the films' extent and a quarter of it more on each open side (over one reduced wavelength
// where there is no film), in units that make the sum of squares one.
// psi is positive at the lowest end, where it has no node; a lossy mode is
// first turned in phase until the sum of psi^2 is real and positive.
func sample[T scalar](o *output, q *line[T], p *pick, m *solvers.Mode) {
	v := places(o, q, p.odd)
	var squares complex128
	for i := range v {
		squares += v[i] * v[i]
	}
	turn := complex(1, 0)
	if imag(squares) != 0 {
		turn = 1 / cmplx.Sqrt(squares)
	}
	if real(turn*widen(q.foot)) < 0 {
		turn = -turn
	}
	norm := 0.0
	for i := range v {
		v[i] *= turn
		norm += real(v[i]) * real(v[i])
	}
	norm = 1 / math.Sqrt(norm)
	for i := range v {
		m.Signature[i] = float32(real(v[i]) * norm)
	}
}

// places gives psi at the places of a signature.
func places[T scalar](o *output, q *line[T], odd bool) (v [16]complex128) {
	total := o.total
	if total == 0 {
		total = 1
	}
	lo, hi := 0.0, total
	if !o.stack.GroundBottom {
		lo -= sampled * total
	}
	if !o.stack.GroundTop {
		hi += sampled * total
	}
	step, n := (hi-lo)/16, len(v)
	if q.mirror {
		n /= 2
	}
	q.swing.film = -1
	for i := range n {
		v[i] = widen(q.psi(lo+step*(float64(i)+0.5), step))
	}
	for i := n; i < len(v); i++ {
		v[i] = v[len(v)-1-i]
		if odd {
			v[i] = -v[i]
		}
	}
	return v
}

// psi is the field at y over 1/k, from the lowest film's lower face. It is asked
// for in steps upward.
func (q *line[T]) psi(y, step float64) T {
	y -= q.origin
	if y < 0 {
		return q.edges[0] * exp(q.rates[0]*num[T](y))
	}
	for i := range q.films {
		f := &q.films[i]
		if y > f.d && (i+1 < len(q.films) || q.ends[1].closure == open) {
			y -= f.d
			continue
		}
		if i >= q.meets {
			y, step = f.d-y, -step
		}
		if z := q.z[i].a; rough(z) > 1.5 && !evanescent(z) {
			return q.swing.at(i, &q.faces[i], sqrt(z)/f.h, num[T](y), num[T](step))
		}
		return q.faces[i].at(y, q.z[i].a, f.d)
	}
	return q.edges[1] * exp(-q.rates[1]*num[T](y))
}

// swing is the phase of a standing wave in a film, turned by equal steps.
type swing[T scalar] struct {
	film             int
	sin, cos         T
	stepSin, stepCos T
}

// at is psi at the distance y from the face that was entered, for a wave number k.
func (w *swing[T]) at(film int, f *face[T], k, y, step T) T {
	if w.film != film {
		w.film = film
		w.sin, w.cos = sincos(k * y)
		w.stepSin, w.stepCos = sincos(k * step)
	} else {
		w.sin, w.cos = w.sin*w.stepCos+w.cos*w.stepSin, w.cos*w.stepCos-w.sin*w.stepSin
	}
	return f.psi*w.cos + f.rise/k*w.sin
}
