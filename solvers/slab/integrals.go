package slab

// share is what one medium contributes: the integrals of psi^2 and phi^2 and,
// for a film, the invariant phi^2/p + b(e-N) psi^2, as series to first
// order along the way. All carry the same factor (see weigh).
type share[T scalar] struct{ psi, phi, energy series[T] }

// gather computes the shares of films and ends from the states that expand
// left, and the norm, the sum of b psi^2.
func (q *line[T]) gather(m int, films []share[T], ends *[2]share[T]) (norm series[T]) {
	v := q.rise(&q.u, true, 1)
	amp := constant(T(1))
	for i := m - 1; i >= 0; i-- {
		out := amp
		amp = mul(&amp, &q.factor[i], 1)
		films[i] = q.film(i, &q.states[0][i], &amp, &q.states[0][i+1], &out, &v)
	}
	ends[0] = q.tail(0, &q.states[0][0], &amp)
	q.foot = amp[0]
	amp = q.joint(m)
	last := len(q.films)
	for i := m; i < last; i++ {
		out := amp
		amp = mul(&amp, &q.factor[i], 1)
		films[i] = q.film(i, &q.states[1][i+1], &amp, &q.states[1][i], &out, &v)
	}
	ends[1] = q.tail(1, &q.states[1][last], &amp)
	for i := range films {
		q.weigh(&films[i])
		c := mul(&q.films[i].live.b, &films[i].psi, 1)
		norm = add(&norm, &c)
	}
	for i := range ends {
		c := mul(&q.ends[i].live.b, &ends[i].psi, 1)
		norm = add(&norm, &c)
	}
	return norm
}

// joint is the factor that makes the upper side continue the lower one.
func (q *line[T]) joint(m int) series[T] {
	a, b := &q.states[0][m], &q.states[1][m]
	x, y := a.psi, b.psi
	if modulus(b.phi[0]) > modulus(b.psi[0]) {
		x, y = scale(&a.phi, -1), b.phi
	}
	r := inverse(&y, 1)
	return mul(&x, &r, 1)
}

// weigh multiplies by u where u is a decay constant: a tail then has a finite
// share at cut-off, and nothing cancels in its derivative.
func (q *line[T]) weigh(s *share[T]) {
	if !q.branch {
		return
	}
	s.psi, s.phi, s.energy = mul(&q.u, &s.psi, 1), mul(&q.u, &s.phi, 1), mul(&q.u, &s.energy, 1)
}

// tail is the share of a half-space, psi^2/2g, weighed.
func (q *line[T]) tail(i int, s *state[T], amp *series[T]) share[T] {
	e := &q.ends[i]
	if e.closure != open {
		q.edges[i], q.rates[i] = 0, 0
		return share[T]{}
	}
	q.edges[i], q.rates[i] = amp[0]*s.psi[0], q.u[0]
	w := constant(num[T](0.5)) // u/2g
	switch {
	case e.level:
		k := q.likeness(e, true, 1)
		q.rates[i] *= k[0]
		k = inverse(&k, 1)
		w = scale(&k, 0.5)
	case !e.cut:
		g := q.decay(e, &q.u, true, 1)
		q.rates[i] = g[0]
		g = inverse(&g, 1)
		w = scale(&g, 0.5)
		if q.branch {
			w = mul(&q.u, &w, 1)
		}
	}
	w = mul(&w, amp, 1)
	w = mul(&w, amp, 1)
	psi, phi := mul(&s.psi, &s.psi, 1), mul(&s.phi, &s.phi, 1)
	return share[T]{psi: mul(&w, &psi, 1), phi: mul(&w, &phi, 1)}
}

// film is the share of film i whose state is in where it was entered and out
// where it was left, before weighing.
func (q *line[T]) film(i int, in *state[T], ain *series[T], out *state[T], aout, v *series[T]) share[T] {
	f := &q.films[i]
	g := sub(&f.live.gap, v)
	g = mul(&f.live.b, &g, 1)
	h := series[T]{num[T](f.d), num[T](f.d)}
	psi, phi := mul(ain, &in.psi, 1), mul(ain, &in.phi, 1)
	q.faces[i] = face[T]{psi: psi[0], rise: f.live.inv[0] * phi[0], end: aout[0] * out.psi[0]}
	if evanescent(q.z[i][0]) {
		end := mul(aout, &out.psi, 1)
		return thick(&f.live.inv, &q.z[i], &h, &psi, &end)
	}
	return thin(&f.live.inv, &g, &q.z[i], &h, &psi, &phi)
}

// evanescent reports whether a film of that z is treated as two decaying
// waves, one from each face.
func evanescent[T scalar](z T) bool {
	switch v := any(z).(type) {
	case float64:
		return v <= -smallArgument
	case complex128:
		y := imag(csqrt(v))
		return y*y >= smallArgument
	}
	return false
}

// thin integrates from the state on one face, with entire functions:
// int psi^2 = h [psi^2 (1 + cs)/2 + psi' psi h s^2 + psi'^2 h^2 (s^2 - c f)/2],
// f = j_1(x)/x, and the same for phi, which obeys the dual equation.
func thin[T scalar](inv, g, z, h, psi, phi *series[T]) (r share[T]) {
	fn, factor := entire(z[0])
	for i := range fn {
		fn[i] *= num[T](1 / factor)
	}
	d := z[1]
	c, s := series[T]{fn[0], -fn[1] / 2 * d}, series[T]{fn[1], -fn[2] / 2 * d}
	j := series[T]{fn[2], -fn[3] / 2 * d}
	cs, ss, cj := mul(&c, &s, 1), mul(&s, &s, 1), mul(&c, &j, 1)
	even := scale(&cs, 0.5)
	even[0] += 0.5
	odd := sub(&ss, &cj)
	odd = scale(&odd, 0.5)
	even, ss = mul(h, &even, 1), mul(h, &ss, 1)
	odd = mul(h, &odd, 1)
	up, down := mul(inv, phi, 1), mul(g, psi, 1) // psi' and -phi'
	x, y := mul(&up, phi, 1), mul(&down, psi, 1)
	r.energy = add(&x, &y)
	up, down = mul(&up, h, 1), mul(&down, h, 1)
	down = scale(&down, -1)
	r.psi = quadratic(psi, &up, &even, &ss, &odd)
	r.phi = quadratic(phi, &down, &even, &ss, &odd)
	return r
}

// quadratic is a^2 even + a b mixed + b^2 odd.
func quadratic[T scalar](a, b, even, mixed, odd *series[T]) series[T] {
	aa, ab, bb := mul(a, a, 1), mul(a, b, 1), mul(b, b, 1)
	x, y, z := mul(&aa, even, 1), mul(&ab, mixed, 1), mul(&bb, odd, 1)
	x = add(&x, &y)
	return add(&x, &z)
}

// thick integrates psi = A exp(-k y) + B exp(-k (h - y)) from the values of
// psi on both faces.
func thick[T scalar](inv, z, h, psi, end *series[T]) (r share[T]) {
	minus := scale(z, -1)
	x := root(&minus, 1) // k h
	e0 := exp(-x[0])
	e := series[T]{e0, -x[1] * e0}
	ee := mul(&e, &e, 1)
	gap := series[T]{1 - ee[0], -ee[1]}
	over := inverse(&gap, 1)
	a, b := mul(end, &e, 1), mul(psi, &e, 1)
	a, b = sub(psi, &a), sub(end, &b)
	a, b = mul(&a, &over, 1), mul(&b, &over, 1)
	aa, bb, ab := mul(&a, &a, 1), mul(&b, &b, 1), mul(&a, &b, 1)
	ix := inverse(&x, 1)
	own := add(&aa, &bb)
	own = mul(&own, &gap, 1)
	own = mul(&own, &ix, 1)
	own = scale(&own, 0.5)
	mixed := mul(&ab, &e, 1)
	mixed = scale(&mixed, 2)
	sum, diff := add(&own, &mixed), sub(&own, &mixed)
	r.psi = mul(&sum, h, 1)
	ih, ip := inverse(h, 1), inverse(inv, 1)
	k := mul(&x, &ih, 1)
	k = mul(&k, &ip, 1) // p k
	kk := mul(&k, &k, 1)
	r.phi = mul(&kk, &diff, 1)
	r.phi = mul(&r.phi, h, 1)
	r.energy = mul(&kk, &mixed, 1)
	r.energy = mul(&r.energy, inv, 1)
	r.energy = scale(&r.energy, -2)
	return r
}
