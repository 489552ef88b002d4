package channel

import (
	"fmt"

	"betaloom/solvers/internal/ldl"
)

// factor is the LDL' factorisation of a system at one N: first the inner unknowns of
// every cell, class by class, then the fronts up the tree. It can be filled again.
type factor[T ldl.Number] struct {
	s        *system[T]
	blocks   []ldl.Front[T] // of the classes, cell by cell
	from     []int          // first block of each cell
	fronts   []ldl.Front[T] // of the nodes
	negative int
	growth   float64

	stack, rest, work, small []T
}

// memory hands out pieces of two slabs.
type memory[T ldl.Number] struct {
	numbers []T
	places  []int32
}

func (m *memory[T]) front(n, s int) (f ldl.Front[T]) {
	take := n*s + s
	if len(m.numbers) < take {
		m.numbers = make([]T, max(take, 1<<15))
	}
	if len(m.places) < s {
		m.places = make([]int32, max(s, 1<<12))
	}
	f = ldl.Front[T]{N: n, S: s, Panel: m.numbers[: n*s : n*s], Off: m.numbers[n*s : take : take], Perm: m.places[:s:s]}
	m.numbers, m.places = m.numbers[take:], m.places[s:]
	return f
}

func newFactor[T ldl.Number](s *system[T]) *factor[T] {
	f := &factor[T]{}
	f.shape(s)
	return f
}

// shape lays the factor out for a system.
func (f *factor[T]) shape(s *system[T]) {
	*f = factor[T]{s: s}
	var m memory[T]
	top := 0
	for _, l := range s.cells {
		f.from = append(f.from, len(f.blocks))
		for _, k := range l.classes {
			f.blocks = append(f.blocks, m.front(k.size(), k.inner))
			top = max(top, k.size())
		}
	}
	high, depth := 0, 0
	for _, n := range s.t.nodes {
		size := n.s + len(n.rest)
		f.fronts = append(f.fronts, m.front(size, n.s))
		top = max(top, size)
		for _, kid := range n.kids {
			if kid >= 0 {
				r := len(s.t.nodes[kid].rest)
				depth -= r * r
			}
		}
		depth += len(n.rest) * len(n.rest)
		high = max(high, depth)
	}
	f.stack = make([]T, high)
	f.rest, f.work, f.small = make([]T, top*top), make([]T, top*top+2*top), make([]T, 2*top)
}

// fits says whether the layout serves s too.
func (f *factor[T]) fits(s *system[T]) bool {
	if f.s.t != s.t {
		return false
	}
	for n := range s.cells {
		if len(s.cells[n].classes) != len(f.s.cells[n].classes) {
			return false
		}
	}
	return true
}

// fill factors s at N.
func (f *factor[T]) fill(s *system[T], at T) error {
	if !f.fits(s) {
		f.shape(s)
	}
	f.s, f.negative, f.growth = s, 0, 0
	top := 0
	for k := range s.t.nodes {
		n := &s.t.nodes[k]
		front := &f.fronts[k]
		clear(front.Panel)
		r := len(n.rest)
		rest := f.rest[:r*r]
		clear(rest)
		if n.cell >= 0 {
			if err := f.leaf(n, front, rest, at); err != nil {
				return err
			}
		} else {
			for p := 1; p >= 0; p-- {
				q := len(s.t.nodes[n.kids[p]].rest)
				top -= q * q
				extend(front, rest, f.stack[top:top+q*q], n.maps[p])
			}
		}
		if err := f.eliminate(front, rest); err != nil {
			return fmt.Errorf("channel: node %d: %w", k, err)
		}
		copy(f.stack[top:], rest)
		top += r * r
	}
	return nil
}

func (f *factor[T]) eliminate(front *ldl.Front[T], rest []T) error {
	g, err := front.Eliminate(rest, f.work)
	if err != nil {
		return err
	}
	f.negative += g.Negative
	f.growth = max(f.growth, g.Growth)
	return nil
}

// extend adds the rest c of a part to a front (assembly by extension, Duff and Reid).
func extend[T ldl.Number](front *ldl.Front[T], rest, c []T, maps []int32) {
	s, q := front.S, len(maps)
	r := front.N - s
	for i, pi := range maps {
		row := c[i*q : i*q+i+1]
		for j, v := range row {
			hi, lo := int(pi), int(maps[j])
			if hi < lo {
				hi, lo = lo, hi
			}
			if lo < s {
				front.Panel[hi*s+lo] += v
			} else {
				rest[(hi-s)*r+lo-s] += v
			}
		}
	}
}

// leaf condenses a cell into its front.
func (f *factor[T]) leaf(n *node, front *ldl.Front[T], rest []T, at T) error {
	l := &f.s.cells[n.cell]
	coef := l.mix(1, at)
	for i, k := range l.classes {
		b := &f.blocks[f.from[n.cell]+i]
		r := b.N - b.S
		own := f.own(r)
		clear(b.Panel)
		if l.ma != nil {
			l.form(b, own, at)
		} else {
			k.form(b, own, &coef)
		}
		if err := f.eliminate(b, own); err != nil {
			return fmt.Errorf("channel: cell %d: %w", n.cell, err)
		}
		spread(k, front, rest, own, n.maps[0])
	}
	return nil
}

// own gives cleared room for the r x r rest of a class.
func (f *factor[T]) own(r int) []T {
	f.small = grow(f.small, r*r)
	clear(f.small)
	return f.small
}

// form writes the class's matrix into a cleared front.
func (k *class[T]) form(b *ldl.Front[T], rest []T, f *[terms]T) {
	s := int32(b.S)
	r := int32(b.N) - s
	for i := range k.entries {
		e := &k.entries[i]
		v := e.value * f[e.term]
		if e.col < s {
			b.Panel[e.row*s+e.col] += v
		} else {
			rest[(e.row-s)*r+e.col-s] += v
		}
	}
}

// form writes the mapped cell's matrix into a front.
func (l *local[T]) form(b *ldl.Front[T], rest []T, at T) {
	n, s := b.N, b.S
	for i := range n {
		for j := range i + 1 {
			v := l.ma[i*n+j] + at*l.mb[i*n+j]
			if j < s {
				b.Panel[i*s+j] = v
			} else {
				rest[(i-s)*(n-s)+j-s] = v
			}
		}
	}
}

// spread adds a class's condensed matrix to the front of its cell.
func spread[T ldl.Number](k *class[T], front *ldl.Front[T], rest, c []T, place []int32) {
	s, q := front.S, len(k.ends)
	r := front.N - s
	add := func(p, o int32, v T) {
		hi, lo := int(max(p, o)), int(min(p, o))
		if lo < s {
			front.Panel[hi*s+lo] += v
		} else {
			rest[(hi-s)*r+lo-s] += v
		}
	}
	for i, ei := range k.ends {
		for j, ej := range k.ends[:i+1] {
			v := c[i*q+j]
			for _, a := range ei {
				p := place[a.at]
				for _, b := range ej {
					o := place[b.at]
					if p < 0 || o < 0 || i == j && p < o {
						continue
					}
					w := v * a.value * b.value
					if i != j && p == o {
						w += w
					}
					add(p, o, w)
				}
			}
		}
	}
}

// solve puts F^-1 x in place of x.
func (f *factor[T]) solve(x []T) {
	t := f.s.t
	for k := range t.nodes {
		n := &t.nodes[k]
		if n.cell >= 0 {
			f.leafDown(n.cell, x)
		}
		front := &f.fronts[k]
		below := f.rest[:len(n.rest)]
		clear(below)
		front.Down(x[n.first:n.first+n.s], below, f.work)
		for i, u := range n.rest {
			x[u] += below[i]
		}
	}
	for k := len(t.nodes) - 1; k >= 0; k-- {
		n := &t.nodes[k]
		below := f.rest[:len(n.rest)]
		for i, u := range n.rest {
			below[i] = x[u]
		}
		f.fronts[k].Up(x[n.first:n.first+n.s], below, f.work)
		if n.cell >= 0 {
			f.leafUp(n.cell, x)
		}
	}
}

func (f *factor[T]) leafDown(n int, x []T) {
	c, at := &f.s.t.cells[n], f.s.t.cells[n].start
	for i, k := range f.s.cells[n].classes {
		b := &f.blocks[f.from[n]+i]
		below := f.rest[:b.N-b.S]
		clear(below)
		b.Down(x[at:at+b.S], below, f.work)
		k.scatterEnds(x, below, c.skel)
		at += b.S
	}
}

func (f *factor[T]) leafUp(n int, x []T) {
	c, at := &f.s.t.cells[n], f.s.t.cells[n].start
	for i, k := range f.s.cells[n].classes {
		b := &f.blocks[f.from[n]+i]
		v := f.rest[:b.N]
		k.gather(v, x, at, c.skel)
		b.Up(x[at:at+b.S], v[b.S:], f.work)
		at += b.S
	}
}
