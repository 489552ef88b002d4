package channel

// node is one front: a cell, or two parts of the section put together.
type node struct {
	kids  [2]int // nodes; -1: none (a cell)
	cell  int    // -1: not a cell
	first int    // first of the unknowns eliminated here
	s     int    // how many
	rest  []int32
	maps  [2][]int32 // place in this front of each rest of the kids; of a cell's skeleton: maps[0], -1 where dropped
}

// plan is the best cut of a rectangle known and the work below it.
type plan struct {
	work  float64
	at    int
	cross bool // at is a line between rows
}

// dissection orders the groups by cutting the grid in two again and again,
// each time where the estimated work is least among the cuts looked at (nested dissection, George 1973).
type dissection struct {
	g     *grid
	plans map[rect]plan
	first []int32 // first unknown of each group
	next  int
	nodes []node
	cells map[[2]int]int
}

// Extents in cells: up to some all cuts are tried, above many only the one in the middle of the longer side.
const (
	some = 8
	many = 20
)

// cuts gives the places to cut lo..hi, across being the extent the other way.
func cuts(lo, hi, across int) (from, to int) {
	mid := (lo + hi) / 2
	switch n := hi - lo; {
	case n <= some && across <= many:
		return lo + 1, hi
	case max(n, across) > many && n < across:
		return 0, 0
	case max(n, across) > many:
		return mid, mid + 1
	}
	return mid - 1, mid + 2
}

// best plans the cuts of r.
func (d *dissection) best(r rect) plan {
	if p, ok := d.plans[r]; ok {
		return p
	}
	p := plan{work: -1}
	rest := d.rest(r)
	try := func(at int, cross bool) {
		a, b := r.cut(at, cross)
		s := float64(d.line(r, at, cross))
		w := s*s*s/3 + s*s*rest + s*rest*rest + (s+rest)*(s+rest)
		w += d.best(a).work + d.best(b).work
		if p.work < 0 || w < p.work {
			p = plan{w, at, cross}
		}
	}
	for at, to := cuts(r.i0, r.i1, r.j1-r.j0); at < to; at++ {
		try(at, false)
	}
	for at, to := cuts(r.j0, r.j1, r.i1-r.i0); at < to; at++ {
		try(at, true)
	}
	p.work = max(p.work, 0)
	d.plans[r] = p
	return p
}

func (r rect) cut(at int, cross bool) (a, b rect) {
	a, b = r, r
	if cross {
		a.j1, b.j0 = at, at
	} else {
		a.i1, b.i0 = at, at
	}
	return a, b
}

// rest counts the unknowns on the outline of r that have cells outside.
func (d *dissection) rest(r rect) float64 {
	n := 0
	for _, id := range d.outline(r) {
		if in, out := d.g.touches(id, r); in && out {
			n += d.g.size[id]
		}
	}
	return float64(n)
}

func (d *dissection) outline(r rect) (ids []int) {
	g := d.g
	for i := r.i0; i <= r.i1; i++ {
		ids = append(ids, g.corner(i, r.j0), g.corner(i, r.j1))
		if i < r.i1 {
			ids = append(ids, g.horizontal(i, r.j0), g.horizontal(i, r.j1))
		}
	}
	for j := r.j0; j < r.j1; j++ {
		ids = append(ids, g.vertical(r.i0, j), g.vertical(r.i1, j))
		if j > r.j0 {
			ids = append(ids, g.corner(r.i0, j), g.corner(r.i1, j))
		}
	}
	return ids
}

// line counts the unknowns on a cut of r that end there.
func (d *dissection) line(r rect, at int, cross bool) (n int) {
	g := d.g
	add := func(id int) {
		if in, out := g.touches(id, r); in && !out {
			n += g.size[id]
		}
	}
	if cross {
		for i := r.i0; i <= r.i1; i++ {
			add(g.corner(i, at))
			if i < r.i1 {
				add(g.horizontal(i, at))
			}
		}
		return n
	}
	for j := r.j0; j <= r.j1; j++ {
		add(g.corner(at, j))
		if j < r.j1 {
			add(g.vertical(at, j))
		}
	}
	return n
}

// build makes the nodes below r, children first; it gives the top one (-1: r has no
// active cell) and the groups that it leaves.
func (d *dissection) build(r rect) (top int, left []int) {
	if r.i1-r.i0 == 1 && r.j1-r.j0 == 1 {
		if !d.g.active(r.i0, r.j0) {
			return -1, nil
		}
		c := d.cells[[2]int{r.i0, r.j0}]
		return d.add(node{kids: [2]int{-1, -1}, cell: c}, r, d.outline(r))
	}
	p := d.best(r)
	ra, rb := r.cut(p.at, p.cross)
	a, la := d.build(ra)
	b, lb := d.build(rb)
	if a < 0 {
		return b, lb
	}
	if b < 0 {
		return a, la
	}
	seen := map[int]bool{}
	var groups []int
	for _, id := range append(la, lb...) {
		if !seen[id] {
			seen[id] = true
			groups = append(groups, id)
		}
	}
	return d.add(node{kids: [2]int{a, b}, cell: -1}, r, groups)
}

// add numbers the groups that end in r and appends the node.
func (d *dissection) add(n node, r rect, groups []int) (int, []int) {
	n.first = d.next
	var left []int
	for _, id := range groups {
		if d.g.size[id] == 0 {
			continue
		}
		if _, out := d.g.touches(id, r); out {
			left = append(left, id)
			continue
		}
		d.first[id] = int32(d.next)
		d.next += d.g.size[id]
	}
	n.s = d.next - n.first
	d.nodes = append(d.nodes, n)
	return len(d.nodes) - 1, left
}
