package surface

import "math"

// window chooses the nodes of each lane and gathers their values.
func (s *Surfaces) window(ws *workspace) error {
	size := s.size(ws)
	for _, l := range ws.lanes {
		l.n = 1
		l.lo = l.cell.lo
		if !l.cell.exact {
			n := len(l.axis.x)
			l.n = min(size, n)
			l.lo = min(max(l.cell.lo-(l.n-2)/2, 0), n-l.n)
		}
	}
	whole, err := s.gather(ws)
	if err != nil || whole {
		return err
	}
	if err := s.grow(ws, size); err != nil {
		return err
	}
	_, err = s.gather(ws)
	return err
}

// size is the length of a lane that keeps the window within bounds.
func (s *Surfaces) size(ws *workspace) int {
	between := 0
	for _, l := range ws.lanes {
		if !l.cell.exact {
			between++
		}
	}
	n := most
	for n > 2 && math.Pow(float64(n), float64(between)) > maxWindow/16 {
		n--
	}
	return n
}

// row gives the values of a node.
func (s *Surfaces) row(ws *workspace, node int) ([]float64, error) {
	if n := ws.latest; n != nil && n.family == ws.family && uint(node-n.first) < uint(n.rows) {
		return n.of(node), nil
	}
	batch := ws.family*s.batches.per + node/s.meta.BatchNodes
	recent := &ws.recent[batch%len(ws.recent)]
	if *recent == nil || (*recent).batch != batch {
		n, err := s.batches.holding(ws.family, node)
		if err != nil {
			return nil, err
		}
		*recent = n
	}
	ws.latest = *recent
	return ws.latest.of(node), nil
}

// gather fills the tensor from the window; whole is false when the family is
// absent from one of its nodes.
func (s *Surfaces) gather(ws *workspace) (whole bool, err error) {
	total := 1
	for _, l := range ws.lanes {
		total *= l.n
	}
	x := ws.tensor
	x.reset(total)
	for i := range ws.index {
		ws.index[i] = 0
	}
	for at := range total {
		row, err := s.row(ws, ws.node())
		if err != nil {
			return false, err
		}
		if row[fNeff] != row[fNeff] {
			return false, nil
		}
		x.take(at, row)
		ws.advance()
	}
	x.close()
	return true, nil
}

// node numbers the node at the window positions in index.
func (ws *workspace) node() int {
	node := 0
	for k, l := range ws.lanes {
		node += l.axis.node[l.lo+ws.index[k]]
	}
	return node
}

// advance steps index, the first lane fastest; false at the end.
func (ws *workspace) advance() bool {
	for k, l := range ws.lanes {
		ws.index[k]++
		if ws.index[k] < l.n {
			return true
		}
		ws.index[k] = 0
	}
	return false
}

// reset makes room for n nodes.
func (x *tensor) reset(n int) {
	if cap(x.values) < n*x.count || cap(x.spare) < n*x.count {
		x.values, x.spare = make([]float64, n*x.count), make([]float64, n*x.count)
	}
	x.values, x.spare = x.values[:n*x.count], x.spare[:cap(x.spare)]
	for f := range x.count {
		x.noise[f], x.scale[f], x.missing[f], x.unbound[f] = 0, 0, false, false
	}
}

// take copies a node's row: the values, and the largest of the bounds.
func (x *tensor) take(at int, row []float64) {
	values := x.values[at*x.count : (at+1)*x.count]
	copy(values, row[:fErr])
	copy(values[fErr:], row[fSensitivity:])
	scale, missing := x.scale[:len(values)], x.missing[:len(values)]
	for f, v := range values {
		if v < 0 {
			v = -v
		}
		if v > scale[f] {
			scale[f] = v
		} else if v != v {
			missing[f] = true
		}
	}
	for f, e := range row[fErr : 2*fErr] {
		if e > x.noise[f] {
			x.noise[f] = e
		} else if e != e {
			x.unbound[f] = true
		}
	}
}

// close gives the sensitivities, which have no bound of their own, the
// relative one of ng.
func (x *tensor) close() {
	relative := x.noise[fNg] / x.scale[fNg]
	for f := fErr; f < x.count; f++ {
		x.noise[f] = relative * x.scale[f]
		x.unbound[f] = x.unbound[fNg] || x.missing[fNg]
		if x.unbound[f] {
			x.noise[f] = 0
		}
	}
	copy(x.floor, x.noise)
}

// grow widens the window from the cell, a node at a time and lane by lane, as long as
// the family is present at every node of it.
func (s *Surfaces) grow(ws *workspace, size int) error {
	for _, l := range ws.lanes {
		l.lo, l.n = l.cell.lo, l.cell.nodes()
	}
	if err := s.corners(ws); err != nil {
		return err
	}
	for grown := true; grown; {
		grown = false
		for k, l := range ws.lanes {
			if l.cell.exact || l.n >= size {
				continue
			}
			ok, err := s.widen(ws, k)
			if err != nil {
				return err
			}
			grown = grown || ok
		}
	}
	return nil
}

// corners checks that the family is present all around the cell.
func (s *Surfaces) corners(ws *workspace) error {
	for i := range ws.index {
		ws.index[i] = 0
	}
	for more := true; more; more = ws.advance() {
		row, err := s.row(ws, ws.node())
		if err != nil {
			return err
		}
		if row[fNeff] != row[fNeff] {
			return s.absent(ws)
		}
	}
	return nil
}

func (s *Surfaces) absent(ws *workspace) error {
	e := &AbsentError{Family: s.names[ws.family]}
	for _, l := range ws.lanes {
		e.Between = e.Between || !l.cell.exact
	}
	e.At = ws.describe(func(k int) int { return ws.lane[k].lo + ws.index[s.rank(k)] })
	return e
}

// rank is where an axis stands in the order of collapsing.
func (s *Surfaces) rank(axis int) int {
	for k, i := range s.order {
		if i == axis {
			return k
		}
	}
	return -1
}

// widen adds the nodes on one side of lane k, the side that has fewer first.
func (s *Surfaces) widen(ws *workspace, k int) (bool, error) {
	l := ws.lanes[k]
	below, above := l.lo-1, l.lo+l.n
	sides := [2]int{below, above}
	if l.cell.lo-l.lo > l.lo+l.n-2-l.cell.lo {
		sides = [2]int{above, below}
	}
	for _, p := range sides {
		if p < 0 || p >= len(l.axis.x) {
			continue
		}
		ok, err := s.slab(ws, k, p)
		if err != nil {
			return false, err
		}
		if ok {
			l.lo, l.n = min(l.lo, p), l.n+1
			return true, nil
		}
	}
	return false, nil
}

// slab reports whether the family is present at every node of the window
// with lane k at position p.
func (s *Surfaces) slab(ws *workspace, k, p int) (bool, error) {
	l := ws.lanes[k]
	lo, n := l.lo, l.n
	l.lo, l.n = p, 1
	defer func() { l.lo, l.n = lo, n }()
	for i := range ws.index {
		ws.index[i] = 0
	}
	for more := true; more; more = ws.advance() {
		row, err := s.row(ws, ws.node())
		if err != nil {
			return false, err
		}
		if row[fNeff] != row[fNeff] {
			return false, nil
		}
	}
	return true, nil
}
