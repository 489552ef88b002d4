package collate

import "betaloom/scheduler/grid"

// run is a stretch of points that stand together in a tile and in the grid.
type run struct {
	tile  int
	local int // the first one's index in the tile
	n     int
	point int // the first one's index in the grid
}

// runs visits the stretches of a band in the order of points.
func runs(g *grid.Grid, band grid.Band, visit func(run) error) error {
	if !g.IsBox() || len(g.Axes()) == 0 {
		return visit(run{tile: band.Tile, n: band.Points, point: band.First})
	}
	w := newWalk(g)
	last := len(w.length) - 1
	for point := band.First; point < band.First+band.Points; {
		w.place(point)
		r := run{tile: w.tile(), local: w.local(), point: point}
		r.n = min(w.edge[last]-w.at[last]%w.edge[last], w.length[last]-w.at[last])
		if err := visit(r); err != nil {
			return err
		}
		point += r.n
	}
	return nil
}

// walk turns a point of a box into its tile and its index there.
type walk struct {
	length, edge, at []int // points of the grid and of a block along each axis; where the point is
}

func newWalk(g *grid.Grid) *walk {
	w := &walk{edge: g.Block(0).N, at: make([]int, len(g.Axes()))}
	for _, a := range g.Axes() {
		w.length = append(w.length, len(a.Values))
	}
	return w
}

func (w *walk) place(point int) {
	for a := len(w.at) - 1; a >= 0; a-- {
		w.at[a] = point % w.length[a]
		point /= w.length[a]
	}
}

func (w *walk) tile() int {
	tile := 0
	for a, i := range w.at {
		blocks := (w.length[a] + w.edge[a] - 1) / w.edge[a]
		tile = tile*blocks + i/w.edge[a]
	}
	return tile
}

func (w *walk) local() int {
	local := 0
	for a, i := range w.at {
		lo := i / w.edge[a] * w.edge[a]
		local = local*min(w.edge[a], w.length[a]-lo) + i - lo
	}
	return local
}
