// Package grid expands a sweep into points and cuts them into tiles.
//
// A grid is either a box, the product of its axes with the last varying
// fastest, or a list of rows. Points are numbered from 0 in that order over
// the whole grid; inside a tile they are numbered from 0 in the same order
// (local).
//
// Tiles of a box are blocks aligned to the start of each axis. A block spans
// a short axis whole; its edges along the long ones do not depend on how long these
// are. So a box that grows at the end of a long axis keeps its inner tiles,
// and with them their names and parts; the last block along that axis, where it
// was not full, is new. Every tile is new when a short axis grows, when one
// becomes long or a long one short, and when an axis is added or
// dropped: the edges, or the values in each block, are then others.
//
// Of a box nothing of the size of the grid is kept in memory; of a list the
// rows are.
package grid

import (
	"fmt"
	"math"

	"betaloom/schema"
)

// The most points that a tile holds: its work is large against that of the
// queue and its part small enough to hold many of them in memory, yet no
// worker is left with much more of a run than the others.
const (
	quickTile = 4096 // of the microseconds that a slab takes: tens of milliseconds

	// of the tens of milliseconds that a section with strips takes: seconds. The first
	// point, which has no neighbour to start from, takes as long as about five others.
	slowTile = 64
)

// tilePoints is the most points that a tile of this physics holds.
func tilePoints(p *schema.Physics) int {
	if l := p.Section.Layers; l != nil {
		for _, layer := range l.Layers {
			if len(layer.Strips) > 0 {
				return slowTile
			}
		}
	}
	return quickTile
}

// MaxPoints is the largest grid that is accepted.
const MaxPoints = 1_000_000_000

// Grid is the points of a sweep.
type Grid struct {
	physics schema.Physics
	axes    []schema.AxisBlock
	columns []string
	rows    [][]float64
	most    int   // points of a tile
	edges   []int // of a block, in points along each axis
	blocks  []int // blocks along each axis
}

// New makes the grid of a box (axes, in file order) or of rows. With
// neither, the grid is one point.
func New(p schema.Physics, axes []schema.AxisBlock, columns []string, rows [][]float64) (*Grid, error) {
	g := &Grid{physics: p, axes: axes, columns: columns, rows: rows, most: tilePoints(&p)}
	if rows != nil && len(axes) > 0 {
		return nil, fmt.Errorf("grid: both axes and rows given")
	}
	total := 1.0
	for _, a := range axes {
		if len(a.Values) == 0 {
			return nil, fmt.Errorf("grid: axis %s has no values", a.Parameter)
		}
		total *= float64(len(a.Values))
	}
	if total > MaxPoints {
		return nil, fmt.Errorf("grid: %.3g points, at most %d are accepted", total, MaxPoints)
	}
	g.edges = edges(axes, g.most)
	for i, a := range axes {
		g.blocks = append(g.blocks, (len(a.Values)+g.edges[i]-1)/g.edges[i])
	}
	return g, nil
}

// shortAxis is the most values of an axis that a block spans whole.
const shortAxis = 8

// edges gives a block's length along each axis. Short axes are spanned whole,
// the last first and as many as fit; the others share the largest power of two
// with which a block holds at most so many points. Where that is one, the last of
// them take two, as many as fit. None of it depends on how long they
// are, so one that grows keeps its blocks; when a short axis grows, every
// block grows with it, and no tile could be kept anyway.
func edges(axes []schema.AxisBlock, most int) []int {
	list, points, long := make([]int, len(axes)), 1, 0
	for a := len(axes) - 1; a >= 0; a-- {
		n := len(axes[a].Values)
		if n <= shortAxis && points*n <= most {
			list[a] = n
			points *= n
		} else {
			long++
		}
	}
	edge := 1
	for long > 0 && float64(points)*math.Pow(float64(2*edge), float64(long)) <= float64(most) {
		edge *= 2
	}
	for a := len(list) - 1; a >= 0; a-- {
		switch {
		case list[a] > 0:
		case edge == 1 && 2*points <= most:
			list[a], points = 2, 2*points
		default:
			list[a] = edge
		}
	}
	return list
}

// rowsPerTile bounds a stretch by what its job message may weigh.
func (g *Grid) rowsPerTile() int {
	const numbers = 16384 // about 320 kB of JSON
	return max(1, min(g.most, numbers/max(1, len(g.columns))))
}

// Axes gives the box's axes in file order; empty for a list of rows.
func (g *Grid) Axes() []schema.AxisBlock { return g.axes }

// Physics is what is solved at each point.
func (g *Grid) Physics() *schema.Physics { return &g.physics }

// IsBox reports whether the grid is a product of axes (a single point
// included) rather than a list of rows.
func (g *Grid) IsBox() bool { return g.rows == nil }

// Points counts the grid's points, excluded ones included.
func (g *Grid) Points() int {
	if !g.IsBox() {
		return len(g.rows)
	}
	n := 1
	for _, a := range g.axes {
		n *= len(a.Values)
	}
	return n
}

// Tiles counts the tiles.
func (g *Grid) Tiles() int {
	if !g.IsBox() {
		per := g.rowsPerTile()
		return (len(g.rows) + per - 1) / per
	}
	n := 1
	for _, b := range g.blocks {
		n *= b
	}
	return n
}

// Block is where a tile lies: along each axis its first index and its length.
// A stretch of rows has one pair.
type Block struct {
	Lo, N []int
}

// Block gives the place of the i-th tile, tiles in row-major order of blocks.
func (g *Grid) Block(i int) Block {
	if !g.IsBox() {
		per := g.rowsPerTile()
		lo := i * per
		return Block{Lo: []int{lo}, N: []int{min(per, len(g.rows)-lo)}}
	}
	b := Block{Lo: make([]int, len(g.axes)), N: make([]int, len(g.axes))}
	for a := len(g.axes) - 1; a >= 0; a-- {
		b.Lo[a] = i % g.blocks[a] * g.edges[a]
		b.N[a] = min(g.edges[a], len(g.axes[a].Values)-b.Lo[a])
		i /= g.blocks[a]
	}
	return b
}

// Tile builds the i-th tile.
func (g *Grid) Tile(i int) *schema.Tile {
	b := g.Block(i)
	t := &schema.Tile{Physics: g.physics}
	if !g.IsBox() {
		t.Columns, t.Rows = g.columns, g.rows[b.Lo[0]:b.Lo[0]+b.N[0]]
		return t
	}
	for a, axis := range g.axes {
		t.Axes = append(t.Axes, schema.AxisBlock{
			Parameter: axis.Parameter,
			Values:    axis.Values[b.Lo[a] : b.Lo[a]+b.N[a]],
		})
	}
	return t
}

// Point numbers, over the whole grid, the point that block b calls local.
func (g *Grid) Point(b Block, local int) int {
	if !g.IsBox() {
		return b.Lo[0] + local
	}
	point, stride := 0, 1
	for a := len(g.axes) - 1; a >= 0; a-- {
		point += (b.Lo[a] + local%b.N[a]) * stride
		local /= b.N[a]
		stride *= len(g.axes[a].Values)
	}
	return point
}

// Band is a run of consecutive points of the grid and the tiles that hold them: the
// smallest unit in which parts can be joined in the order of points.
type Band struct {
	First, Points int // points of the grid
	Tile, Tiles   int // consecutive tiles
}

// Bands cuts the grid into its bands, in order: each is one block deep along
// the first axis and spans the others.
func (g *Grid) Bands() []Band {
	if !g.IsBox() || len(g.axes) == 0 {
		var bands []Band
		for i := range g.Tiles() {
			bands = append(bands, g.single(i))
		}
		return bands
	}
	stride, per := 1, 1
	for a := 1; a < len(g.axes); a++ {
		stride *= len(g.axes[a].Values)
		per *= g.blocks[a]
	}
	var bands []Band
	for k := range g.blocks[0] {
		depth := min(g.edges[0], len(g.axes[0].Values)-k*g.edges[0])
		bands = append(bands, Band{First: k * g.edges[0] * stride, Points: depth * stride, Tile: k * per, Tiles: per})
	}
	return bands
}

func (g *Grid) single(i int) Band {
	if g.IsBox() {
		return Band{Points: 1, Tiles: 1}
	}
	b := g.Block(i)
	return Band{First: b.Lo[0], Points: b.N[0], Tile: i, Tiles: 1}
}

// FrequencyRange gives the lowest and highest angular frequency over the
// grid in rad/s.
func (g *Grid) FrequencyRange() (lo, hi float64) {
	lo, hi = math.Inf(1), 0
	add := func(name string, v float64) {
		if w, ok := AngularFrequency(name, v); ok {
			lo, hi = min(lo, w), max(hi, w)
		}
	}
	for _, p := range g.physics.Parameters {
		if p.Kind == schema.Fixed {
			add(p.Name, p.Value)
		}
	}
	for _, a := range g.axes {
		for _, v := range a.Values {
			add(a.Parameter, v)
		}
	}
	for _, r := range g.rows {
		for c, name := range g.columns {
			add(name, r[c])
		}
	}
	return lo, hi
}

// AngularFrequency converts the value of the reserved parameter wavelength
// (m, in vacuum) or frequency (Hz); ok is false for any other name.
func AngularFrequency(name string, v float64) (w float64, ok bool) {
	switch name {
	case schema.Wavelength:
		return 2 * math.Pi * schema.LightSpeed / v, true
	case schema.Frequency:
		return 2 * math.Pi * v, true
	}
	return 0, false
}
