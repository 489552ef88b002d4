package slab

import (
	"context"
	"math"
)

// ladder gives the modes of one lossless line from the highest index down, and locates
// none that is not asked for.
type ladder struct {
	line   *line[float64]
	gauges [2]gauge // one, or of a mirrored line those of the even and the odd modes
	spans  [2]span
	kinds  int
	total  int
	next   int  // the number of the next mode
	ready  bool // it has been located
	head   pick // the next mode, if it has
}

// climb sets the ladder to a line and counts its modes.
func (l *ladder) climb(q *line[float64]) {
	l.line, l.kinds, l.total, l.next, l.ready = q, 1, 0, 0, false
	if q.mirror {
		l.kinds = 2
	}
	for k := range l.kinds {
		q.turn(k)
		l.gauges[k].measure(q)
		n := 0
		l.spans[k], n = l.gauges[k].count()
		l.total += n
	}
}

// take removes the next mode.
func (l *ladder) take() pick {
	l.next, l.ready = l.next+1, false
	return l.head
}

// margin is how far, relative to N, counting tells modes apart beyond doubt.
const margin = 1e-9

// under reports whether the next mode is certainly below the given N, without locating it.
func (l *ladder) under(n2 float64) bool {
	if l.next == l.total {
		return true
	}
	q := l.line
	n2 -= margin * n2
	if q.branch && !(n2 > q.base.a) {
		return false
	}
	g := &l.gauges[l.next%l.kinds]
	return g.above(q.unknown(n2)) <= l.next/l.kinds
}

// choose takes the higher of two ladders' next modes; of equals, TE goes before TM.
func (s *Solver) choose() pick {
	te, tm := &s.ladders[0], &s.ladders[1]
	first, second := te, tm
	if te.next == te.total || tm.next != tm.total && !te.ready && (tm.ready || tm.next < te.next) {
		first, second = tm, te
	}
	s.locate(first)
	if !second.ready && second.under(first.head.n2) {
		return first.take()
	}
	s.locate(second)
	if te.head.n2 >= tm.head.n2 {
		return te.take()
	}
	return tm.take()
}

// locate finds the next mode of a ladder.
func (s *Solver) locate(l *ladder) {
	if l.ready {
		return
	}
	q, m, k := l.line, l.next/l.kinds, l.next%l.kinds
	l.ready = true
	l.head = pick{tm: q.tm, m: l.next, odd: l.next%2 == 1, uniform: q.tm && s.uniform(), plain: s.plain()}
	p := &l.head
	if l.next == 0 && q.tm && s.plates() {
		p.tem, p.n2 = true, q.top
		return
	}
	u := l.gauges[k].locate(&l.spans[k], m)
	p.u, p.n2 = complex(u, 0), q.place(u)
	q.turn(k)
	s.separate(q, &l.gauges[k], p, m)
}

// list takes the first modes of both polarisations.
func (s *Solver) list(ctx context.Context, want int) error {
	for range min(want, s.ladders[0].total+s.ladders[1].total) {
		if err := ctx.Err(); err != nil {
			return err
		}
		s.picks = append(s.picks, s.choose())
	}
	return nil
}

// above counts the modes above u.
func (g *gauge) above(u float64) int {
	m, _ := g.phase(u)
	return max(0, int(math.Ceil(m/math.Pi)))
}
