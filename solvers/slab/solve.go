package slab

import (
	"cmp"
	"context"
	"fmt"
	"math"

	"betaloom/solvers"
)

// pick is a mode that has been located.
type pick struct {
	tm, tem, uniform bool
	plain            bool // uniform, without loss or dispersion
	odd              bool // of a mirrored stack
	m                int
	u                complex128
	n2, im           float64 // N
	lo, hi           int     // the films of its own well, if hi is set
	spread           float64 // how far in group index others are that share its N
}

// pair is the two polarisations' lines.
type pair[T scalar] struct {
	lines [2]line[T]
	way   line[T] // with part of the loss
}

// solve finds the modes of a lossless stack.
func (s *Solver) lossless(ctx context.Context, stack *Stack, want int) ([]solvers.Mode, solvers.Count, error) {
	s.picks = s.picks[:0]
	mirror := mirrored(stack)
	for i := range s.ladders {
		q := &s.real.lines[i]
		q.setup(s.out.w, stack, i == 1, mirror, 1)
		s.ladders[i].climb(q)
	}
	count := solvers.Count{N: s.ladders[0].total + s.ladders[1].total, Proof: "node count"}
	if count.N == 0 {
		count.Reason = s.reason(stack)
		return nil, count, nil
	}
	if err := s.list(ctx, want); err != nil {
		return nil, solvers.Count{}, err
	}
	s.out.room(len(s.picks))
	for i := range s.picks {
		if err := ctx.Err(); err != nil {
			return nil, solvers.Count{}, err
		}
		p := &s.picks[i]
		q := &s.real.lines[index(p.tm)]
		q.turn(index(p.odd))
		finish(s, q, p, s.out.next(i))
	}
	return s.out.modes, count, nil
}

func index(tm bool) int {
	if tm {
		return 1
	}
	return 0
}

// lower orders lossy modes from the highest Re n down, ties TE before TM, then by number.
func lower(a, b pick) int {
	return cmp.Or(cmp.Compare(b.index(), a.index()), index(a.tm)-index(b.tm), a.m-b.m)
}

// index is Re n.
func (p *pick) index() float64 { return real(csqrt(complex(p.n2, p.im))) }

// plates reports whether the stack lies between two metal planes and has one and the
// same eps_y: its lowest mode is then TEM, with N = eps_y exactly.
func (s *Solver) plates() bool {
	return s.out.stack.GroundBottom && s.out.stack.GroundTop && s.alike(1)
}

// uniform reports whether the whole guide is one medium.
func (s *Solver) uniform() bool { return s.alike(0) && s.alike(1) && s.alike(2) }

// plain reports whether it is, and its permittivity does not depend on frequency.
func (s *Solver) plain() bool {
	for _, e := range s.out.stack.Layers[0].Eps {
		if e.W != 0 || e.WW != 0 || e.WWW != 0 {
			return false
		}
	}
	return s.uniform()
}

func (s *Solver) alike(c int) bool {
	l := s.out.stack.Layers
	for i := range l {
		if !same(&l[0].Eps[c], &l[i].Eps[c]) {
			return false
		}
	}
	return true
}

// finish derives a located mode and writes it.
func finish[T scalar](s *Solver, q *line[T], p *pick, m *solvers.Mode) {
	norm := derive(q, p)
	fill(&s.out, q, norm, p, m)
	unsure(p, m)
	release(q, p)
}

// derive carries a located mode's field through the stack as it moves with frequency, or through the mode's own well
// where it has one; release makes the line whole again.
func derive[T scalar](q *line[T], p *pick) (norm linear[T]) {
	u := from[T](p.u)
	q.meets = 0
	if p.hi > 0 {
		q.narrow(p.lo, p.hi)
	}
	if p.tem {
		q.u = q.films[q.ref].live.e
		q.carry(0)
	} else {
		var slope T
		q.meets = q.meet(u)
		var ok bool
		if u, slope, ok = q.polish(u, q.meets); !ok && q.branch && modulus(u) < faint {
			u, slope = q.touch(u, slope, q.meets)
		}
		q.expand(u, slope, q.meets)
	}
	return q.gather(q.meets, q.shares[:len(q.films)], &q.tails)
}

func release[T scalar](q *line[T], p *pick) {
	if p.hi > 0 {
		q.widened()
	}
}

// reason says why nothing is guided.
func (s *Solver) reason(stack *Stack) string {
	layer, best, cut := -1, math.Inf(-1), math.Inf(-1)
	for i := range stack.Layers {
		l := &stack.Layers[i]
		for c := range 2 {
			n := real(sqrt(l.Eps[c].V))
			if l.HalfSpace {
				cut = max(cut, n)
			} else if real(l.Thickness.V) > 0 && n > best {
				layer, best = i, n
			}
		}
	}
	switch {
	case layer < 0:
		return "no guided mode, because no layer has a thickness"
	case math.IsInf(cut, -1):
		return "no guided mode, because every mode is below cut-off"
	case best <= cut:
		return fmt.Sprintf("no guided mode, because no layer has an index above %.6g, that of the half-spaces", cut)
	}
	return fmt.Sprintf("no guided mode, because the layers above the half-spaces' index of %.6g are too thin", cut)
}
