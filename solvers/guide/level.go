package guide

import (
	"betaloom/solvers/channel"
	"betaloom/solvers/section"
)

// fineness is layers of cells toward each corner, the order of the widest cells, and how fast cells grow toward the walls.
type fineness struct {
	layers, order int
	growth        float64
}

// level is a mesh whose modes are the answer and a coarser one that says where to look for them and how far the walls must be.
type level struct{ coarse, fine fineness }

// levels are those in use, from the coarsest.
func levels() []level {
	few, some := fineness{1, 3, growth}, fineness{2, 4, growth}
	return []level{
		{fineness{1, 2, growth}, fineness{1, 4, growth}},
		{few, fineness{2, 4, growth}},
		{few, fineness{2, 5, growth}},
		{few, fineness{3, 5, growth}},
		{few, fineness{3, 6, growth}},
		{few, fineness{4, 6, growth}},
		{few, fineness{4, 7, growth}},
		{some, fineness{5, 8, growth}},
		{some, fineness{6, 9, growth}},
		{some, fineness{7, 11, growth}},
		{some, fineness{8, 13, growth}},
	}
}

// growth is from cell to cell where modes are solved; where they are only counted walls are so far that it is more.
const (
	growth    = 2
	farGrowth = 4
)

// step is by how much a level is better than the one before, as a rule.
const step = 5

// first is the level to begin with.
func (p *point) first() int {
	switch a := p.accuracy.Neff; {
	case a >= 1e-4:
		return 0
	case a >= 1e-5:
		return 1
	case a >= 1e-7:
		return 2
	}
	return 4
}

// most bounds the unknowns of one discretisation.
const most = 90000

// mesh makes a mesh of a class.
func (p *point) mesh(c *class, l fineness, b *section.Bounds) (*section.Mesh, error) {
	return p.outline.Mesh(section.Options{
		Bounds: *b, Growth: l.growth, Order: l.order, MinOrder: 2, CornerLayers: l.layers, Size: p.size,
		HalfX: c.halfX, HalfY: c.halfY, WallX: c.wallX, WallY: c.wallY, Outer: section.Electric,
	})
}

// shelf keeps the topologies that were used last.
type shelf struct {
	list []*kept
	used int
}

type kept struct {
	mesh     *section.Mesh
	topology *channel.Topology
	used     int
}

// room is how many topologies are kept.
const room = 16

// topology gives that of a mesh, from the shelf if it is there.
func (s *shelf) topology(m *section.Mesh) (*channel.Topology, error) {
	s.used++
	for _, k := range s.list {
		if k.mesh.Same(m) {
			k.used = s.used
			return k.topology, nil
		}
	}
	t, err := channel.New(m)
	if err != nil {
		return nil, err
	}
	n := &kept{m, t, s.used}
	if len(s.list) < room {
		s.list = append(s.list, n)
		return t, nil
	}
	oldest := 0
	for i, k := range s.list {
		if k.used < s.list[oldest].used {
			oldest = i
		}
	}
	s.list[oldest] = n
	return t, nil
}
