package surface

import "math"

// Line is a line of zero GVD over two axes: points of SI values along the
// first and the second of them. A closed line does not repeat its first point.
type Line struct {
	Points [][2]float64
	Closed bool
}

// edge is one side of a cell: from node (i, j) to the next along the first
// axis, or along the second when up is set.
type edge struct {
	i, j int
	up   bool
}

// contour collects the crossings of a grid's edges and which of them are
// neighbours in a cell.
type contour struct {
	walk   *walk
	axes   [2]int
	gvd    [][]float64 // by node, NaN where absent
	points map[edge][2]float64
	next   map[edge][]edge
	edges  []edge // in the order they were found
}

// ZeroLines finds the lines on which the GVD of a family vanishes over axes x and
// y (indices into Axes), the others at values. They run from edge to edge
// of the grid's cells, each point refined with the interpolant, and end where the family does or the box.
// The order of lines and points is fixed by the surface.
func (s *Surfaces) ZeroLines(family string, x, y int, values []float64) ([]Line, error) {
	w, err := s.walk(family, values, x, y)
	if err != nil {
		return nil, err
	}
	c := &contour{walk: w, axes: [2]int{x, y}, points: map[edge][2]float64{}, next: map[edge][]edge{}}
	if err := c.sample(); err != nil {
		return nil, err
	}
	for i := range len(c.gvd) - 1 {
		for j := range len(c.gvd[i]) - 1 {
			if err := c.cell(i, j); err != nil {
				return nil, err
			}
		}
	}
	return c.lines(), nil
}

func (c *contour) axis(k int) *axis { return c.walk.s.axes[c.axes[k]] }

func (c *contour) sample() error {
	for _, x := range c.axis(0).x {
		c.walk.values[c.axes[0]] = x
		var row []float64
		for _, y := range c.axis(1).x {
			v, err := c.walk.sample(c.axes[1], y)
			if err != nil {
				return err
			}
			row = append(row, v.gvd)
		}
		c.gvd = append(c.gvd, row)
	}
	return nil
}

// cell links the crossings of one cell. Two of them belong together; four are
// paired by the sign in the middle.
func (c *contour) cell(i, j int) error {
	corners := [4]float64{c.gvd[i][j], c.gvd[i+1][j], c.gvd[i+1][j+1], c.gvd[i][j+1]}
	sides := [4]edge{{i, j, false}, {i + 1, j, true}, {i, j + 1, false}, {i, j, true}} // side k runs between corners k and k+1
	var crossed []edge
	for k := range sides {
		a, b := corners[k], corners[(k+1)%4]
		if a != a || b != b {
			return nil
		}
		if opposite(a, b) {
			crossed = append(crossed, sides[k])
		}
	}
	for _, e := range crossed {
		if err := c.cross(e); err != nil {
			return err
		}
	}
	switch len(crossed) {
	case 2:
		c.link(crossed[0], crossed[1])
	case 4:
		same, err := c.middle(i, j, corners[0])
		if err != nil {
			return err
		}
		if same { // corner 0 is joined with corner 2: the lines cut off corners 1 and 3
			c.link(crossed[0], crossed[1])
			c.link(crossed[2], crossed[3])
		} else {
			c.link(crossed[3], crossed[0])
			c.link(crossed[1], crossed[2])
		}
	}
	return nil
}

// middle reports whether the GVD in the middle of a cell has the sign of a corner.
func (c *contour) middle(i, j int, corner float64) (bool, error) {
	x, y := c.axis(0).x, c.axis(1).x
	c.walk.values[c.axes[0]] = x[i] + (x[i+1]-x[i])/2
	v, err := c.walk.sample(c.axes[1], y[j]+(y[j+1]-y[j])/2)
	return !opposite(v.gvd, corner), err
}

// cross refines the crossing of an edge once.
func (c *contour) cross(e edge) error {
	if _, ok := c.points[e]; ok {
		return nil
	}
	x, y := c.axis(0).x, c.axis(1).x
	along, a, b := 0, sample{x: x[e.i], gvd: c.gvd[e.i][e.j]}, sample{}
	if e.up {
		along = 1
		a.x, b = y[e.j], sample{x: y[e.j+1], gvd: c.gvd[e.i][e.j+1]}
	} else {
		b = sample{x: x[e.i+1], gvd: c.gvd[e.i+1][e.j]}
	}
	c.walk.values[c.axes[0]], c.walk.values[c.axes[1]] = x[e.i], y[e.j]
	r, err := c.walk.root(c.axes[along], a, b, func(s sample) float64 { return s.gvd })
	if err != nil {
		return err
	}
	p := [2]float64{x[e.i], y[e.j]}
	p[along] = r.x
	if math.IsNaN(r.gvd) {
		p[along] = a.x + (b.x-a.x)*a.gvd/(a.gvd-b.gvd)
	}
	c.points[e] = p
	c.edges = append(c.edges, e)
	return nil
}

func (c *contour) link(a, b edge) {
	c.next[a] = append(c.next[a], b)
	c.next[b] = append(c.next[b], a)
}

// lines follows the links: first the lines with ends, then the closed ones.
func (c *contour) lines() []Line {
	var list []Line
	done := map[edge]bool{}
	for _, closed := range []bool{false, true} {
		for _, e := range c.edges {
			if !done[e] && (closed || len(c.next[e]) == 1) {
				list = append(list, Line{Points: c.follow(e, done), Closed: closed})
			}
		}
	}
	return list
}

func (c *contour) follow(e edge, done map[edge]bool) [][2]float64 {
	var points [][2]float64
	for {
		done[e] = true
		points = append(points, c.points[e])
		more := false
		for _, n := range c.next[e] {
			if !done[n] {
				e, more = n, true
				break
			}
		}
		if !more {
			return points
		}
	}
}
