package section

import "math"

// settle finds where lines run at levels where they are free: straight on
// from their nearest wall, straight between two of them, and kept apart from their neighbours.
func (w *web) settle() {
	for _, l := range w.lines {
		w.extend(l)
	}
	gaps := w.gaps()
	n := len(w.plan.levels)
	for range 2 { // a line pushed aside at one level runs on from there
		for j := range n {
			w.follow(j, -1)
			w.separate(j, gaps)
		}
		for j := n - 1; j >= 0; j-- {
			w.follow(j, +1)
			w.separate(j, gaps)
		}
	}
}

// extend runs a line on from its fixed places.
func (w *web) extend(l *line) {
	l.ends()
	below := l.first
	for j := range l.x {
		switch {
		case j < l.first:
			l.x[j] = l.x[l.first]
		case j > l.last:
			l.x[j] = l.x[l.last]
		case l.fixed[j]:
			below = j
		default:
			above := j
			for !l.fixed[above] {
				above++
			}
			y := w.plan.levels
			t := y[j].minus(y[below]).over(y[above].minus(y[below]))
			l.x[j] = l.x[below].plus(l.x[above].minus(l.x[below]).times(t))
		}
	}
}

// follow lets the lines that came to an end on the side toward run on from
// the level there: straight, unless that would widen a narrow column beside a wall too fast.
func (w *web) follow(j, toward int) {
	from := j + toward
	if from < 0 || from >= len(w.plan.levels) {
		return
	}
	for i, l := range w.lines {
		if toward < 0 && j > l.last || toward > 0 && j < l.first {
			l.x[j] = l.x[from]
			if n := w.nearest(i, from); n != nil && n.fixed[j] {
				l.pull(n, j, from)
			}
		}
	}
}

// nearest is the nearer neighbour of line i at a level.
func (w *web) nearest(i, j int) *line {
	var best *line
	for _, n := range []int{i - 1, i + 1} {
		if n >= 0 && n < len(w.lines) && (best == nil || w.away(i, n, j) < w.away(i, i-1, j)) {
			best = w.lines[n]
		}
	}
	return best
}

func (w *web) away(i, n, j int) float64 { return math.Abs(w.lines[i].x[j].V - w.lines[n].x[j].V) }

// widening is by how much a column beside a wall may widen from level to
// level.
const widening = 3

// pull keeps a line that runs on from level from near its neighbour.
func (l *line) pull(n *line, j, from int) {
	most := l.x[from].minus(n.x[from]).scaled(widening)
	if now := l.x[j].V - n.x[j].V; math.Abs(now) > math.Abs(most.V) {
		l.x[j] = n.x[j].plus(most)
	}
}

// gaps gives how far each line stands from the one before it where both are
// fixed, at the least; V is infinite where they never are.
func (w *web) gaps() []Length {
	gaps := make([]Length, len(w.lines))
	for i := range w.lines {
		gaps[i].V = math.Inf(1)
		if i == 0 {
			continue
		}
		a, b := w.lines[i-1], w.lines[i]
		for j := range a.fixed {
			if a.fixed[j] && b.fixed[j] && b.x[j].V-a.x[j].V < gaps[i].V {
				gaps[i] = b.x[j].minus(a.x[j])
			}
		}
	}
	return gaps
}

// separate keeps the free lines at level j between the fixed ones and apart
// from each other.
func (w *web) separate(j int, gaps []Length) {
	low := *w.plan.left
	for from := 0; from < len(w.lines); {
		to := from
		for to < len(w.lines) && !w.lines[to].fixed[j] {
			to++
		}
		high := *w.plan.right
		if to < len(w.lines) {
			high = w.lines[to].x[j]
		}
		if to > from {
			w.spread(j, from, to, low, high, gaps)
		}
		low, from = high, to+1
	}
}

// spread keeps lines from to to-1 between low and high: neighbours at least as far
// apart as between their walls, or as they already are, or else an even share of half the room.
func (w *web) spread(j, from, to int, low, high Length, gaps []Length) {
	share := high.minus(low).scaled(0.5 / float64(to-from+1))
	place := func(i int) Length {
		switch {
		case i < from:
			return low
		case i == to:
			return high
		}
		return w.lines[i].x[j]
	}
	apart := make([]Length, to-from+1)
	for i := range apart {
		apart[i] = share
		least := Length{V: math.Inf(1)}
		if at := from + i; at < len(gaps) {
			least = gaps[at]
		}
		if now := place(from + i).minus(place(from + i - 1)); math.IsInf(least.V, 1) && now.V > 0 {
			least = now
		}
		if least.V < share.V {
			apart[i] = least
		}
	}
	for i := from; i < to; i++ {
		if least := place(i - 1).plus(apart[i-from]); w.lines[i].x[j].V < least.V {
			w.lines[i].x[j] = least
		}
	}
	for i := to - 1; i >= from; i-- {
		if most := place(i + 1).minus(apart[i+1-from]); w.lines[i].x[j].V > most.V {
			w.lines[i].x[j] = most
		}
	}
}
