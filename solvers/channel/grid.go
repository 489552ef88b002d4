package channel

import (
	"fmt"
	"math"

	"betaloom/solvers"
	"betaloom/solvers/section"
)

// Bounds on a mesh, so that a strange one cannot take the machine.
const (
	maxOrder   = 24
	maxCells   = 10000
	maxNumbers = 1 << 27 // in one factorisation
)

// check refuses a mesh that is not one.
func check(m *section.Mesh) error {
	if m == nil {
		return &solvers.InputError{Where: "mesh", Found: "none", Expected: "a mesh"}
	}
	nx, ny := len(m.OrderX), len(m.OrderY)
	if nx == 0 || ny == 0 || nx > maxCells/ny {
		return &solvers.InputError{Where: "mesh", Found: fmt.Sprintf("%d columns and %d rows", nx, ny),
			Expected: fmt.Sprintf("1 to %d cells", maxCells)}
	}
	if len(m.Y) != ny+1 || len(m.X) != ny+1 || len(m.Medium) != ny {
		return &solvers.InputError{Where: "mesh", Found: fmt.Sprintf("%d and %d lines, %d rows of media", len(m.Y), len(m.X), len(m.Medium)),
			Expected: fmt.Sprintf("%d, %d and %d for %d rows", ny+1, ny+1, ny, ny)}
	}
	for _, orders := range [][]int{m.OrderX, m.OrderY} {
		for i, p := range orders {
			if p < 1 || p > maxOrder {
				return &solvers.InputError{Where: fmt.Sprintf("mesh order %d", i), Found: fmt.Sprint(p), Expected: fmt.Sprintf("1 to %d", maxOrder)}
			}
		}
	}
	return checkLines(m)
}

func checkLines(m *section.Mesh) error {
	nx := len(m.OrderX)
	if at := risingTo(m.Y); at >= 0 {
		return &solvers.InputError{Where: fmt.Sprintf("mesh line %d", at), Found: fmt.Sprint(m.Y[at]), Expected: "finite lines, each above the one before"}
	}
	for j, row := range m.X {
		if len(row) != nx+1 {
			return &solvers.InputError{Where: fmt.Sprintf("mesh line %d", j), Found: fmt.Sprintf("%d positions", len(row)), Expected: fmt.Sprint(nx + 1)}
		}
		if at := risingTo(row); at >= 0 {
			return &solvers.InputError{Where: fmt.Sprintf("mesh line %d, position %d", j, at), Found: fmt.Sprint(row[at]),
				Expected: "finite positions, each to the right of the one before"}
		}
	}
	for j, row := range m.Medium {
		if len(row) != nx {
			return &solvers.InputError{Where: fmt.Sprintf("mesh row %d", j), Found: fmt.Sprintf("%d media", len(row)), Expected: fmt.Sprint(nx)}
		}
	}
	return nil
}

// risingTo gives the first place where x does not rise or is not finite, -1 if there is none.
func risingTo(x []float64) int {
	for i, v := range x {
		if math.IsNaN(v) || math.IsInf(v, 0) || i > 0 && !(v > x[i-1]) || i > 0 && math.IsInf(v-x[i-1], 0) {
			return i
		}
	}
	return -1
}

// grid knows the groups of unknowns of a mesh: the corners of its cells, the
// horizontal edges (column i on line j) and the vertical edges (line i in row j), numbered in this order.
type grid struct {
	nx, ny int
	ox, oy []int
	medium [][]int
	size   []int // unknowns of each group; 0 on electric walls and off the domain
}

// rect is the cells of columns i0 to i1-1 and rows j0 to j1-1.
type rect struct{ i0, i1, j0, j1 int }

func (r rect) has(i, j int) bool { return r.i0 <= i && i < r.i1 && r.j0 <= j && j < r.j1 }

func (g *grid) corner(i, j int) int     { return j*(g.nx+1) + i }
func (g *grid) horizontal(i, j int) int { return (g.nx+1)*(g.ny+1) + j*g.nx + i }
func (g *grid) vertical(i, j int) int   { return (g.nx+1)*(g.ny+1) + g.nx*(g.ny+1) + j*(g.nx+1) + i }

// active says whether there is such a cell in the domain.
func (g *grid) active(i, j int) bool {
	return i >= 0 && j >= 0 && i < g.nx && j < g.ny && g.medium[j][i] >= 0
}

// block gives the cells around a group, whether they exist or not.
func (g *grid) block(id int) rect {
	corners, edges := (g.nx+1)*(g.ny+1), g.nx*(g.ny+1)
	switch {
	case id < corners:
		i, j := id%(g.nx+1), id/(g.nx+1)
		return rect{i - 1, i + 1, j - 1, j + 1}
	case id < corners+edges:
		i, j := (id-corners)%g.nx, (id-corners)/g.nx
		return rect{i, i + 1, j - 1, j + 1}
	}
	id -= corners + edges
	i, j := id%(g.nx+1), id/(g.nx+1)
	return rect{i - 1, i + 1, j, j + 1}
}

// touches says whether a group touches active cells inside and outside r.
func (g *grid) touches(id int, r rect) (inside, outside bool) {
	b := g.block(id)
	for j := b.j0; j < b.j1; j++ {
		for i := b.i0; i < b.i1; i++ {
			if g.active(i, j) {
				inside = inside || r.has(i, j)
				outside = outside || !r.has(i, j)
			}
		}
	}
	return inside, outside
}

func newGrid(m *section.Mesh) *grid {
	g := &grid{nx: len(m.OrderX), ny: len(m.OrderY), ox: append([]int{}, m.OrderX...), oy: append([]int{}, m.OrderY...)}
	for _, row := range m.Medium {
		g.medium = append(g.medium, append([]int{}, row...))
	}
	g.size = make([]int, g.vertical(g.nx, g.ny-1)+1)
	all := rect{0, g.nx, 0, g.ny}
	walls := func(id int) bool { return g.walled(id, m) }
	for id := range g.size {
		if inside, _ := g.touches(id, all); !inside || walls(id) {
			continue
		}
		g.size[id] = g.full(id)
	}
	return g
}

// full is the number of unknowns of a group that stands free.
func (g *grid) full(id int) int {
	b := g.block(id)
	switch corners, edges := (g.nx+1)*(g.ny+1), g.nx*(g.ny+1); {
	case id < corners:
		return 1
	case id < corners+edges:
		return 2*g.ox[b.i0] - 1
	}
	return 2*g.oy[b.j0] - 1
}

// walled says whether a group lies on an electric wall or on metal.
func (g *grid) walled(id int, m *section.Mesh) bool {
	b := g.block(id)
	for j := b.j0; j < b.j1; j++ {
		for i := b.i0; i < b.i1; i++ {
			switch {
			case i < 0 && m.Left == section.Electric, i >= g.nx && m.Right == section.Electric,
				j < 0 && m.Bottom == section.Electric, j >= g.ny && m.Top == section.Electric:
				return true
			case i >= 0 && j >= 0 && i < g.nx && j < g.ny && g.medium[j][i] < 0:
				return true
			}
		}
	}
	return false
}
