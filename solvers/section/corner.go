package section

import "math"

// corners says which lines and which levels meet a corner: a point where
// media join other than along one straight interface. Toward these the mesh is graded.
func (w *web) corners() (lines, levels []bool) {
	lines, levels = make([]bool, len(w.lines)), make([]bool, len(w.plan.levels))
	index := make(map[*line]int, len(w.lines))
	for i, l := range w.lines {
		index[l] = i
	}
	for j := range w.plan.levels {
		for _, k := range []int{j - 1, j} { // the rows below and above
			if k < 0 || k >= len(w.at) {
				continue
			}
			for _, l := range w.at[k] {
				if w.isCorner(l, index, j) {
					lines[index[l]], levels[j] = true, true
				}
			}
		}
	}
	return lines, levels
}

// isCorner looks at the four media round line l at level j. At the lowest
// and the highest level, a metal or mirror plane, it sees their images.
func (w *web) isCorner(l *line, index map[*line]int, j int) bool {
	below, above := j-1, j
	if j == 0 {
		below = j
	}
	if j == len(w.at) {
		above = j - 1
	}
	sw, se := w.beside(l, index, below)
	nw, ne := w.beside(l, index, above)
	if sw == se && nw == ne {
		return false
	}
	return sw != nw || se != ne || !w.straight(l, j)
}

// beside gives the media left and right of a line in row k.
func (w *web) beside(l *line, index map[*line]int, k int) (left, right int) {
	row, c := w.at[k], 0
	for c < len(row) && index[row[c]] < index[l] {
		c++
	}
	left = w.plan.rows[k].cells[c].medium
	if c < len(row) && row[c] == l {
		c++
	}
	return left, w.plan.rows[k].cells[c].medium
}

// straight reports whether a line does not bend at level j.
func (w *web) straight(l *line, j int) bool {
	lean := func(k int) float64 {
		return (l.x[k+1].V - l.x[k].V) / (w.plan.levels[k+1].V - w.plan.levels[k].V)
	}
	switch j {
	case 0:
		return math.Abs(lean(0)) <= 1e-9
	case len(w.at):
		return math.Abs(lean(j-1)) <= 1e-9
	}
	return math.Abs(lean(j)-lean(j-1)) <= 1e-9
}
