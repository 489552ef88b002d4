package slab

import (
	"math"

	"betaloom/schema"
	"betaloom/solvers/jet"
)

const lightSpeed = schema.LightSpeed

// closure is how a side of a line ends.
type closure uint8

const (
	open     closure = iota // half-space: the field decays
	psiZero                 // psi = 0
	fluxZero                // phi = 0
)

// coefs are the coefficients of one medium as series in t, in units of k
// and 1/k: psi' = phi/p and phi' = -b (e - N) psi with N = L/k^2.
type coefs[T scalar] struct {
	inv series[T] // 1/p: 1 for TE, eps_z for TM
	b   series[T] // 1 for TE, 1/eps_y for TM
	e   series[T] // eps_x for TE, eps_y for TM
	gap series[T] // e less the base of N
}

// freeze keeps the values at the point only.
func (c *coefs[T]) freeze() coefs[T] {
	return coefs[T]{constant(c.inv.a), constant(c.b.a), constant(c.e.a), constant(c.gap.a)}
}

// film is a layer of finite thickness.
type film[T scalar] struct {
	layer int // of the stack
	twin  int // its mirror image, or -1
	d     float64
	h     T // d
	live  coefs[T]
}

// side is one end of a line.
type side[T scalar] struct {
	closure
	layer int // of the stack
	twin  int
	live  coefs[T]
	cut   bool // the half-space whose index is the cut-off
	level bool // another half-space of the very same e
}

// state is psi and the flux phi, seen along the way it is carried: at the upper
// side phi counts downward.
type state[T scalar] struct{ psi, phi series[T] }

// line is the equation of one polarisation on a stack, or on its lower half
// where it has a mirror plane, with the work space to solve it. The unknown
// u sets N = base + sigma u^2 where a half-space gives the cut-off, so that u
// is its decay over k; N = u where none does.
type line[T scalar] struct {
	tm     bool
	mirror bool
	fade   float64 // what imaginary parts are multiplied by: 1, less on the way there
	films  []film[T]
	ends   [2]side[T]
	base   series[T]
	sigma  series[T]
	branch bool
	top    float64 // the largest e of the films, real part
	ref    int     // the film that has it

	u      series[T]
	full   whole[T] // what narrow has put aside
	origin float64  // extent of the films below the first
	evened bool     // divide states by their larger part
	steady bool     // scale films by constants that are positive
	sharp  bool     // carry through opaque films as two waves, scaled as that moves
	still  bool     // nothing but u moves
	states [2][]state[T]
	rays   [2][]ray[T]
	trigs  []trig[T]
	z      []linear[T]
	factor []linear[T] // what a film's states are scaled by
	faces  []face[T]
	shares []share[T]
	tails  [2]share[T]
	swing  swing[T]
	foot   T    // what the state at the lower end is multiplied by
	edges  [2]T // psi at the outer faces, and the decay beyond
	rates  [2]T
	meets  int // the interface where the sides are matched
}

// setup builds the line of one polarisation from a stack; zero frequency
// derivatives and zero imaginary parts make it exact as well as fast.
func (q *line[T]) setup(w float64, s *Stack, tm, mirror bool, fade float64) {
	q.tm, q.mirror, q.fade = tm, mirror, fade
	lo, hi := 0, len(s.Layers)
	k := w / lightSpeed
	q.ends[0] = q.end(w, s, 0, s.GroundBottom)
	q.ends[1] = q.end(w, s, hi-1, s.GroundTop)
	if !s.GroundBottom {
		lo++
	}
	if !s.GroundTop {
		hi--
	}
	n := hi - lo
	if mirror {
		q.ends[0].twin = q.ends[1].layer
		q.ends[1] = side[T]{closure: fluxZero, twin: -1}
		n = (n + 1) / 2
	}
	q.films = resize(q.films, n)
	for i := range q.films {
		f := &q.films[i]
		f.layer, f.twin = lo+i, -1
		f.d = k * real(s.Layers[lo+i].Thickness.V)
		if mirror {
			f.twin = hi - 1 - i
			if f.twin == f.layer {
				f.d /= 2
			}
		}
		f.h = num[T](f.d)
		q.medium(w, &s.Layers[lo+i], &f.live)
	}
	q.states[0], q.states[1] = resize(q.states[0], n+1), resize(q.states[1], n+1)
	q.rays[0], q.rays[1] = resize(q.rays[0], n+1), resize(q.rays[1], n+1)
	q.trigs = resize(q.trigs, n)
	q.z, q.factor = resize(q.z, n), resize(q.factor, n)
	q.faces, q.shares = resize(q.faces, n), resize(q.shares, n)
	q.anchor()
}

func resize[E any](s []E, n int) []E {
	if cap(s) < n {
		return make([]E, n)
	}
	return s[:n]
}

func (q *line[T]) end(w float64, s *Stack, i int, ground bool) side[T] {
	e := side[T]{layer: i, twin: -1}
	switch {
	case ground && q.tm:
		e.closure = fluxZero
	case ground:
		e.closure = psiZero
	default:
		q.medium(w, &s.Layers[i], &e.live)
	}
	return e
}

// medium sets the coefficients of a layer for the line's polarisation.
func (q *line[T]) medium(w float64, l *Layer, c *coefs[T]) {
	if !q.tm {
		*c = coefs[T]{inv: constant(T(1)), b: constant(T(1)), e: taylor[T](w, &l.Eps[0], q.fade)}
		return
	}
	c.inv, c.e = taylor[T](w, &l.Eps[2], q.fade), taylor[T](w, &l.Eps[1], q.fade)
	c.b = inverse(c.e)
}

// taylor turns derivatives in w into a series in t.
func taylor[T scalar](w float64, j *jet.Jet, fade float64) series[T] {
	return series[T]{
		part[T](j.V, 1, fade), part[T](j.W, w, fade),
		part[T](j.WW, w*w/2, fade), part[T](j.WWW, w*w*w/6, fade),
	}
}

func part[T scalar](v complex128, factor, fade float64) T {
	return from[T](complex(real(v)*factor, imag(v)*factor*fade))
}

// anchor chooses the base of N and takes every e relative to it, so that
// nothing cancels near cut-off.
func (q *line[T]) anchor() {
	cut := -1
	for i := range q.ends {
		if q.ends[i].closure != open || re(sqrt(q.ends[i].live.e.a)) <= 0 {
			continue
		}
		if cut < 0 || re(sqrt(q.ends[i].live.e.a)) > re(sqrt(q.ends[cut].live.e.a)) {
			cut = i
		}
	}
	q.branch, q.base, q.sigma = cut >= 0, series[T]{}, constant(T(1))
	if q.branch {
		c := &q.ends[cut].live
		q.base = c.e
		if q.tm {
			q.sigma = mul(c.e, inverse(c.inv))
		}
	}
	for i := range q.ends {
		e := &q.ends[i]
		e.live.gap = sub(e.live.e, q.base)
		e.cut = i == cut
		e.level = q.branch && !e.cut && e.closure == open && e.live.gap == series[T]{}
	}
	q.top, q.ref = math.Inf(-1), -1
	for i := range q.films {
		f := &q.films[i]
		f.live.gap = sub(f.live.e, q.base)
		if f.d > 0 && re(f.live.e.a) > q.top {
			q.top, q.ref = re(f.live.e.a), i
		}
	}
}

// rise is N less its base.
func (q *line[T]) rise(u series[T]) series[T] {
	if !q.branch {
		return u
	}
	v := mul(u, u)
	switch {
	case !q.tm:
		return v
	case q.still:
		return scale(v, q.sigma.a)
	}
	return mul(q.sigma, v)
}
