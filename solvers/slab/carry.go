package slab

// decay is the decay constant over k of a half-space: u itself where that
// is the unknown, and proportional to it where the two half-spaces are alike.
func (q *line[T]) decay(e *side[T], u *series[T], live bool, n int) series[T] {
	if e.cut {
		return *u
	}
	c := e.pick(live)
	v := q.rise(u, live, n)
	v = sub(&v, &c.gap)
	if q.tm {
		a := mul(&c.inv, &c.b, n)
		v = mul(&a, &v, n)
	}
	if !e.level {
		return root(&v, n)
	}
	k := q.likeness(e, live, n)
	return mul(u, &k, n)
}

// likeness is decay over u for a half-space that is level with the cut-off.
func (q *line[T]) likeness(e *side[T], live bool, n int) series[T] {
	if !q.tm {
		return constant(T(1))
	}
	c := e.pick(live)
	a := mul(&c.inv, &c.b, n)
	if live {
		a = mul(&a, &q.sigma, n)
	} else {
		a = scale(&a, q.sigma[0])
	}
	return root(&a, n)
}

func (e *side[T]) pick(live bool) *coefs[T] {
	if live {
		return &e.live
	}
	return &e.still
}

// start sets the state at an end of the line.
func (q *line[T]) start(e *side[T], u *series[T], live bool, n int) state[T] {
	one := constant(T(1))
	switch e.closure {
	case psiZero:
		return state[T]{phi: one}
	case fluxZero:
		return state[T]{psi: one}
	}
	g := q.decay(e, u, live, n)
	if q.tm {
		p := e.pick(live).inv
		p = inverse(&p, n)
		g = mul(&g, &p, n)
	}
	return state[T]{psi: one, phi: g}
}

// carry computes the states at the interfaces up to m from below and down to
// m from above, to order n: of the point as it moves with frequency where
// live is set, else in u alone (so that a u of {u0, 1} gives derivatives in
// u). Interface i lies below film i. What they are
// scaled by is kept in factor.
func (q *line[T]) carry(u *series[T], live bool, n, m int) {
	last := len(q.films)
	v := q.rise(u, live, n)
	q.states[0][0] = q.start(&q.ends[0], u, live, n)
	q.states[1][last] = q.start(&q.ends[1], u, live, n)
	for i := range m {
		q.cross(i, &q.states[0][i], &q.states[0][i+1], &v, live, n)
	}
	for i := last - 1; i >= m; i-- {
		q.cross(i, &q.states[1][i+1], &q.states[1][i], &v, live, n)
	}
}

// cross carries a state through film i; by symmetry it serves both ways.
func (q *line[T]) cross(i int, in, out *state[T], v *series[T], live bool, n int) {
	f := &q.films[i]
	c, h := &f.still, series[T]{num[T](f.d)}
	if live {
		c, h[1] = &f.live, num[T](f.d)
	}
	g := sub(&c.gap, v) // e - N
	hh := mul(&h, &h, n)
	z := mul(&g, &hh, n)
	if q.tm {
		a := mul(&c.inv, &c.b, n)
		z = mul(&a, &z, n)
		g = mul(&c.b, &g, n)
	}
	q.z[i] = z
	if q.evened && evanescent(z[0]) {
		q.tunnel(i, in, out, &z, &h, &c.inv, n)
		return
	}
	var cos, sinc series[T]
	if !q.steady && evanescent(z[0]) {
		cos, sinc, q.factor[i] = waves(&z, n)
	} else {
		fn, factor := entire(z[0])
		q.factor[i] = constant(num[T](factor))
		cos, sinc = compose(&fn, &z, n)
	}
	s := mul(&h, &sinc, n)
	r := mul(&g, &s, n)
	if q.tm {
		s = mul(&c.inv, &s, n)
	}
	a, b := mul(&cos, &in.psi, n), mul(&s, &in.phi, n)
	out.psi = add(&a, &b)
	a, b = mul(&cos, &in.phi, n), mul(&r, &in.psi, n)
	out.phi = sub(&a, &b)
	if q.evened {
		q.even(i, out, n)
	} else {
		q.tame(i, out)
	}
}

// tunnel carries a state through a film of several decay lengths as two waves,
// a growing and a decaying one, of ratio r: what does not get through is lost
// without loss of digits.
func (q *line[T]) tunnel(i int, in, out *state[T], z, h, inv *series[T], n int) {
	minus := scale(z, -1)
	x := root(&minus, n)
	minus = scale(&x, -1)
	e := power(&minus, n)
	admit, ix := mul(inv, h, n), inverse(&x, n)
	over := mul(&admit, &ix, n) // 1/p k
	y := mul(&over, &in.phi, n)
	grow, fall := add(&in.psi, &y), sub(&in.psi, &y)
	grow, fall = scale(&grow, 0.5), scale(&fall, 0.5)
	fall = mul(&fall, &e, n)
	fall = mul(&fall, &e, n)
	sign := T(1)
	if modulus(fall[0]) > modulus(grow[0]) {
		grow, fall, sign = fall, grow, -1
	}
	by := inverse(&grow, n)
	r := mul(&fall, &by, n)
	q.factor[i] = mul(&e, &by, n)
	out.psi, out.phi = r, scale(&r, -1)
	out.psi[0] += 1
	out.phi[0] += 1
	over = inverse(&over, n)
	over = scale(&over, sign)
	out.phi = mul(&over, &out.phi, n)
}

// even divides a state by the larger of its parts, as that moves. What the
// films on the way do to the size of both then costs no digits in the derivatives, however
// sharply it depends on N near a resonance of a far film.
func (q *line[T]) even(i int, s *state[T], n int) {
	if modulus(s.psi[0]) >= modulus(s.phi[0]) {
		r := inverse(&s.psi, n)
		s.psi, s.phi = constant(T(1)), mul(&s.phi, &r, n)
		q.factor[i] = mul(&q.factor[i], &r, n)
		return
	}
	r := inverse(&s.phi, n)
	s.phi, s.psi = constant(T(1)), mul(&s.psi, &r, n)
	q.factor[i] = mul(&q.factor[i], &r, n)
}

// tame keeps states within the range of floating point.
func (q *line[T]) tame(i int, s *state[T]) {
	size := modulus(s.psi[0]) + modulus(s.phi[0])
	if size > 1e-60 && size < 1e60 || size == 0 {
		return
	}
	k := num[T](1 / size)
	q.factor[i] = scale(&q.factor[i], k)
	s.psi, s.phi = scale(&s.psi, k), scale(&s.phi, k)
}

// compose gives the series of cos x and sin x / x from those of z = x^2.
func compose[T scalar](f *[5]T, z *series[T], n int) (c, s series[T]) {
	c[0], s[0] = f[0], f[1]
	if n == 0 {
		return c, s
	}
	d := z[1]
	c1, s1 := -f[1]/2, -f[2]/2
	c[1], s[1] = c1*d, s1*d
	if n == 1 {
		return c, s
	}
	c2, s2 := f[2]/8, f[3]/8
	c[2], s[2] = c1*z[2]+c2*d*d, s1*z[2]+s2*d*d
	if n == 2 {
		return c, s
	}
	c3, s3 := -f[3]/48, -f[4]/48
	c[3] = c1*z[3] + 2*c2*d*z[2] + c3*d*d*d
	s[3] = s1*z[3] + 2*s2*d*z[2] + s3*d*d*d
	return c, s
}

// waves gives cosh x and sinh x / x, x^2 = -z, both times exp(-x): with
// that factor taken out as it moves, a film of many decay lengths costs no digits in
// the derivatives.
func waves[T scalar](z *series[T], n int) (c, s, factor series[T]) {
	minus := scale(z, -1)
	x := root(&minus, n)
	minus = scale(&x, -1)
	factor = power(&minus, n)
	ee := mul(&factor, &factor, n)
	c, s = scale(&ee, 0.5), scale(&ee, -0.5)
	c[0] += 0.5
	s[0] += 0.5
	x = inverse(&x, n)
	return c, mul(&s, &x, n), factor
}

// mismatch is zero at a mode: how far the states miss each other at
// interface m.
func (q *line[T]) mismatch(m, n int) series[T] {
	a, b := &q.states[0][m], &q.states[1][m]
	x, y := mul(&a.psi, &b.phi, n), mul(&a.phi, &b.psi, n)
	return add(&x, &y)
}
