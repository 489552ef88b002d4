package slab

import "math"

// meet chooses the interface where the sides are matched: there psi is
// largest, so that the mismatch depends least on N and each side was carried in
// the direction in which its field grows.
func (q *line[T]) meet(u T) int {
	last := len(q.films)
	if last <= 1 {
		return max(q.ref, 0)
	}
	q.lookAll(u)
	best, least := 0, math.Inf(1)
	for m := range last + 1 {
		s := modulus(q.miss(m).b) / (q.rays[0][m].size() * q.rays[1][m].size())
		if s < least {
			best, least = m, s
		}
	}
	return best
}

// polish ends the search with Newton steps on the mismatch at interface m. It
// gives u, the mismatch's slope there and whether the steps went to nothing.
func (q *line[T]) polish(u T, m int) (root, slope T, ok bool) {
	q.sharp = len(q.films) > 1
	defer func() { q.sharp = false }()
	for range 6 {
		q.look(u, m)
		d := q.miss(m)
		slope = d.b
		du := d.a / slope
		step := modulus(du)
		if !(step <= 0.1*modulus(u)) {
			return u, slope, false
		}
		u -= du
		if step <= 16*ulp*modulus(u) { // the next is below rounding, and the slope is that at the root
			return u, slope, true
		}
	}
	return u, slope, false
}

// faint is a u that the search, which sees it as the cosine of an angle, does not resolve well.
const faint = 1e-10

// touch polishes the u of a mode that hardly leaves the cut-off from there,
// where the mismatch is analytic; it keeps u where that leads nowhere.
func (q *line[T]) touch(u, slope T, m int) (T, T) {
	q.look(0, m)
	d := q.miss(m)
	start := -d.a / d.b
	if !(re(start) > 0) {
		return u, slope
	}
	if v, s, ok := q.polish(start, m); ok {
		return v, s
	}
	return u, slope
}

// expand finds how u moves with frequency, to third order: the mismatch
// vanishes along the way, D(u(t), t) = 0, and is linear in the next
// coefficient. It leaves the states along the way to second order.
func (q *line[T]) expand(u, slope T, m int) {
	q.evened = len(q.films) > 1
	if q.evened {
		q.u, q.still = series[T]{a: u, b: 1}, true
		q.carry(m)
		slope, q.still = q.mismatch(m).b, false
	}
	q.u = series[T]{a: u}
	q.carry(m)
	q.u.b = -q.mismatch(m).b / slope
	q.carry(m)
	q.u.c = -q.mismatch(m).c / slope
	q.carry(m)
	q.u.d = -q.mismatch(m).d / slope
	q.evened = false
}

// square is N along the way.
func (q *line[T]) square() series[T] {
	return add(q.base, q.rise(q.u))
}
