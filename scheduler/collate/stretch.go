package collate

import (
	"fmt"

	"betaloom/schema/column"
)

// stretch is the rows of a run.
type stretch struct {
	tile     *shelved
	rows     []uint64
	first    []place // the first row of each point
	withMode []place // the rows that hold a mode
	starts   []uint64
}

// place is a row of a stretch and its point.
type place struct {
	row   int
	point int64
}

// read gives the rows of a run; they last until the next read.
func (s *shelf) read(r run) (*stretch, error) {
	g := &s.got
	if r.tile < s.base || r.tile >= s.base+len(s.tiles) {
		return nil, fmt.Errorf("found the tile %d on no shelf", r.tile)
	}
	g.tile = &s.tiles[r.tile-s.base]
	var err error
	if g.starts, err = s.store.read(g.tile.at+int64(r.local), r.n+1, &s.rooms[0]); err != nil {
		return nil, err
	}
	from, to := g.starts[0], g.starts[r.n]
	width := uint64(g.tile.width)
	if g.rows, err = s.store.read(g.tile.rows+int64(from*width), int((to-from)*width), &s.rooms[1]); err != nil {
		return nil, err
	}
	g.first, g.withMode = g.first[:0], g.withMode[:0]
	for i := range r.n {
		point := int64(r.point + i)
		lo, hi := int(g.starts[i]-from), int(g.starts[i+1]-from)
		g.first = append(g.first, place{lo, point})
		for row := lo; row < hi; row++ {
			if int64(g.word(s.mode, row)) != column.MissingInt {
				g.withMode = append(g.withMode, place{row, point})
			}
		}
	}
	return g, nil
}

// word gives a column's word in a row.
func (g *stretch) word(i, row int) uint64 {
	f := g.tile.fields[i]
	if f.offset < 0 {
		return f.value
	}
	return g.rows[row*g.tile.width+f.offset]
}
