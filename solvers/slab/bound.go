package slab

import (
	"math"

	"betaloom/solvers"
)

// ulp is half the spacing of floating-point numbers at one.
const ulp = 0x1p-53

// safety multiplies every bound: rounding errors are counted as if each layer
// added a few, of the largest size.
const safety = 24

// given is the relative error of a permittivity and its derivatives as they come
// in: evaluating a material takes a few operations. A thickness has that of one rounding.
const given = 4 * ulp

// bound writes bounds on the numerical error. The only errors are those of
// rounding, of the stack's own numbers too. A relative error in a layer's phase moves N by the layer's share of
// the energy, an error in a face's state by |psi phi| there, which gives the error
// of u. The k-th Taylor coefficient of u carries that error times the k-th
// power of the rate at which the phases and the field's distribution change, and the rest is propagated through
// N = base + sigma u^2, n = sqrt N and beta = k n term by term.
func bound[T scalar](o *output, q *line[T], norm linear[T], n series[T], m *solvers.Mode) {
	rate := q.rate(norm)
	var du, dn [4]float64
	slope := 1.0
	if q.branch {
		slope = 2 * modulus(q.sigma.a) * modulus(q.u.a)
	}
	du[0] = q.noise(norm)/slope + 2*ulp*modulus(q.u.a)
	for k := 1; k <= 3; k++ {
		du[k] = du[k-1] * rate
	}
	size, grow, de := sizes(n), sizes(inverse(n)), q.spread(&du)
	in := q.inputs(norm, n, rate)
	for k := range de {
		de[k] += in[k]
	}
	for k := range dn {
		dn[k] = 2 * ulp * size[k]
		for j := range k + 1 {
			dn[k] += de[j] * grow[k-j] / 2
		}
	}
	c, w := lightSpeed, o.w
	m.NeffErr = safety * dn[0]
	m.NgErr = safety * (dn[1] + dn[0])
	m.GVDErr = safety * 2 * (dn[2] + dn[1]) / (c * w)
	m.Beta3Err = safety * 6 * (dn[3] + dn[2]) / (c * w * w)
	if _, real := any(n.a).(float64); !real {
		m.KappaErr = m.NeffErr
	}
}

// sizes is the absolute values of the coefficients.
func sizes[T scalar](x series[T]) [4]float64 {
	return [4]float64{modulus(x.a), modulus(x.b), modulus(x.c), modulus(x.d)}
}

// spread is the errors of the coefficients of N.
func (q *line[T]) spread(du *[4]float64) (e [4]float64) {
	u := sizes(q.u)
	if !q.branch {
		for k := range e {
			e[k] = du[k] + ulp*u[k]
		}
		return e
	}
	base, most := sizes(q.base), max(1, modulus(q.sigma.a))
	for k := range e {
		v := ulp * base[k]
		for j := range k + 1 {
			v += u[j] * (2*du[k-j] + 2*ulp*u[k-j])
		}
		e[k] = v * most
	}
	return e
}

// inputs is what rounding of the stack's numbers does to N, over safety: every number
// counts with its derivative of N along the way, which is known to first order and taken to
// go on as the rate says, or as u itself does where that changes faster.
func (q *line[T]) inputs(norm linear[T], n series[T], rate float64) (e [4]float64) {
	over, n2, u := norm.over(), mul(n, n).first(), sizes(q.u)
	base := u[1] + rate*u[0]
	rate = max(rate, 2*u[2]/base, math.Sqrt(6*u[3]/base))
	put := func(a, b complex128, of [4]float64, by float64) {
		s := [4]float64{abs(a), abs(b)}
		s[2] = rate * max(s[1], rate*s[0])
		s[3] = rate * s[2]
		for k := range e {
			for j := range k + 1 {
				e[k] += 2 * by / safety * s[j] * of[k-j]
			}
		}
	}
	medium := func(c *coefs[T], s share[T]) share[T] {
		s.scale(over)
		g := sensitive(q, c, &s, n2)
		put(g[0][0], g[0][1], sizes(c.e), given)
		if q.tm {
			put(g[1][0], g[1][1], sizes(c.inv), given)
		}
		return s
	}
	for i := range q.films {
		f := &q.films[i]
		s := medium(&f.live, q.shares[i])
		g := w2(s.energy, f.d)
		put(g[0], g[1], [4]float64{1}, ulp)
	}
	for i := range q.ends {
		if q.ends[i].closure == open {
			medium(&q.ends[i].live, q.tails[i])
		}
	}
	return e
}

// noise is the error that rounding in films and at faces makes in N.
func (q *line[T]) noise(norm linear[T]) float64 {
	weight := 1.0
	if q.branch {
		weight = modulus(q.u.a)
	}
	v := q.lift(q.u.a).a
	sum := 0.0
	for i := range q.films {
		f, s, c := &q.films[i], &q.shares[i], &q.faces[i]
		g := f.live.b.a * (f.live.gap.a - v)
		sum += modulus(g*s.psi.a) + modulus(f.live.inv.a*s.phi.a)
		sum += weight * modulus(c.psi*c.rise/f.live.inv.a)
	}
	for i := range q.ends {
		sum += weight * modulus(q.edges[i]*q.edges[i]*q.rates[i]) / (1 + modulus(q.sigma.a))
	}
	return 2 * ulp * sum / modulus(norm.a)
}

// rate is how fast phases and the distribution of the field change with t.
func (q *line[T]) rate(norm linear[T]) float64 {
	r := 1.0
	over := 1 / norm.a
	turn := norm.b * over
	for i := range q.films {
		z, s := q.z[i], &q.shares[i]
		x, y := modulus(z.b)/2, modulus(z.a)
		if evanescent(z.a) {
			x /= y
		} else {
			x /= math.Sqrt(1 + y)
		}
		r += x + modulus(q.films[i].live.b.a*(s.psi.b-s.psi.a*turn)*over)
	}
	return r
}
