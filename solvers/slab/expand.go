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
	q.u = series[T]{u, 1}
	q.carryAll(&q.u)
	best, least := 0, math.Inf(1)
	for m := range last + 1 {
		d := q.mismatch(m, 1)
		a, b := &q.states[0][m], &q.states[1][m]
		s := modulus(d[1]) / (hypot(a) * hypot(b))
		if s < least {
			best, least = m, s
		}
	}
	return best
}

// carryAll carries both sides across the whole line.
func (q *line[T]) carryAll(u *series[T]) {
	last := len(q.films)
	q.carry(u, false, 1, last)
	v := q.rise(u, false, 1)
	for i := last - 1; i >= 0; i-- {
		q.cross(i, &q.states[1][i+1], &q.states[1][i], &v, false, 1)
	}
}

func hypot[T scalar](s *state[T]) float64 {
	return math.Hypot(modulus(s.psi[0]), modulus(s.phi[0]))
}

// polish ends the search with Newton steps on the mismatch at interface m. It
// gives u, the mismatch's slope there and whether the steps went to nothing.
func (q *line[T]) polish(u T, m int) (root, slope T, ok bool) {
	for range 6 {
		q.u = series[T]{u, 1}
		q.carry(&q.u, false, 1, m)
		d := q.mismatch(m, 1)
		slope = d[1]
		du := d[0] / slope
		step := modulus(du)
		if !(step <= 0.1*modulus(u)) {
			return u, slope, false
		}
		u -= du
		if ok = step <= 1e-12*modulus(u); step <= 4*ulp*modulus(u) {
			break
		}
	}
	return u, slope, ok
}

// expand finds how u moves with frequency, to third order: the mismatch
// vanishes along the way, D(u(t), t) = 0, and is linear in the next
// coefficient. It leaves the states along the way to second order.
func (q *line[T]) expand(u, slope T, m int) {
	q.evened = len(q.films) > 1
	if q.evened {
		q.u = series[T]{u, 1}
		q.carry(&q.u, false, 1, m)
		d := q.mismatch(m, 1)
		slope = d[1]
	}
	q.u = series[T]{u}
	for n := 1; n <= 3; n++ {
		q.carry(&q.u, true, n, m)
		d := q.mismatch(m, n)
		q.u[n] = -d[n] / slope
	}
	q.evened = false
}

// square is N along the way.
func (q *line[T]) square() series[T] {
	v := q.rise(&q.u, true, 3)
	return add(&q.base, &v)
}
