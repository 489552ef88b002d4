package guide

import (
	"betaloom/solvers/channel"
	"betaloom/solvers/section"
)

// fineness is layers of cells toward each corner and the order of the widest cells.
type fineness struct{ layers, order int }

// level is a mesh whose modes are the answer and a coarser one that says where to look for them and how far the walls must be.
type level struct{ coarse, fine fineness }

// levels are those in use, from the coarsest.
func levels() []level {
	return []level{
		{fineness{1, 2}, fineness{1, 4}},
		{fineness{1, 3}, fineness{2, 5}},
		{fineness{2, 4}, fineness{3, 6}},
		{fineness{3, 5}, fineness{4, 7}},
		{fineness{4, 6}, fineness{5, 8}},
		{fineness{5, 7}, fineness{6, 9}},
		{fineness{6, 9}, fineness{7, 11}},
		{fineness{7, 11}, fineness{8, 13}},
	}
}

// first is the level to begin with.
func (p *point) first() int {
	switch a := p.accuracy.Neff; {
	case a >= 1e-4:
		return 0
	case a >= 1e-7:
		return 1
	}
	return 2
}

// most bounds the unknowns of one discretisation.
const most = 90000

// mesh makes a mesh of a class.
func (p *point) mesh(c *class, l fineness, b *section.Bounds) (*section.Mesh, error) {
	return p.outline.Mesh(section.Options{
		Bounds: *b, Order: l.order, MinOrder: 2, CornerLayers: l.layers, Size: p.size,
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
