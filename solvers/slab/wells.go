package slab

import (
	"math"
	"slices"

	"betaloom/solvers"
)

// Two wells behind an opaque film can have modes that agree in every digit
// although the stack has no mirror plane. Carried across the whole stack such modes
// would be mixed by rounding alone, so each is given its own well: the films
// between two opaque ones, which then stand for half-spaces.

// opaque is the number of decay lengths from which on a film may separate
// wells: what is beyond shifts N by less than its rounding.
const opaque = 17.0

// opaqueLossy is that number where modes are followed in their wells from the start: then even
// two that resonate split by less than rounding.
const opaqueLossy = 34.0

// agree is how far apart, relative to N, modes are not told apart.
const agree = 64 * ulp

// well is a run of films and the mode in it.
type well struct {
	lo, hi int
	u, n2  float64
	ng     float64
}

// whole keeps the parts of a line that has been narrowed.
type whole[T scalar] struct {
	films []film[T]
	ends  [2]side[T]
	ref   int
}

// narrow restricts a line to films lo to hi, between half-spaces of the films
// beyond; widened undoes it.
func (q *line[T]) narrow(lo, hi int) {
	q.full = whole[T]{films: q.films, ends: q.ends, ref: q.ref}
	if lo > 0 {
		q.ends[0] = q.films[lo-1].beyond()
	}
	if hi < len(q.films) {
		q.ends[1] = q.films[hi].beyond()
	}
	for i := range lo {
		q.origin += q.films[i].d
	}
	q.films, q.ref = q.films[lo:hi], 0
	for i := range q.films {
		if re(q.films[i].live.e.a) > re(q.films[q.ref].live.e.a) {
			q.ref = i
		}
	}
}

func (f *film[T]) beyond() side[T] {
	return side[T]{closure: open, layer: f.layer, twin: f.twin, live: f.live}
}

func (q *line[T]) widened() {
	q.films, q.ends, q.ref, q.origin = q.full.films, q.full.ends, q.full.ref, 0
}

// wells lists the runs of films between opaque ones, at the mode u.
func (q *line[T]) wells(u T, limit float64, dst []well) []well {
	dst = dst[:0]
	if len(q.films) < 3 {
		return dst
	}
	q.lookAll(u)
	lo, guides := 0, false
	for i := range len(q.films) + 1 {
		if i < len(q.films) && re(q.z[i].a) > -limit*limit {
			guides = guides || re(q.z[i].a) > 0
			continue
		}
		if guides {
			dst = append(dst, well{lo: lo, hi: i})
		}
		lo, guides = i+1, false
	}
	return dst
}

// separate gives a located mode its own well if it shares its N, to rounding,
// with another. number is the mode's number on this line.
func (s *Solver) separate(q *line[float64], g *gauge, p *pick, number int) {
	s.wells = q.wells(real(p.u), opaque, s.wells)
	if len(s.wells) < 2 {
		return
	}
	kept := s.wells[:0]
	for _, w := range s.wells {
		q.narrow(w.lo, w.hi)
		m := q.meet(real(p.u))
		u, slope, ok := q.polish(real(p.u), m)
		w.u, w.n2 = u, q.place(u)
		if ok && math.Abs(w.n2-p.n2) <= agree*p.n2 && u > 0 {
			q.expand(u, slope, m)
			n2 := q.square()
			w.ng = n2.b/(2*math.Sqrt(n2.a)) + math.Sqrt(n2.a)
			kept = append(kept, w)
		}
		q.widened()
	}
	if len(kept) < 2 {
		return
	}
	slices.SortStableFunc(kept, func(a, b well) int {
		switch {
		case a.n2 > b.n2:
			return -1
		case a.n2 < b.n2:
			return 1
		}
		return 0
	})
	i := number - g.above(q.unknown(kept[0].n2*(1+2*agree)))
	if i < 0 || i >= len(kept) {
		return
	}
	w := kept[i]
	p.lo, p.hi, p.u, p.n2 = w.lo, w.hi, complex(w.u, 0), w.n2
	for _, o := range kept {
		p.spread = max(p.spread, math.Abs(o.ng-w.ng))
	}
}

// unsure widens the bounds of a mode that rounding cannot tell from another of
// a different group index: how the two mix is not known, nor how sharply they
// avoid each other.
func unsure(p *pick, m *solvers.Mode) {
	if !(p.spread > 1e3*m.NgErr) { // nor where that is not known
		return
	}
	m.NgErr += p.spread
	m.GVDErr, m.Beta3Err = math.NaN(), math.NaN()
	m.Flags = flagAvoided
}
