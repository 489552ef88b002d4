package channel

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/internal/ldl"
	"betaloom/solvers/jet"
	"betaloom/solvers/section"
)

// Topology is all that depends on a mesh's cells, media, orders and walls but not on
// where its lines are: the numbering and the order of elimination. It keeps work
// space that the Pencils made from it share: it serves one goroutine at a time.
type Topology struct {
	mesh       section.Mesh // orders, media and walls only
	cells      []cell
	nodes      []node
	skeleton   int // unknowns on the outlines of cells, numbered first
	unknowns   int
	potentials int                 // unknowns of e_z
	media      int                 // number of media, at least
	tables     map[[2]int]*factors // one-dimensional functions by order and number of points
	real       kit[float64]
	cplx       kit[complex128]
}

// kit is what Pencils of one arithmetic share.
type kit[T ldl.Number] struct {
	shapes map[orders]*shape[T]
	work   *factor[T]
	eval   *evaluator[T]
	fields [2]field[T]
}

// evaluator is the kit's, made when it is first needed.
func (k *kit[T]) evaluator(t *Topology) *evaluator[T] {
	if k.eval == nil {
		k.eval = newEvaluator(t, k)
	}
	return k.eval
}

func newKit[T ldl.Number](cells []cell) (k kit[T]) {
	k.shapes = map[orders]*shape[T]{}
	for _, c := range cells {
		if k.shapes[c.orders] == nil {
			k.shapes[c.orders] = newShape[T](c.orders)
		}
	}
	return k
}

// cell is an active cell.
type cell struct {
	orders
	i, j   int
	medium int
	skel   []int32 // unknown of each of its skeleton places, -1 on walls
	start  int     // first of its inner unknowns
}

// New analyses a mesh.
func New(m *section.Mesh) (*Topology, error) {
	if err := check(m); err != nil {
		return nil, err
	}
	g := newGrid(m)
	t := &Topology{tables: map[[2]int]*factors{}, mesh: section.Mesh{Medium: g.medium, OrderX: g.ox, OrderY: g.oy, Left: m.Left, Right: m.Right, Bottom: m.Bottom, Top: m.Top}}
	index := t.collect(g)
	if len(t.cells) == 0 {
		return nil, &solvers.InputError{Where: "mesh", Found: "metal only", Expected: "a cell with a medium"}
	}
	d := &dissection{g: g, plans: map[rect]plan{}, first: make([]int32, len(g.size)), cells: index}
	for id := range d.first {
		d.first[id] = -1
	}
	d.build(rect{0, g.nx, 0, g.ny})
	t.nodes, t.skeleton = d.nodes, d.next
	t.number(g, d.first)
	t.link()
	if n := t.numbers(); n > maxNumbers {
		return nil, &solvers.InputError{Where: "mesh", Found: fmt.Sprintf("%d unknowns, %d numbers to factor", t.unknowns, n),
			Expected: fmt.Sprintf("at most %d numbers", maxNumbers)}
	}
	t.real, t.cplx = newKit[float64](t.cells), newKit[complex128](t.cells)
	return t, nil
}

// collect lists the active cells.
func (t *Topology) collect(g *grid) map[[2]int]int {
	index := map[[2]int]int{}
	for j := range g.ny {
		for i := range g.nx {
			if !g.active(i, j) {
				continue
			}
			index[[2]int{i, j}] = len(t.cells)
			t.cells = append(t.cells, cell{orders: orders{g.ox[i], g.oy[j]}, i: i, j: j, medium: g.medium[j][i]})
			t.media = max(t.media, g.medium[j][i]+1)
		}
	}
	return index
}

// number gives every cell its unknowns.
func (t *Topology) number(g *grid, first []int32) {
	t.unknowns = t.skeleton
	for n := range t.cells {
		c := &t.cells[n]
		groups := []int{g.corner(c.i, c.j), g.corner(c.i+1, c.j), g.corner(c.i, c.j+1), g.corner(c.i+1, c.j+1),
			g.horizontal(c.i, c.j), g.horizontal(c.i, c.j+1), g.vertical(c.i, c.j), g.vertical(c.i+1, c.j)}
		for _, id := range groups {
			for k := range g.full(id) {
				at := int32(-1)
				if g.size[id] > 0 {
					at = first[id] + int32(k)
				}
				c.skel = append(c.skel, at)
			}
		}
		c.start = t.unknowns
		t.unknowns += c.orders.inner()
		t.potentials += (c.px - 1) * (c.py - 1)
	}
	for id, size := range g.size {
		switch {
		case id < (g.nx+1)*(g.ny+1):
			t.potentials += size
		case size > 0:
			t.potentials += (size - 1) / 2 // an edge of order p has p of e_t and p-1 of e_z
		}
	}
}

// link fills in which unknowns each front has and where its parts go in it.
func (t *Topology) link() {
	place := make([]int32, t.skeleton) // place in the present front, -1 elsewhere
	for i := range place {
		place[i] = -1
	}
	for k := range t.nodes {
		n := &t.nodes[k]
		for i := range n.s {
			place[n.first+i] = int32(i)
		}
		parts := [2][]int32{}
		if n.cell >= 0 {
			parts[0] = t.cells[n.cell].skel
		} else {
			parts = [2][]int32{t.nodes[n.kids[0]].rest, t.nodes[n.kids[1]].rest}
		}
		for p, part := range parts {
			for _, u := range part {
				if u >= 0 && place[u] < 0 {
					place[u] = int32(n.s + len(n.rest))
					n.rest = append(n.rest, u)
				}
				at := int32(-1)
				if u >= 0 {
					at = place[u]
				}
				n.maps[p] = append(n.maps[p], at)
			}
		}
		for i := range n.s {
			place[n.first+i] = -1
		}
		for _, u := range n.rest {
			place[u] = -1
		}
	}
}

// numbers is the size of a factorisation, with every cell mapped.
func (t *Topology) numbers() (n int) {
	for _, c := range t.cells {
		n += (c.inner() + c.skeleton()) * c.inner()
	}
	for _, f := range t.nodes {
		n += (f.s + len(f.rest)) * f.s
	}
	return n
}

// Unknowns is the size of the problem, inner unknowns included.
func (t *Topology) Unknowns() int { return t.unknowns }

// Pencil is A + L B, L = beta^2, of one section at one frequency.
type Pencil struct {
	t        *Topology
	mesh     *section.Mesh
	k        float64
	eps      [][3]complex128
	kappa    [][3]jet.Jet // k^2 eps
	params   int
	lossless bool // real permittivities
	positive bool // with real parts above zero
	top      float64
	real     *system[float64] // of the real parts; nil where it is not needed
	cplx     *system[complex128]
}

// Assemble gives the pencil of a mesh of the topology's kind at the angular frequency w (rad/s), with the relative
// permittivities (x, y, z) of the media. The mesh is kept and must not be changed while the pencil is in use.
func (t *Topology) Assemble(m *section.Mesh, w float64, media []section.Medium) (*Pencil, error) {
	if err := check(m); err != nil {
		return nil, err
	}
	if !t.mesh.Same(m) {
		return nil, &solvers.InputError{Where: "mesh", Found: "other cells, orders, media or walls", Expected: "those of its topology"}
	}
	k := w / schema.LightSpeed
	if !(k > 0) || math.IsInf(k, 0) {
		return nil, &solvers.InputError{Where: "angular frequency", Found: fmt.Sprint(w), Expected: "above 0"}
	}
	if len(media) < t.media {
		return nil, &solvers.InputError{Where: "media", Found: fmt.Sprintf("%d permittivities", len(media)), Expected: fmt.Sprintf("at least %d", t.media)}
	}
	eps := permittivities(media)
	p := &Pencil{t: t, mesh: m, k: k, eps: eps, kappa: squared(w, media), params: params(m, media), lossless: true, positive: true}
	for _, c := range t.cells {
		if err := p.look(c.medium); err != nil {
			return nil, err
		}
	}
	if p.lossless || p.positive {
		p.real = newSystem(t, &t.real, m, k, realParts(eps))
	}
	if !p.lossless {
		p.cplx = newSystem(t, &t.cplx, m, k, eps)
	}
	return p, nil
}

// look takes note of a medium that is in use.
func (p *Pencil) look(medium int) error {
	for _, e := range p.eps[medium] {
		if a := math.Abs(real(e)) + math.Abs(imag(e)); !(a > 0) || a > 1e12 {
			return &solvers.InputError{Where: fmt.Sprintf("medium %d", medium), Found: fmt.Sprintf("permittivity %v", e), Expected: "finite, not zero"}
		}
		p.lossless = p.lossless && imag(e) == 0
		p.positive = p.positive && real(e) > 0
		p.top = max(p.top, real(e))
	}
	return nil
}

func permittivities(media []section.Medium) [][3]complex128 {
	eps := make([][3]complex128, len(media))
	for i := range media {
		for a := range eps[i] {
			eps[i][a] = media[i].Eps[a].V
		}
	}
	return eps
}

// params is the number of base parameters that a mesh or its media depend on.
func params(m *section.Mesh, media []section.Medium) int {
	n := len(m.DX)
	for i := range media {
		for _, j := range media[i].Eps {
			n = max(n, len(j.P), len(j.WP))
		}
	}
	return n
}

func realParts(eps [][3]complex128) [][3]float64 {
	r := make([][3]float64, len(eps))
	for i, e := range eps {
		r[i] = [3]float64{real(e[0]), real(e[1]), real(e[2])}
	}
	return r
}
