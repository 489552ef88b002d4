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

// bound writes bounds on the numerical error. The only errors are those of
// rounding. A relative error in a layer's phase moves N by the layer's share of
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
