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
func bound[T scalar](o *output, q *line[T], norm *series[T], m *solvers.Mode) {
	dn2, rate := q.noise(norm), q.rate(norm)
	var du, dn [4]float64
	slope := 1.0
	if q.branch {
		slope = 2 * modulus(q.sigma[0]) * modulus(q.u[0])
	}
	du[0] = dn2/slope + 2*ulp*modulus(q.u[0])
	for k := 1; k <= 3; k++ {
		du[k] = du[k-1] * rate
	}
	n2 := q.square()
	n := root(&n2, 3)
	h := inverse(&n, 3)
	for k := range dn {
		dn[k] = 2 * ulp * modulus(n[k])
		for j := range k + 1 {
			dn[k] += q.spread(&du, j) * modulus(h[k-j]) / 2
		}
	}
	c, w := lightSpeed, o.w
	m.NeffErr = safety * dn[0]
	m.NgErr = safety * (dn[1] + dn[0])
	m.GVDErr = safety * 2 * (dn[2] + dn[1]) / (c * w)
	m.Beta3Err = safety * 6 * (dn[3] + dn[2]) / (c * w * w)
	if _, real := any(n[0]).(float64); !real {
		m.KappaErr = m.NeffErr
	}
}

// spread is the error of the k-th coefficient of N.
func (q *line[T]) spread(du *[4]float64, k int) float64 {
	if !q.branch {
		return du[k] + ulp*modulus(q.u[k])
	}
	e := ulp * modulus(q.base[k])
	for j := range k + 1 {
		e += modulus(q.u[j]) * (2*du[k-j] + 2*ulp*modulus(q.u[k-j]))
	}
	return e * max(1, modulus(q.sigma[0]))
}

// noise is the error that rounding in films and at faces makes in N.
func (q *line[T]) noise(norm *series[T]) float64 {
	weight := 1.0
	if q.branch {
		weight = modulus(q.u[0])
	}
	v := q.rise(&q.u, true, 0)
	sum := 0.0
	for i := range q.films {
		f, s, c := &q.films[i], &q.shares[i], &q.faces[i]
		g := f.live.b[0] * (f.live.gap[0] - v[0])
		sum += modulus(g*s.psi[0]) + modulus(f.live.inv[0]*s.phi[0])
		sum += weight * modulus(c.psi*c.rise/f.live.inv[0])
	}
	for i := range q.ends {
		sum += weight * modulus(q.edges[i]*q.edges[i]*q.rates[i]) / (1 + modulus(q.sigma[0]))
	}
	return 2 * ulp * sum / modulus(norm[0])
}

// rate is how fast phases and the distribution of the field change with t.
func (q *line[T]) rate(norm *series[T]) float64 {
	r := 1.0
	turn := norm[1] / norm[0]
	for i := range q.films {
		z, s := &q.z[i], &q.shares[i]
		x := modulus(z[1]) / 2
		if evanescent(z[0]) {
			x /= modulus(z[0])
		} else {
			x /= math.Sqrt(1 + modulus(z[0]))
		}
		b := q.films[i].live.b[0]
		r += x + modulus(b*(s.psi[1]-s.psi[0]*turn)/norm[0])
	}
	return r
}
