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
			s = real(n * widen(c.b[0]))
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
	var v [16]complex128
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
	var squares complex128
	for i := range v {
		y := lo + (hi-lo)*(float64(i)+0.5)/16
		v[i] = widen(q.psi(y, o.total, p.odd))
		squares += v[i] * v[i]
	}
	foot := widen(q.foot)
	turn := complex(1, 0)
	if imag(squares) != 0 {
		turn = 1 / cmplx.Sqrt(squares)
	}
	if real(turn*foot) < 0 {
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

// psi is the field at y over 1/k, from the lowest film's lower face.
func (q *line[T]) psi(y, total float64, odd bool) T {
	if q.mirror && y > total/2 {
		v := q.psi(total-y, total, odd)
		if odd {
			return -v
		}
		return v
	}
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
			y = f.d - y
		}
		return q.faces[i].at(y, q.z[i][0], f.d)
	}
	return q.edges[1] * exp(-q.rates[1]*num[T](y))
}
