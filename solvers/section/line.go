package section

import (
	"math"
	"slices"
)

// line is a vertical mesh line from the lowest to the highest level. It
// carries walls in some rows, one above the other; at the levels where these end it is fixed.
type line struct {
	x           []Length // at each level
	fixed       []bool
	first, last int // levels where it is fixed
}

// web is the lines of a plan, left to right.
type web struct {
	plan  *plan
	lines []*line
	at    [][]*line // the line of each row's walls
	split []bool
	tol   float64
	lean  float64 // the most that a shared line leans between its walls
}

// weave gives every wall of a plan within finite levels its line, orders
// the lines and settles where they run between walls. lean is the most that a line leans between walls that share it.
func weave(p *plan, split []bool, tol, lean float64) *web {
	w := &web{plan: p, split: split, tol: tol, lean: lean}
	for k := range p.rows {
		w.thread(k)
	}
	w.order()
	w.share()
	w.settle()
	return w
}

// thread puts the walls of row k on lines: on that of the wall they stand
// on, or on new ones.
func (w *web) thread(k int) {
	var row []*line
	below := 0
	for _, wall := range w.plan.rows[k].walls {
		var l *line
		for ; k > 0 && below < len(w.at[k-1]); below++ {
			if top := w.at[k-1][below].x[k]; near(top, wall.Bottom, w.tol) {
				l = w.at[k-1][below]
				markSplit(w.split, top, wall.Bottom)
				l.x[k] = mean(top, wall.Bottom)
				below++
				break
			} else if top.V > wall.Bottom.V {
				break
			}
		}
		if l == nil {
			l = &line{x: make([]Length, len(w.plan.levels)), fixed: make([]bool, len(w.plan.levels))}
			l.x[k] = wall.Bottom
			w.lines = append(w.lines, l)
		}
		l.x[k+1], l.fixed[k], l.fixed[k+1] = wall.Top, true, true
		row = append(row, l)
	}
	w.at = append(w.at, row)
}

// ends finds the first and the last level where a line is fixed.
func (l *line) ends() {
	l.first = slices.Index(l.fixed, true)
	for j, f := range l.fixed {
		if f {
			l.last = j
		}
	}
}

// order sorts the lines from left to right: by their places at every level
// where two of them are fixed, which cannot contradict each other since walls do not cross, and by
// x where nothing else decides.
func (w *web) order() {
	before := make(map[*line]int, len(w.lines)) // how many lines still have to come first
	after := make(map[*line][]*line, len(w.lines))
	for j := range w.plan.levels {
		var here []*line
		for _, l := range w.lines {
			if l.fixed[j] {
				here = append(here, l)
			}
		}
		slices.SortStableFunc(here, func(a, b *line) int { return compare(a.x[j].V, b.x[j].V) })
		for i := 1; i < len(here); i++ {
			after[here[i-1]] = append(after[here[i-1]], here[i])
			before[here[i]]++
		}
	}
	sorted := make([]*line, 0, len(w.lines))
	open := slices.Clone(w.lines)
	slices.SortStableFunc(open, func(a, b *line) int { return compare(a.place(), b.place()) })
	for len(open) > 0 {
		i := max(slices.IndexFunc(open, func(l *line) bool { return before[l] == 0 }), 0)
		l := open[i]
		open = slices.Delete(open, i, i+1)
		sorted = append(sorted, l)
		for _, next := range after[l] {
			before[next]--
		}
	}
	w.lines = sorted
}

// place is the mean of a line's fixed places.
func (l *line) place() float64 {
	sum, n := 0.0, 0.0
	for j, f := range l.fixed {
		if f {
			sum, n = sum+l.x[j].V, n+1
		}
	}
	return sum / n
}

// share lets neighbours that are fixed at different levels be one line where it would not lean
// too much between them.
func (w *web) share() {
	kept := w.lines[:0]
	moved := map[*line]*line{}
	for _, l := range w.lines {
		if n := len(kept); n > 0 && w.canShare(kept[n-1], l) {
			kept[n-1].take(l)
			moved[l] = kept[n-1]
			continue
		}
		kept = append(kept, l)
	}
	w.lines = kept
	for _, row := range w.at {
		for i, l := range row {
			if to := moved[l]; to != nil {
				row[i] = to
			}
		}
	}
}

func (w *web) canShare(a, b *line) bool {
	last, of := -1, a
	for j := range a.fixed {
		if a.fixed[j] && b.fixed[j] {
			return false
		}
		if !a.fixed[j] && !b.fixed[j] {
			continue
		}
		now := a
		if b.fixed[j] {
			now = b
		}
		if last >= 0 && now != of && math.Abs(now.x[j].V-of.x[last].V) > w.lean*(w.plan.levels[j].V-w.plan.levels[last].V)+w.tol {
			return false
		}
		last, of = j, now
	}
	return true
}

func (l *line) take(from *line) {
	for j, f := range from.fixed {
		if f {
			l.x[j], l.fixed[j] = from.x[j], true
		}
	}
}
