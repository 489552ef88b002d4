package section

import "math"

// plan is a section as a stack of rows of cells. Layers that differ in
// nothing, and strips that stand against each other, are one here.
type plan struct {
	levels      []Length // under each row, and above the last; infinite where open
	rows        []row
	left, right *Length // nil where open
}

// row is a layer cut by walls: cell i stands left of wall i.
type row struct {
	walls []Side
	cells []cell // one more than walls
}

type cell struct {
	medium int
	label  label
	parts  []int // one for each copy of the cell in the section
}

// label keeps apart what a confinement is reported of.
type label struct{ layer, strip string }

func (c cell) same(d cell) bool { return c.medium == d.medium && c.label == d.label }

// assemble makes the plan of an outline.
func (b *builder) assemble() plan {
	var p plan
	if b.o.SideWalls != nil {
		p.left, p.right = &b.o.SideWalls[0], &b.o.SideWalls[1]
	}
	for k := range b.o.Layers {
		l := &b.o.Layers[k]
		r := b.row(l)
		if n := len(p.rows); n > 0 && len(r.walls) == 0 && len(p.rows[n-1].walls) == 0 && r.cells[0].same(p.rows[n-1].cells[0]) {
			p.levels[n] = l.Top
			continue
		}
		if len(p.rows) == 0 {
			p.levels = append(p.levels, l.Bottom)
		}
		p.rows, p.levels = append(p.rows, r), append(p.levels, l.Top)
	}
	return p
}

// row cuts a layer. A wall with nothing different at its sides is left out.
func (b *builder) row(l *Layer) row {
	var r row
	before := b.leftEnd() // the wall that the next cell starts at
	for i, s := range l.Strips {
		c := cell{medium: s.Medium, label: b.label(l.Index, s.Index), parts: b.part(l.Index, s.Index)}
		if before == nil || !b.o.meet(*before, s.Left) {
			r.add(before, b.fill(l))
			before = &s.Left
		} else if i > 0 {
			before = &Side{mean(before.Bottom, s.Left.Bottom), mean(before.Top, s.Left.Top)}
		}
		r.add(before, c)
		before = &l.Strips[i].Right
	}
	if n := len(l.Strips); n == 0 || b.o.SideWalls == nil || !b.o.meet(*before, Side{b.o.SideWalls[1], b.o.SideWalls[1]}) {
		r.add(before, b.fill(l))
	}
	return r
}

// leftEnd is the side wall; nil where the section is open.
func (b *builder) leftEnd() *Side {
	if b.o.SideWalls == nil {
		return nil
	}
	return &Side{b.o.SideWalls[0], b.o.SideWalls[0]}
}

// add puts a cell at the right end, behind a wall if it is not the first.
func (r *row) add(wall *Side, c cell) {
	if n := len(r.cells); n == 0 {
		r.cells = append(r.cells, c)
	} else if !r.cells[n-1].same(c) {
		r.walls, r.cells = append(r.walls, *wall), append(r.cells, c)
	}
}

// meet reports whether two walls are one.
func (o *Outline) meet(u, v Side) bool {
	return near(u.Bottom, v.Bottom, o.tolX) && near(u.Top, v.Top, o.tolX)
}

func (b *builder) fill(l *Layer) cell {
	return cell{medium: l.Fill, label: b.label(l.Index, -1), parts: b.part(l.Index, -1)}
}

func (b *builder) label(layer, strip int) label {
	l := &b.layers.Layers[layer]
	if strip < 0 {
		return label{layer: l.Name}
	}
	return label{l.Name, l.Strips[strip].Name}
}

// part gives a part its place among the outline's Parts.
func (b *builder) part(layer, strip int) []int {
	want := Part{layer, strip}
	for at := len(b.o.Parts) - 1; at >= 0 && b.o.Parts[at].Layer == layer; at-- {
		if b.o.Parts[at] == want {
			return []int{at}
		}
	}
	b.o.Parts = append(b.o.Parts, want)
	return []int{len(b.o.Parts) - 1}
}

// walled gives the first and one past the last row with walls; both zero
// where there is none.
func (p *plan) walled() (first, past int) {
	for k := range p.rows {
		if len(p.rows[k].walls) > 0 {
			if past == 0 {
				first = k
			}
			past = k + 1
		}
	}
	return first, past
}

// corners is the box of all wall ends; ok is false where there is none.
func (p *plan) corners() (left, right, bottom, top Length, ok bool) {
	first, past := p.walled()
	if past == 0 {
		return left, right, bottom, top, false
	}
	left.V, right.V = math.Inf(1), math.Inf(-1)
	for _, r := range p.rows[first:past] {
		for _, w := range r.walls {
			for _, x := range []Length{w.Bottom, w.Top} {
				if x.V < left.V {
					left = x
				}
				if x.V > right.V {
					right = x
				}
			}
		}
	}
	return left, right, p.levels[first], p.levels[past], true
}
