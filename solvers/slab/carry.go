package slab

// decay is the decay constant over k of a half-space along the way: u itself where that
// is the unknown, and proportional to it where the two half-spaces are alike.
func (q *line[T]) decay(e *side[T], c *coefs[T], v series[T]) series[T] {
	if e.cut {
		return q.u
	}
	if e.level {
		return mul(q.u, q.likeness(c))
	}
	v = sub(v, c.gap)
	if q.tm {
		v = mul(mul(c.inv, c.b), v)
	}
	return root(v)
}

// likeness is decay over u for a half-space that is level with the cut-off.
func (q *line[T]) likeness(c *coefs[T]) series[T] {
	if !q.tm {
		return constant(T(1))
	}
	sigma := q.sigma
	if q.still {
		sigma = constant(sigma.a)
	}
	return root(mul(mul(c.inv, c.b), sigma))
}

// start sets the state at an end of the line.
func (q *line[T]) start(e *side[T], v series[T], s *state[T]) {
	switch e.closure {
	case psiZero:
		*s = state[T]{phi: constant(T(1))}
		return
	case fluxZero:
		*s = state[T]{psi: constant(T(1))}
		return
	}
	c := &e.live
	if q.still {
		frozen := c.freeze()
		c = &frozen
	}
	g := q.decay(e, c, v)
	if q.tm {
		g = mul(g, inverse(c.inv))
	}
	*s = state[T]{psi: constant(T(1)), phi: g}
}

// carry computes the states at the interfaces up to m from below and down to
// m from above: of the point as it moves with frequency, or where still is
// set, in u alone (so that a u of {u0, 1} gives derivatives in
// u). Interface i lies below film i. What they are
// scaled by is kept in factor.
func (q *line[T]) carry(m int) {
	last := len(q.films)
	v := q.rise(q.u)
	q.start(&q.ends[0], v, &q.states[0][0])
	q.start(&q.ends[1], v, &q.states[1][last])
	for i := range m {
		q.cross(i, &q.states[0][i], &q.states[0][i+1], v)
	}
	for i := last - 1; i >= m; i-- {
		q.cross(i, &q.states[1][i+1], &q.states[1][i], v)
	}
}

// cross carries a state through film i; by symmetry it serves both ways.
func (q *line[T]) cross(i int, in, out *state[T], v series[T]) {
	f := &q.films[i]
	c, dh := &f.live, f.h
	if q.still {
		frozen := c.freeze()
		c, dh = &frozen, 0
	}
	g := sub(c.gap, v) // e - N
	z := mul(series[T]{f.h * f.h, 2 * f.h * dh, dh * dh, 0}, g)
	if q.tm {
		z, g = mul(mul(c.inv, c.b), z), mul(c.b, g)
	}
	q.z[i] = z.first()
	wall := evanescent(z.a)
	if q.evened && wall {
		q.tunnel(i, in, out, z, mul(c.inv, series[T]{a: f.h, b: dh}))
		return
	}
	var cos, sinc series[T]
	if wall {
		cos, sinc, q.factor[i] = waves(z)
	} else {
		t := q.trig(i, z.a)
		q.factor[i] = linear[T]{a: t.factor}
		cos, sinc = compose(&t.f, z)
	}
	s := mul(series[T]{a: f.h, b: dh}, sinc)
	r := mul(g, s)
	if q.tm {
		s = mul(c.inv, s)
	}
	out.psi = add(mul(cos, in.psi), mul(s, in.phi))
	out.phi = sub(mul(cos, in.phi), mul(r, in.psi))
	if q.evened {
		q.even(i, out)
	} else {
		q.tame(i, out)
	}
}

// tunnel carries a state through a film of several decay lengths as two waves,
// a growing and a decaying one, of ratio r: what does not get through is lost
// without loss of digits. admit is the film's h/p.
func (q *line[T]) tunnel(i int, in, out *state[T], z, admit series[T]) {
	x := root(scale(z, -1))
	e := power(scale(x, -1))
	over := mul(admit, inverse(x)) // 1/p k
	y := mul(over, in.phi)
	grow, fall := scale(add(in.psi, y), 0.5), scale(sub(in.psi, y), 0.5)
	fall = mul(mul(fall, e), e)
	sign := T(1)
	if modulus(fall.a) > modulus(grow.a) {
		grow, fall, sign = fall, grow, -1
	}
	by := inverse(grow)
	r := mul(fall, by)
	q.factor[i] = mul(e, by).first()
	out.psi, out.phi = r, scale(r, -1)
	out.psi.a += 1
	out.phi.a += 1
	out.phi = mul(scale(inverse(over), sign), out.phi)
}

// even divides a state by the larger of its parts, as that moves. What the
// films on the way do to the size of both then costs no digits in the derivatives, however
// sharply it depends on N near a resonance of a far film.
func (q *line[T]) even(i int, s *state[T]) {
	var r series[T]
	if modulus(s.psi.a) >= modulus(s.phi.a) {
		r = inverse(s.psi)
		s.psi, s.phi = constant(T(1)), mul(s.phi, r)
	} else {
		r = inverse(s.phi)
		s.phi, s.psi = constant(T(1)), mul(s.psi, r)
	}
	q.factor[i] = q.factor[i].times(r.first())
}

// tame keeps states within the range of floating point.
func (q *line[T]) tame(i int, s *state[T]) {
	size := rough(s.psi.a) + rough(s.phi.a)
	if size > 1e-60 && size < 1e60 || size == 0 {
		return
	}
	k := num[T](1 / size)
	q.factor[i] = q.factor[i].by(k)
	s.psi, s.phi = scale(s.psi, k), scale(s.phi, k)
}

// compose gives the series of cos x and sin x / x from those of z = x^2.
func compose[T scalar](f *[5]T, z series[T]) (c, s series[T]) {
	d := z.b
	dd := d * d
	c1, s1 := -0.5*f[1], -0.5*f[2]
	c2, s2 := 0.125*f[2], 0.125*f[3]
	c3, s3 := -f[3]*(1.0/48), -f[4]*(1.0/48)
	two := 2 * d * z.c
	c = series[T]{f[0], c1 * d, c1*z.c + c2*dd, c1*z.d + c2*two + c3*dd*d}
	s = series[T]{f[1], s1 * d, s1*z.c + s2*dd, s1*z.d + s2*two + s3*dd*d}
	return c, s
}

// waves gives cosh x and sinh x / x, x^2 = -z, both times exp(-x): with
// that factor taken out as it moves, a film of many decay lengths costs no digits in
// the derivatives.
func waves[T scalar](z series[T]) (c, s series[T], factor linear[T]) {
	x := root(scale(z, -1))
	e := power(scale(x, -1))
	ee := mul(e, e)
	c, s = scale(ee, 0.5), scale(ee, -0.5)
	c.a += 0.5
	s.a += 0.5
	return c, mul(s, inverse(x)), e.first()
}

// mismatch is zero at a mode: how far the states miss each other at
// interface m.
func (q *line[T]) mismatch(m int) series[T] {
	a, b := &q.states[0][m], &q.states[1][m]
	return add(mul(a.psi, b.phi), mul(a.phi, b.psi))
}
