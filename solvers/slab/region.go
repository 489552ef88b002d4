package slab

import (
	"fmt"
	"math"
	"math/cmplx"
)

// Guided with loss or gain: Re n above the index of both half-spaces, and
// Re N > 0 (beyond, a wave dies within a fraction of its own length).
//
// Where all modes lie is known beforehand. For TE, N is a mean of eps_x less a
// positive number: Im N is between the extremes of Im eps_x and
// Re N below the largest Re eps_x. For TM with Re eps > 0, N A = 1 - B with
// A a mean of 1/eps_y and B in the cone of 1/eps_z, which bounds N as long as all
// arguments are below 45 degrees. For TM otherwise: where |n| is large
// every film is evanescent and the reflections of its faces, which tend to constants, cannot
// make a round trip of one.

// region is a rectangle in the plane of s, which is n or, where there
// is no cut-off index, N. The mismatch is analytic in it: on the cut of a half-space's decay,
// N = e - r with r > 0 real, Re n is at most the index of that half-space.
type region struct {
	square bool // s = N
	lo, hi complex128
	cut    float64 // Re n above which modes are guided
}

func (r *region) width() float64  { return real(r.hi - r.lo) }
func (r *region) height() float64 { return imag(r.hi - r.lo) }

// n2 is N at s.
func (r *region) n2(s complex128) complex128 {
	if r.square {
		return s
	}
	return s * s
}

// s is the inverse of n2.
func (r *region) s(n2 complex128) complex128 {
	if r.square {
		return n2
	}
	return csqrt(n2)
}

func (r *region) holds(s complex128) bool {
	return real(s) > real(r.lo) && real(s) <= real(r.hi) && imag(s) >= imag(r.lo) && imag(s) <= imag(r.hi)
}

// guided reports whether a mode at N counts.
func (r *region) guided(n2 complex128) bool {
	return real(n2) > 0 && real(csqrt(n2)) > r.cut
}

// limits bounds |N| and Im N of a line's guided modes.
type limits struct{ size, low, high float64 }

// where is the region that holds every guided mode of a line; ok is
// false where there can be none.
func (q *line[T]) where() (r region, ok bool, err error) {
	if q.branch {
		r.cut = real(csqrt(widen(q.base.a)))
	}
	var l limits
	if q.tm {
		l, err = q.limitsTM(r.cut)
	} else {
		l = q.limitsTE()
	}
	if err != nil || !(math.Sqrt(l.size) > r.cut) {
		return r, false, err
	}
	r.square = r.cut == 0
	top := l.size
	if !r.square {
		top = math.Sqrt(top)
		l.low, l.high = slope(l.low, r.cut), slope(l.high, r.cut)
	}
	pad := 0.07 * (top - r.cut)
	r.lo = complex(r.cut, l.low-pad)
	r.hi = complex(top+pad, l.high+pad)
	return r, true, q.seam(&r)
}

// slope bounds Im n where Im N is v: n n = N with Re n above cut and above |Im n|.
func slope(v, cut float64) float64 {
	return math.Copysign(min(math.Abs(v)/(2*cut), math.Sqrt(math.Abs(v)/2)), v)
}

func (q *line[T]) limitsTE() limits {
	l := limits{low: math.Inf(1), high: math.Inf(-1)}
	top := math.Inf(-1)
	q.media(func(c *coefs[T], _ float64) {
		e := widen(c.e.a)
		top = max(top, real(e))
		l.low, l.high = min(l.low, imag(e)), max(l.high, imag(e))
	})
	if top > 0 {
		l.size = math.Hypot(top, max(math.Abs(l.low), math.Abs(l.high)))
	}
	return l
}

// media calls f for each medium, from the bottom, with its thickness.
func (q *line[T]) media(f func(c *coefs[T], d float64)) {
	if q.ends[0].closure == open {
		f(&q.ends[0].live, math.Inf(1))
	}
	for i := range q.films {
		if q.films[i].d > 0 {
			f(&q.films[i].live, q.films[i].d)
		}
	}
	if q.ends[1].closure == open {
		f(&q.ends[1].live, math.Inf(1))
	}
}

func (q *line[T]) limitsTM(cut float64) (limits, error) {
	turn, least, most := 0.0, math.Inf(1), 0.0
	q.media(func(c *coefs[T], _ float64) {
		b := widen(c.b.a)
		turn = max(turn, math.Abs(cmplx.Phase(b)), math.Abs(cmplx.Phase(1/widen(c.inv.a))))
		least = min(least, real(b))
		most = max(most, abs(widen(c.e.a)))
	})
	if t := math.Tan(turn); turn < 0.7 {
		part := t / (1 - t*t)
		im := (part + math.Sin(turn)) / least
		return limits{size: math.Hypot(1, part) / least, low: -im, high: im}, nil
	}
	n := max(math.Sqrt(most), cut)
	for range 60 {
		n *= 1.5
		if q.silent(n) {
			return limits{size: n * n, low: -n * n, high: n * n}, nil
		}
	}
	return limits{}, fmt.Errorf("TM: the permittivities on two sides of a face cancel, or a layer is hyperbolic, so that the effective index has no bound")
}

// silent reports whether there is certainly no guided mode with |n| above
// the given: reflections at the faces are bounded, decay across the films beats them.
func (q *line[T]) silent(n float64) bool {
	reach := 0.0 // bound on the reflection seen looking down
	if q.ends[0].closure != open {
		reach = 1
	}
	ok, first := true, true
	var before, blur float64
	var admit complex128
	q.media(func(c *coefs[T], d float64) {
		e, ez := widen(c.e.a), widen(c.inv.a)
		ratio := csqrt(ez / e)
		a, da := ratio/ez, abs(e)/(n*n)
		if da > 0.5 {
			ok = false
			return
		}
		da *= abs(a)
		if !first {
			reach *= before
			den := abs(a+admit) - da - blur
			r := (abs(a-admit) + da + blur) / den
			ok = ok && den > 0 && r*reach < 1
			reach = (r + reach) / (1 - r*reach)
		}
		tilt := math.Pi/4 + math.Abs(cmplx.Phase(ratio))
		rate := n * abs(ratio) * (math.Cos(tilt) - da/abs(a))
		ok = ok && rate > 0
		admit, blur, first = a, da, false
		before = math.Exp(-2 * rate * d)
	})
	if q.ends[1].closure != open {
		ok = ok && reach*before < 1
	}
	return ok
}

// seam checks that the cut of a half-space whose permittivities along y and z
// differ in argument stays out of the region.
func (q *line[T]) seam(r *region) error {
	for i := range q.ends {
		e := &q.ends[i]
		if e.closure != open || !q.tm {
			continue
		}
		ey, ez := widen(e.live.e.a), widen(e.live.inv.a)
		way := ey / ez
		if math.Abs(imag(way)) < 1e-13*abs(way) && real(way) > 0 {
			continue
		}
		for x := 1e-6; x < 1e6; x *= 1.1 {
			n2 := ey - complex(x, 0)*way
			if r.guided(n2) && r.holds(r.s(n2)) {
				return fmt.Errorf("TM: in layer %d the loss along y and z differs so much that the waves it radiates cannot be told from guided ones", e.layer)
			}
		}
	}
	return nil
}
