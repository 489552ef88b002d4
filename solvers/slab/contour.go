package slab

import (
	"context"
	"errors"
	"math"
	"math/cmplx"
)

// search counts and finds the zeros of a line's mismatch in a region: the
// argument of an analytic function turns by 2 pi for each zero that a contour
// goes round.
type search struct {
	line  *line[complex128]
	at    int // the interface of the mismatch
	known []complex128
	found []complex128
	work  int     // evaluations left
	pace  float64 // the largest step round a contour, over the distance its rates see
}

// budget bounds the evaluations spent on one line.
const budget = 120_000

var (
	errContour = errors.New("the argument of the mismatch cannot be followed round the region of guided modes")
	errBudget  = errors.New("too many evaluations of the mismatch")
)

// spot is a place on a contour: s, u, the mismatch up to a positive factor and
// its logarithmic derivative in u, in which it is analytic at the cut-off too.
type spot struct{ s, u, f, rate complex128 }

func (c *search) spot(r *region, s complex128) spot {
	q := c.line
	c.work--
	u := q.unknown(r.n2(s))
	q.steady = true
	q.look(u, c.at)
	q.steady = false
	d := q.miss(c.at)
	return spot{s, u, d.a, d.b / d.a}
}

// unknown is the u of a given N, with Re u >= 0.
func (q *line[T]) unknown(n2 T) T {
	if !q.branch {
		return n2
	}
	return sqrt((n2 - q.base.a) / q.sigma.a)
}

// turns counts the zeros inside a region.
func (c *search) turns(r *region) (int, error) {
	p := [4]complex128{r.lo, complex(real(r.hi), imag(r.lo)), r.hi, complex(real(r.lo), imag(r.hi))}
	var total float64
	start := c.spot(r, p[0])
	from := start
	for i := range p {
		to := start
		if i < 3 {
			to = c.spot(r, p[i+1])
		}
		a, err := c.turn(r, &from, &to, 0)
		if err != nil {
			return 0, err
		}
		total += a
		from = to
	}
	return int(math.Round(total / (2 * math.Pi))), nil
}

// turn follows the argument from a to b, halving the way until it turns
// slowly, and as its rates at both ends say. A zero beside a long way can hide
// behind rates that cancel at its ends, so both halves have to agree with it too.
func (c *search) turn(r *region, a, b *spot, depth int) (float64, error) {
	if cmplx.IsNaN(a.rate) || cmplx.IsNaN(b.rate) || depth > 48 {
		return 0, errContour
	}
	if c.work < 0 {
		return 0, errBudget
	}
	m := c.spot(r, (a.s+b.s)/2)
	if _, calm := a.to(b, c.pace); calm {
		x, first := a.to(&m, c.pace)
		y, second := m.to(b, c.pace)
		if first && second {
			return x + y, nil
		}
	}
	x, err := c.turn(r, a, &m, depth+1)
	if err != nil {
		return 0, err
	}
	y, err := c.turn(r, &m, b, depth+1)
	return x + y, err
}

// to is how far the argument turns from one spot to the next, and whether the
// rates bear that out.
func (a *spot) to(b *spot, pace float64) (turn float64, calm bool) {
	du := b.u - a.u
	if !(abs(du)*max(abs(a.rate), abs(b.rate)) < pace) {
		return 0, false
	}
	turn = cmplx.Phase(b.f * cmplx.Conj(a.f))
	return turn, math.Abs(turn-imag(du*(a.rate+b.rate))/2) < pace/4
}

// paces are the steps that are tried: where counts contradict each other one
// of them took a zero close by for none, which smaller steps do not.
var paces = [...]float64{1, 0.25, 0.0625}

// all finds every zero in a region. known are zeros found by other means.
func (c *search) all(ctx context.Context, r region) (err error) {
	at := c.at
	for _, c.pace = range paces {
		c.work, c.found, c.at = budget, c.found[:0], at
		if err = c.sweep(ctx, r); !errors.Is(err, errContour) {
			return err
		}
	}
	return err
}

// sweep is all with one pace. Where a zero lies on the contour that is moved.
func (c *search) sweep(ctx context.Context, r region) error {
	n, err := c.turns(&r)
	for nudge := 1e-12; err == errContour && nudge < 1e-7; nudge *= 30 {
		r.lo += complex(nudge*(1+r.cut), -nudge)
		n, err = c.turns(&r)
	}
	if err != nil {
		return err
	}
	return c.divide(ctx, r, n, 0)
}

// divide finds the n zeros of a region, splitting it as long as the known
// ones and a Newton iteration do not account for them. Both parts are counted: that they
// add up is part of the proof. The sides meet where the modes of the region are
// strongest: elsewhere rounding would smear the zeros of a mode behind an opaque film.
func (c *search) divide(ctx context.Context, r region, n, depth int) error {
	if n < 0 {
		return errContour
	}
	if n == 0 {
		return nil
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	c.at = c.line.meet(c.line.unknown(r.n2((r.lo + r.hi) / 2)))
	if c.settle(&r, n) {
		return nil
	}
	if depth > 50 {
		return errContour
	}
	for _, at := range [...]float64{0.5, 0.4375, 0.5625, 0.39, 0.61} {
		a, b := r.split(at)
		k, err := c.both(&a, &b, n)
		if err == errContour {
			continue
		}
		if err != nil {
			return err
		}
		if err := c.divide(ctx, a, k, depth+1); err != nil {
			return err
		}
		return c.divide(ctx, b, n-k, depth+1)
	}
	return errContour
}

// both counts the zeros in one of two parts that hold n.
func (c *search) both(a, b *region, n int) (int, error) {
	k, err := c.turns(a)
	if err != nil {
		return 0, err
	}
	l, err := c.turns(b)
	if err == nil && (k < 0 || l < 0 || k+l != n) {
		err = errContour
	}
	return k, err
}

func (r *region) split(at float64) (a, b region) {
	a, b = *r, *r
	if r.width() > r.height() {
		x := real(r.lo) + at*r.width()
		a.hi, b.lo = complex(x, imag(r.hi)), complex(x, imag(r.lo))
		return a, b
	}
	y := imag(r.lo) + at*r.height()
	a.hi, b.lo = complex(real(r.hi), y), complex(real(r.lo), y)
	return a, b
}

// settle tries to name all n zeros of a region.
func (c *search) settle(r *region, n int) bool {
	mark := len(c.found)
	for _, k := range c.known {
		if r.holds(r.s(k)) {
			c.found = append(c.found, k)
		}
	}
	if n == 1 && len(c.found) == mark {
		for _, at := range [...]complex128{0.5 + 0.5i, 0.25 + 0.5i, 0.75 + 0.5i, 0.5 + 0.25i, 0.5 + 0.75i} {
			s := r.lo + complex(real(at)*r.width(), imag(at)*r.height())
			k, ok := c.newton(r.n2(s))
			if ok && r.holds(r.s(k)) {
				c.found = append(c.found, k)
				break
			}
		}
	}
	if len(c.found)-mark == n {
		return true
	}
	c.found = c.found[:mark]
	return false
}

// newton refines N to a zero: until steps are below rounding or, where another
// zero close by makes rounding count for more, no longer shrink.
func (c *search) newton(n2 complex128) (complex128, bool) {
	q := c.line
	u := q.unknown(n2)
	last := math.Inf(1)
	for range 30 {
		c.work--
		q.look(u, c.at)
		d := q.miss(c.at)
		du := d.a / d.b
		if cmplx.IsNaN(du) || cmplx.IsInf(du) {
			return 0, false
		}
		u -= du
		size := abs(du) / abs(u)
		if size < 1e-13 || size < 1e-8 && size > last/2 {
			return q.place(u), real(u) > 0
		}
		last = size
	}
	return 0, false
}

// place is N at u.
func (q *line[T]) place(u T) T {
	return q.base.a + q.lift(u).a
}
