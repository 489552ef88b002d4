package slab

import "math"

// A lossless line is a Sturm-Liouville problem, so its modes are told apart by
// the nodes of psi. Seen at any interface, let a be the Pruefer angle of
// (S psi, phi) carried from below and b that from above (each counting pi for
// every node passed; S > 0 is a scale). Then M = a + b - pi falls as N rises, and M = m pi
// at mode m exactly. So ceil(M/pi) counts the modes above N.

// rod is a film as the search for modes sees it: z = a (gap - v) with v = N - base.
type rod struct {
	a, gap float64
	d      float64
	inv, b float64 // times d
	z, dz  float64 // at the last v, and in u
}

// stop is an end as the search sees it.
type stop struct {
	closure
	cut, level bool
	like       float64 // decay over u
	a, gap, p  float64
}

// gauge evaluates M on a line.
type gauge struct {
	rods   []rod
	stops  [2]stop
	sigma  float64
	branch bool
	ref    int
	top    float64 // the largest e of the films less base
}

// measure sets the gauge to a line.
func (g *gauge) measure(q *line[float64]) {
	g.rods = resize(g.rods, len(q.films))
	for i := range q.films {
		f := &q.films[i]
		c := &f.live
		g.rods[i] = rod{
			a: c.inv.a * c.b.a * f.d * f.d, gap: c.gap.a,
			d: f.d, inv: f.d * c.inv.a, b: f.d * c.b.a,
		}
	}
	for i := range q.ends {
		e := &q.ends[i]
		g.stops[i] = stop{closure: e.closure, cut: e.cut, level: e.level, like: 1}
		if e.closure != open {
			continue
		}
		s, c := &g.stops[i], &e.live
		s.a, s.gap, s.p = c.inv.a*c.b.a, c.gap.a, 1/c.inv.a
		if e.level {
			s.like = q.likeness(c).a
		}
	}
	g.sigma, g.branch, g.ref = q.sigma.a, q.branch, q.ref
	if g.ref >= 0 {
		g.top = q.films[g.ref].live.gap.a
	}
}

// wave is a state with its derivative in u.
type wave struct{ psi, phi, dpsi, dphi float64 }

func (s *stop) start(u, v, dv float64) wave {
	switch s.closure {
	case psiZero:
		return wave{phi: 1}
	case fluxZero:
		return wave{psi: 1}
	}
	if s.cut || s.level {
		return wave{psi: 1, phi: s.p * s.like * u, dphi: s.p * s.like}
	}
	g := math.Sqrt(s.a * (v - s.gap))
	return wave{psi: 1, phi: s.p * g, dphi: s.p * s.a * dv / (2 * g)}
}

// cross carries a wave through a rod and counts the nodes in it.
func (r *rod) cross(s *wave, v, dv float64) int {
	r.z, r.dz = r.a*(r.gap-v), -r.a*dv
	z := r.z
	if z < -1 {
		return r.tunnel(s)
	}
	var c, sinc, j float64
	if z > 1 {
		x := math.Sqrt(z)
		sin, cos := math.Sincos(x)
		c, sinc = cos, sin/x
		j = (sinc - c) / z
	} else {
		f := smallReal(z)
		c, sinc, j = f[0], f[1], f[2]
	}
	g := r.b * (r.gap - v)
	dc, ds := -0.5*sinc*r.dz, -0.5*j*r.dz
	x, y := r.inv*sinc, g*sinc
	dx, dy := r.inv*ds, g*ds-r.b*dv*sinc
	psi, phi := c*s.psi+x*s.phi, c*s.phi-y*s.psi
	dpsi := c*s.dpsi + x*s.dphi + dc*s.psi + dx*s.phi
	dphi := c*s.dphi - y*s.dpsi + dc*s.phi - dy*s.psi
	n := nodes(z, s.psi, s.phi, psi)
	size := math.Abs(psi) + math.Abs(phi)
	if size > 1e60 || size < 1e-60 {
		k := 1 / size
		psi, phi, dpsi, dphi = k*psi, k*phi, k*dpsi, k*dphi
	}
	*s = wave{psi, phi, dpsi, dphi}
	return n
}

// tunnel carries a wave through an evanescent rod as a growing and a decaying
// one of ratio t, so that near the resonance of a film beyond no digits are lost.
func (r *rod) tunnel(s *wave) int {
	x := math.Sqrt(-r.z)
	dx := -r.dz / (2 * x)
	over := r.inv / x // 1/p k
	y := over * s.phi
	dy := over*s.dphi - y*dx/x
	e := math.Exp(-2 * x)
	grow, dgrow := s.psi+y, s.dpsi+dy
	fall := (s.psi - y) * e
	dfall := (s.dpsi-dy)*e - 2*dx*fall
	sign := 1.0
	if math.Abs(fall) > math.Abs(grow) {
		grow, dgrow, fall, dfall, sign = fall, dfall, grow, dgrow, -1
	}
	t := fall / grow
	dt := (dfall - t*dgrow) / grow
	size := math.Copysign(1, grow)
	out := wave{psi: size * (1 + t), dpsi: size * dt}
	out.phi = size * sign * (1 - t) / over
	out.dphi = -size*sign*dt/over + out.phi*dx/x
	n := nodes(r.z, s.psi, s.phi, out.psi)
	*s = out
	return n
}

// nodes counts the zeros of psi in a film: there are about x/pi of them, and
// psi changes sign when they are odd in number.
func nodes(z, psi, phi, out float64) int {
	odd := 0
	if math.Signbit(psi) != math.Signbit(out) {
		odd = 1
	}
	if z <= 0 {
		return odd
	}
	start := 0.25 // of pi: where in its half turn the angle is
	if (phi < 0) != math.Signbit(psi) {
		start = 0.75
	}
	y := math.Sqrt(z)/math.Pi + start - 0.5
	return odd + max(0, 2*int(math.Round((y-float64(odd))/2)))
}

// rise is N - base and its derivative in u.
func (g *gauge) rise(u float64) (v, dv float64) {
	if !g.branch {
		return u, 1
	}
	return g.sigma * u * u, 2 * g.sigma * u
}

// phase gives M at the lower face of the reference film, and its derivative in u.
func (g *gauge) phase(u float64) (value, slope float64) {
	v, dv := g.rise(u)
	a, b := g.stops[0].start(u, v, dv), g.stops[1].start(u, v, dv)
	n := 0
	for i := range g.ref {
		n += g.rods[i].cross(&a, v, dv)
	}
	for i := len(g.rods) - 1; i >= g.ref; i-- {
		n += g.rods[i].cross(&b, v, dv)
	}
	s, ds := g.impedance()
	y := -s * (a.psi*b.phi + a.phi*b.psi)
	dy := -s*(a.dpsi*b.phi+a.psi*b.dphi+a.dphi*b.psi+a.phi*b.dpsi) + y/s*ds
	x := s*s*a.psi*b.psi - a.phi*b.phi
	dx := s*s*(a.dpsi*b.psi+a.psi*b.dpsi) + 2*s*ds*a.psi*b.psi - a.dphi*b.phi - a.phi*b.dphi
	slope = (x*dy - y*dx) / (x*x + y*y)
	if math.Signbit(a.psi) != math.Signbit(b.psi) {
		x, y = -x, -y
	}
	return math.Pi*float64(n) + math.Atan2(y, x), slope
}

// impedance is the scale S with its derivative in u: p times the transverse
// wave number of the reference film, with which that film adds
// its very phase to M.
func (g *gauge) impedance() (s, ds float64) {
	r := &g.rods[g.ref]
	if r.z < 1e-8 {
		return 1e-4 / r.inv, 0
	}
	s = math.Sqrt(r.z) / r.inv
	return s, s * r.dz / (2 * r.z)
}
