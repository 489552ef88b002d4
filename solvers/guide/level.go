package guide

import (
	"betaloom/solvers/channel"
	"betaloom/solvers/section"
)

// level is one fineness of the mesh: layers of cells toward each corner and the order of the widest cells.
type level struct{ layers, order int }

// levels are the finenesses in use, from the coarsest.
func levels() []level {
	return []level{{1, 3}, {1, 4}, {2, 5}, {3, 6}, {4, 7}, {5, 9}, {6, 11}, {7, 13}}
}

// most bounds the unknowns of one discretisation.
const most = 90000

// mesh makes the mesh of a class at a level.
func (p *point) mesh(c *class, at int, b *section.Bounds) (*section.Mesh, error) {
	l := levels()[at]
	return p.outline.Mesh(section.Options{
		Bounds: *b, Order: l.order, MinOrder: min(3, l.order-1), CornerLayers: l.layers, Size: p.size,
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
