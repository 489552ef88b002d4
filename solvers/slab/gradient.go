package slab

import "betaloom/solvers/jet"

// gradient sums, over every layer's numbers, the derivative of N in that
// number (a series along the way) times the number's own gradient: with x the
// field and norm the sum of b psi^2,
//
//	TE: dN/d eps_x = int psi^2 / norm
//	TM: dN/d eps_y = N int (psi/eps_y)^2 / norm, dN/d eps_z = int phi^2 / norm
//	dN/d thickness = k (phi^2/p + b(e-N) psi^2) / norm
//
// the integrals over that layer; the last is constant inside a film.
func gradient[T scalar](o *output, q *line[T], norm linear[T], n2 series[T]) {
	clear(o.acc[0])
	clear(o.acc[1])
	over := norm.over()
	for i := range q.films {
		f := &q.films[i]
		s := q.shares[i]
		s.scale(over)
		once := w2(s.energy, o.k)
		if f.twin >= 0 {
			s = s.half()
			once = w2(s.energy, o.k)
			h := once
			if f.twin == f.layer {
				h = [2]complex128{}
			}
			o.layer(f.twin, sensitive(q, &f.live, &s, n2.first()), q.tm, h)
		}
		o.layer(f.layer, sensitive(q, &f.live, &s, n2.first()), q.tm, once)
	}
	for i := range q.ends {
		e := &q.ends[i]
		if e.closure != open {
			continue
		}
		s := q.tails[i]
		s.scale(over)
		if e.twin >= 0 {
			s = s.half()
			o.layer(e.twin, sensitive(q, &e.live, &s, n2.first()), q.tm, [2]complex128{})
		}
		o.layer(e.layer, sensitive(q, &e.live, &s, n2.first()), q.tm, [2]complex128{})
	}
}

func (s *share[T]) scale(by linear[T]) {
	s.psi, s.phi, s.energy = s.psi.times(by), s.phi.times(by), s.energy.times(by)
}

func (s share[T]) half() share[T] {
	return share[T]{psi: s.psi.by(0.5), phi: s.phi.by(0.5), energy: s.energy.by(0.5)}
}

// sensitive gives dN/de and dN/d eps_z of a layer.
func sensitive[T scalar](q *line[T], c *coefs[T], s *share[T], n2 linear[T]) (g [2][2]complex128) {
	e := s.psi
	if q.tm {
		b := c.b.first()
		e = n2.times(b.times(b)).times(e)
		g[1] = [2]complex128{widen(s.phi.a), widen(s.phi.b)}
	}
	g[0] = [2]complex128{widen(e.a), widen(e.b)}
	return g
}

// w2 is the weight of a thickness in metres, k (1+t) times that of k d.
func w2[T scalar](e linear[T], k float64) [2]complex128 {
	c := complex(k, 0)
	return [2]complex128{c * widen(e.a), c * (widen(e.b) + widen(e.a))}
}

// layer adds the part of one layer of the stack.
func (o *output) layer(i int, g [2][2]complex128, tm bool, h [2]complex128) {
	l := &o.stack.Layers[i]
	if tm {
		o.chain(g[0], &l.Eps[1])
		o.chain(g[1], &l.Eps[2])
	} else {
		o.chain(g[0], &l.Eps[0])
	}
	if !l.HalfSpace {
		o.chain(h, &jet.Jet{P: l.Thickness.P})
	}
}

// chain adds a number's part: weight times gradient, to first order in t.
func (o *output) chain(weight [2]complex128, j *jet.Jet) {
	for i, p := range j.P {
		if p == 0 {
			continue
		}
		o.acc[0][i] += weight[0] * p
		o.acc[1][i] += weight[1] * p
	}
	w := weight[0] * complex(o.w, 0)
	for i, p := range j.WP {
		if p != 0 {
			o.acc[1][i] += w * p
		}
	}
}
