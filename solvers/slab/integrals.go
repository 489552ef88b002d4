package slab

// share is what one medium contributes: the integrals of psi^2 and phi^2 and,
// for a film, the invariant phi^2/p + b(e-N) psi^2, to first
// order along the way. All carry the same factor (see weigh).
type share[T scalar] struct{ psi, phi, energy linear[T] }

// gather computes the shares of films and ends from the states that expand
// left, and the norm, the sum of b psi^2.
func (q *line[T]) gather(m int, films []share[T], ends *[2]share[T]) (norm linear[T]) {
	v := q.rise(q.u).first()
	amp := linear[T]{a: 1}
	for i := m - 1; i >= 0; i-- {
		out := amp
		amp = amp.times(q.factor[i])
		q.film(i, &q.states[0][i], amp, &q.states[0][i+1], out, v, &films[i])
	}
	q.tail(0, &q.states[0][0], amp, &ends[0])
	q.foot = amp.a
	amp = q.joint(m)
	last := len(q.films)
	for i := m; i < last; i++ {
		out := amp
		amp = amp.times(q.factor[i])
		q.film(i, &q.states[1][i+1], amp, &q.states[1][i], out, v, &films[i])
	}
	q.tail(1, &q.states[1][last], amp, &ends[1])
	for i := range films {
		q.weigh(&films[i])
		norm = norm.plus(q.films[i].live.b.first().times(films[i].psi))
	}
	for i := range ends {
		norm = norm.plus(q.ends[i].live.b.first().times(ends[i].psi))
	}
	return norm
}

// joint is the factor that makes the upper side continue the lower one.
func (q *line[T]) joint(m int) linear[T] {
	a, b := &q.states[0][m], &q.states[1][m]
	if modulus(b.phi.a) > modulus(b.psi.a) {
		return a.phi.first().by(-1).times(b.phi.first().over())
	}
	return a.psi.first().times(b.psi.first().over())
}

// weigh multiplies by u where u is a decay constant: a tail then has a finite
// share at cut-off, and nothing cancels in its derivative.
func (q *line[T]) weigh(s *share[T]) {
	if !q.branch {
		return
	}
	u := q.u.first()
	s.psi, s.phi, s.energy = u.times(s.psi), u.times(s.phi), u.times(s.energy)
}

// tail is the share of a half-space, psi^2/2g, weighed.
func (q *line[T]) tail(i int, s *state[T], amp linear[T], out *share[T]) {
	e := &q.ends[i]
	*out = share[T]{}
	if e.closure != open {
		q.edges[i], q.rates[i] = 0, 0
		return
	}
	q.edges[i], q.rates[i] = amp.a*s.psi.a, q.u.a
	w := linear[T]{a: 0.5} // u/2g
	switch {
	case e.level:
		k := q.likeness(&e.live).first()
		q.rates[i] *= k.a
		w = k.over().by(0.5)
	case !e.cut:
		g := q.decay(e, &e.live, q.rise(q.u)).first()
		q.rates[i] = g.a
		w = g.over().by(0.5)
		if q.branch {
			w = q.u.first().times(w)
		}
	}
	w = w.times(amp).times(amp)
	psi, phi := s.psi.first(), s.phi.first()
	out.psi, out.phi = w.times(psi.times(psi)), w.times(phi.times(phi))
}

// film is the share of film i whose state is in where it was entered and out
// where it was left, before weighing.
func (q *line[T]) film(i int, in *state[T], ain linear[T], out *state[T], aout, v linear[T], r *share[T]) {
	f := &q.films[i]
	inv := f.live.inv.first()
	psi, phi := ain.times(in.psi.first()), ain.times(in.phi.first())
	q.faces[i] = face[T]{psi: psi.a, rise: inv.a * phi.a, end: aout.a * out.psi.a}
	if evanescent(q.z[i].a) {
		thick(r, inv, q.z[i], f.h, psi, aout.times(out.psi.first()))
		return
	}
	g := f.live.b.first().times(f.live.gap.first().less(v))
	thin(r, q.trig(i, q.z[i].a), inv, g, q.z[i], f.h, psi, phi)
}

// evanescent reports whether a film of that z is treated as two decaying
// waves, one from each face: (Im sqrt z)^2 = (|z| - Re z)/2 is large enough.
func evanescent[T scalar](z T) bool {
	switch v := any(z).(type) {
	case float64:
		return v <= -smallArgument
	case complex128:
		x, y := real(v), imag(v)
		if x < 0 {
			return length(x, y)-x >= 2*smallArgument
		}
		return y*y > 2*smallArgument*(length(x, y)+x)
	}
	return false
}

// thin integrates from the state on one face, with entire functions:
// int psi^2 = h [psi^2 (1 + cs)/2 + psi' psi h s^2 + psi'^2 h^2 (s^2 - c f)/2],
// f = j_1(x)/x, and the same for phi, which obeys the dual equation.
func thin[T scalar](r *share[T], t *trig[T], inv, g, z linear[T], d T, psi, phi linear[T]) {
	k := 1 / t.factor
	h, x := linear[T]{d, d}, -0.5*z.b
	c := linear[T]{t.f[0], t.f[1] * x}.by(k)
	s := linear[T]{t.f[1], t.f[2] * x}.by(k)
	j := linear[T]{t.f[2], t.f[3] * x}.by(k)
	even, mixed := c.times(s).by(0.5), s.times(s)
	even.a += 0.5
	odd := mixed.less(c.times(j)).by(0.5)
	even, mixed, odd = h.times(even), h.times(mixed), h.times(odd)
	up, down := inv.times(phi), g.times(psi) // psi' and -phi'
	r.energy = up.times(phi).plus(down.times(psi))
	r.psi = quadratic(psi, up.times(h), even, mixed, odd)
	r.phi = quadratic(phi, down.times(h).by(-1), even, mixed, odd)
}

// quadratic is a^2 even + a b mixed + b^2 odd.
func quadratic[T scalar](a, b, even, mixed, odd linear[T]) linear[T] {
	return a.times(a.times(even).plus(b.times(mixed))).plus(b.times(b).times(odd))
}

// thick integrates psi = A exp(-k y) + B exp(-k (h - y)) from the values of
// psi on both faces.
func thick[T scalar](r *share[T], inv, z linear[T], d T, psi, end linear[T]) {
	x := linear[T]{a: sqrt(-z.a)} // k h
	x.b = -0.5 * z.b / x.a
	h := linear[T]{d, d}
	e := linear[T]{a: exp(-x.a)}
	e.b = -x.b * e.a
	ee := e.times(e)
	gap := linear[T]{1 - ee.a, -ee.b}
	over := gap.over()
	a, b := psi.less(end.times(e)).times(over), end.less(psi.times(e)).times(over)
	own := a.times(a).plus(b.times(b)).times(gap).times(x.over()).by(0.5)
	mixed := a.times(b).times(e).by(2)
	r.psi = own.plus(mixed).times(h)
	k := x.times(h.over()).times(inv.over()) // p k
	kk := k.times(k)
	r.phi = kk.times(own.less(mixed)).times(h)
	r.energy = kk.times(mixed).times(inv).by(-2)
}
