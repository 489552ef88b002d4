package slab

import (
	"context"
	"math"
	"slices"

	"betaloom/solvers"
)

// lossy finds the modes of a stack with complex or negative permittivities.
// Where the real parts alone make a lossless guide its modes are followed as the
// imaginary parts grow from nothing, and the argument principle says
// whether these are all; where it says otherwise, and where the real parts make no
// definite problem, it finds them.
func (s *Solver) lossy(ctx context.Context, stack *Stack, want int) ([]solvers.Mode, solvers.Count, error) {
	s.picks = s.picks[:0]
	mirror := mirrored(stack)
	followed := true
	s.realOnly = realStack(stack)
	for i := range s.loss.lines {
		q := &s.loss.lines[i]
		q.setup(s.out.w, stack, i == 1, mirror, 1)
		kept, err := s.polarisation(ctx, stack, i == 1, mirror)
		if err != nil {
			return nil, solvers.Count{}, s.doubt(ctx, err)
		}
		followed = followed && kept
	}
	count := solvers.Count{N: len(s.picks), Proof: "argument principle"}
	if followed {
		count.Proof = "argument principle, and the node count of the lossless guide"
	}
	if count.N == 0 {
		count.Reason = s.reason(stack)
		return nil, count, nil
	}
	slices.SortStableFunc(s.picks, lower)
	s.picks = s.picks[:min(want, len(s.picks))]
	s.out.room(len(s.picks))
	for i := range s.picks {
		p := &s.picks[i]
		q := &s.loss.lines[index(p.tm)]
		q.turn(index(p.odd))
		finish(s, q, p, s.out.next(i))
	}
	return s.out.modes, count, nil
}

// doubt is the error of a search that did not end.
func (s *Solver) doubt(ctx context.Context, err error) error {
	if ctx.Err() != nil {
		return ctx.Err()
	}
	return &solvers.ConvergenceError{Where: "slab", Err: err}
}

// polarisation lists the modes of one polarisation. followed says that all
// came from those of the lossless guide.
func (s *Solver) polarisation(ctx context.Context, stack *Stack, tm, mirror bool) (followed bool, err error) {
	q := &s.loss.lines[index(tm)]
	first := len(s.picks)
	kinds := 1
	if mirror {
		kinds = 2
	}
	followed = definite(q)
	for k := range kinds {
		q.turn(k)
		all, err := s.kind(ctx, stack, q, k, kinds)
		if err != nil {
			return false, err
		}
		followed = followed && all
	}
	s.number(s.picks[first:], followed || definite(q))
	return followed, nil
}

// definite reports whether the real parts make a Sturm-Liouville problem.
func definite(q *line[complex128]) bool {
	if !q.tm {
		return true
	}
	ok := true
	q.media(func(c *coefs[complex128], _ float64) {
		ok = ok && real(c.e.a) > 0 && real(c.inv.a) > 0
	})
	return ok
}

// kind lists the modes of one polarisation and symmetry.
func (s *Solver) kind(ctx context.Context, stack *Stack, q *line[complex128], k, kinds int) (bool, error) {
	r, ok, err := q.where()
	if err != nil || !ok {
		return err == nil, err
	}
	c := &s.search
	*c = search{line: q, at: max(q.ref, 0), known: c.known[:0], found: c.found[:0], work: budget}
	first := len(s.picks)
	if q.tm && k == 0 && s.plates() && r.guided(q.films[0].live.e.a) {
		n2 := q.films[0].live.e.a
		s.picks = append(s.picks, pick{tm: true, tem: true, uniform: s.uniform(), n2: real(n2), im: imag(n2)})
	}
	if definite(q) {
		if err := s.follow(ctx, stack, q, &r, k, kinds); err != nil {
			return false, err
		}
	}
	for _, p := range s.picks[first:] {
		c.known = append(c.known, complex(p.n2, p.im))
	}
	if err := c.all(ctx, r); err != nil {
		return false, err
	}
	all := true
	for _, n2 := range c.found {
		if !r.guided(n2) || slices.Contains(c.known, n2) {
			continue
		}
		all = false
		if s.realOnly && math.Abs(imag(n2)) < 1e-12*abs(n2) {
			n2 = complex(real(n2), 0)
		}
		s.picks = append(s.picks, pick{tm: q.tm, uniform: q.tm && s.uniform(), m: -1, odd: k == 1, u: q.unknown(n2), n2: real(n2), im: imag(n2)})
	}
	return all, nil
}

// number gives modes that did not come from a lossless one the lowest
// numbers left, from the highest index down.
func (s *Solver) number(picks []pick, followed bool) {
	slices.SortStableFunc(picks, lower)
	if !followed {
		for i := range picks {
			picks[i].m = i
		}
		return
	}
	next := 0
	for i := range picks {
		if picks[i].m >= 0 {
			continue
		}
		for slices.ContainsFunc(picks, func(p pick) bool { return p.m == next }) {
			next++
		}
		picks[i].m = next
	}
}

// maxFollowed bounds how many modes of one kind are followed.
const maxFollowed = 2000

// follow traces the modes of the lossless guide.
func (s *Solver) follow(ctx context.Context, stack *Stack, q *line[complex128], r *region, k, kinds int) error {
	lossless := &s.real.lines[index(q.tm)]
	lossless.setup(s.out.w, stack, q.tm, q.mirror, 1)
	lossless.turn(k)
	g := &s.ladders[0].gauges[0]
	g.measure(lossless)
	sp, n := g.count()
	if n > maxFollowed {
		return errBudget
	}
	for m := range n {
		if err := ctx.Err(); err != nil {
			return err
		}
		u := g.locate(&sp, m)
		p := pick{tm: q.tm, uniform: q.tm && s.uniform(), m: m*kinds + k, odd: k == 1, u: complex(u, 0), n2: lossless.place(u)}
		s.inWell(lossless, g, &p, m)
		ok := s.trace(stack, q, &p, k)
		if s.search.work < 0 {
			return errBudget
		}
		if !ok || !r.guided(complex(p.n2, p.im)) || p.hi == 0 && slices.ContainsFunc(s.picks, s.twin(q, &p)) {
			continue
		}
		s.picks = append(s.picks, p)
	}
	return nil
}

// inWell keeps a mode to its own well where the films beyond are opaque enough.
func (s *Solver) inWell(q *line[float64], g *gauge, p *pick, number int) {
	if len(q.wells(real(p.u), opaqueLossy, s.wells)) > 1 {
		s.separate(q, g, p, number)
	}
}

// twin finds a mode that has been listed before.
func (s *Solver) twin(q *line[complex128], p *pick) func(pick) bool {
	return func(o pick) bool {
		return o.tm == p.tm && o.odd == p.odd && abs(complex(o.n2-p.n2, o.im-p.im)) < 1e-9*p.n2
	}
}

// trace follows one mode from N without loss to N with all of it.
func (s *Solver) trace(stack *Stack, q *line[complex128], p *pick, k int) bool {
	step, at := 1.0, 0.0
	n2 := complex(p.n2, 0)
	for at < 1 {
		next := min(1, at+step)
		line := q
		if next < 1 {
			line = &s.loss.way
			line.setup(s.out.w, stack, q.tm, q.mirror, next)
			line.turn(k)
		}
		v, ok := approach(line, n2, p)
		s.search.work -= 8
		if ok {
			at, n2 = next, v
			step *= 2
			continue
		}
		if step /= 2; step < 1e-3 || s.search.work < 0 {
			return false
		}
	}
	p.u, p.n2, p.im = q.unknown(n2), real(n2), imag(n2)
	return true
}

// approach is a Newton iteration that must contract from its first step on.
func approach(q *line[complex128], n2 complex128, p *pick) (complex128, bool) {
	if p.hi > 0 {
		q.narrow(p.lo, p.hi)
		defer q.widened()
	}
	u := q.unknown(n2)
	m := q.meet(u)
	last := math.Inf(1)
	for i := range 12 {
		q.look(u, m)
		d := q.miss(m)
		du := d.a / d.b
		size := abs(du)
		if !(size <= 0.3*last) && size > 1e-13*abs(u) || i == 0 && size > 0.2*abs(u) {
			return 0, false
		}
		u -= du
		if last = size; size <= 1e-13*abs(u) {
			return q.place(u), real(u) > 0
		}
	}
	return 0, false
}
