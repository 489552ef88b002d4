package slab

// ray is a state at the point, with its derivative in u.
type ray[T scalar] struct{ psi, phi linear[T] }

// look carries both sides to interface m at the point: what carry does, to first
// order in u and with nothing else moving. A search for modes needs no more.
func (q *line[T]) look(u T, m int) {
	v := q.lift(u)
	last := len(q.films)
	q.rays[0][0], q.rays[1][last] = q.glance(0, u, v), q.glance(1, u, v)
	for i := range m {
		q.rays[0][i+1] = q.pass(i, q.rays[0][i], v)
	}
	for i := last - 1; i >= m; i-- {
		q.rays[1][i] = q.pass(i, q.rays[1][i+1], v)
	}
}

// lookAll carries both sides across the whole line.
func (q *line[T]) lookAll(u T) {
	q.look(u, 0)
	v := q.lift(u)
	for i := range q.films {
		q.rays[0][i+1] = q.pass(i, q.rays[0][i], v)
	}
}

// lift is N less its base, and its derivative in u.
func (q *line[T]) lift(u T) linear[T] {
	if !q.branch {
		return linear[T]{u, 1}
	}
	v := q.sigma.a * u
	return linear[T]{v * u, 2 * v}
}

// glance is the ray at an end.
func (q *line[T]) glance(i int, u T, v linear[T]) ray[T] {
	e := &q.ends[i]
	switch e.closure {
	case psiZero:
		return ray[T]{phi: linear[T]{a: 1}}
	case fluxZero:
		return ray[T]{psi: linear[T]{a: 1}}
	}
	c := &e.live
	g := linear[T]{u, 1}
	switch {
	case e.level && q.tm:
		g = g.by(sqrt(c.inv.a * c.b.a * q.sigma.a))
	case !e.cut && !e.level:
		a := c.inv.a * c.b.a
		g.a = sqrt(a * (v.a - c.gap.a))
		g.b = a * v.b * 0.5 / g.a
	}
	if q.tm {
		g = g.by(1 / c.inv.a)
	}
	return ray[T]{linear[T]{a: 1}, g}
}

// pass carries a ray through film i.
func (q *line[T]) pass(i int, in ray[T], v linear[T]) ray[T] {
	f := &q.films[i]
	c := &f.live
	g := linear[T]{c.gap.a - v.a, -v.b}
	z := g.by(f.h * f.h)
	if q.tm {
		z, g = z.by(c.inv.a*c.b.a), g.by(c.b.a)
	}
	q.z[i] = z
	var cos, sinc linear[T]
	wall := !q.steady && evanescent(z.a)
	if wall && q.sharp {
		return leak(in, z, linear[T]{a: c.inv.a * f.h})
	}
	if wall {
		cos, sinc = fading(z)
	} else {
		t := q.trig(i, z.a)
		cos = linear[T]{t.f[0], -0.5 * t.f[1] * z.b}
		sinc = linear[T]{t.f[1], -0.5 * t.f[2] * z.b}
	}
	s := sinc.by(f.h)
	r := g.times(s)
	s = s.by(c.inv.a)
	out := ray[T]{cos.times(in.psi).plus(s.times(in.phi)), cos.times(in.phi).less(r.times(in.psi))}
	size := rough(out.psi.a) + rough(out.phi.a)
	if size > 1e-60 && size < 1e60 || size == 0 {
		return out
	}
	k := num[T](1 / size)
	return ray[T]{out.psi.by(k), out.phi.by(k)}
}

// leak carries a ray through a film of several decay lengths as tunnel does, to
// first order: near the resonance of a film beyond no digits are lost. admit is h/p.
func leak[T scalar](in ray[T], z, admit linear[T]) ray[T] {
	x := linear[T]{a: sqrt(-z.a)}
	x.b = -0.5 * z.b / x.a
	over := admit.times(x.over())
	y := over.times(in.phi)
	e := exp(-2 * x.a)
	grow, fall := in.psi.plus(y), in.psi.less(y).times(linear[T]{e, -2 * e * x.b})
	sign := T(1)
	if modulus(fall.a) > modulus(grow.a) {
		grow, fall, sign = fall, grow, -1
	}
	r := fall.times(grow.over())
	psi, phi := r, r.by(-1)
	psi.a += 1
	phi.a += 1
	return ray[T]{psi, phi.times(over.over()).by(sign)}
}

// fading is waves to first order, without the factor.
func fading[T scalar](z linear[T]) (c, s linear[T]) {
	x := linear[T]{a: sqrt(-z.a)}
	ix := 1 / x.a
	x.b = -0.5 * z.b * ix
	e := exp(-x.a)
	e *= e
	c = linear[T]{0.5 + 0.5*e, -e * x.b}
	s = linear[T]{0.5 - 0.5*e, e * x.b}
	return c, s.times(linear[T]{ix, -x.b * ix * ix})
}

// miss is the mismatch of the rays at interface m.
func (q *line[T]) miss(m int) linear[T] {
	a, b := &q.rays[0][m], &q.rays[1][m]
	return a.psi.times(b.phi).plus(a.phi.times(b.psi))
}

// size is the length of a ray's value.
func (r *ray[T]) size() float64 { return length(modulus(r.psi.a), modulus(r.phi.a)) }
