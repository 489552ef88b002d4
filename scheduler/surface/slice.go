package surface

import (
	"fmt"
	"math"
	"slices"

	"betaloom/schema"
	"betaloom/schema/column"
)

// dColumn is not in the file: it follows from GVD and the wavelength.
const dColumn = "d_ps_per_nm_km"

// Slice is the values of a column over some axes, row-major in their order,
// NaN where the family is absent or the value missing.
type Slice struct {
	Axes   []int // file order of the axes it runs over
	Shape  []int
	Values []float64
}

// Slice reads a column of a family at nodes: over the axes listed (indices into Axes), the others held at the
// positions that at gives for every axis; those of the listed axes are ignored. Besides the file's columns
// there is d_ps_per_nm_km.
func (s *Surfaces) Slice(family, name string, axes []int, at []int) (Slice, error) {
	i, err := s.family(family)
	if err != nil {
		return Slice{}, err
	}
	get, err := s.getter(name)
	if err != nil {
		return Slice{}, err
	}
	if err := s.checkSlice(axes, at); err != nil {
		return Slice{}, err
	}
	out := Slice{Axes: slices.Clone(axes)}
	total := 1
	for _, a := range axes {
		n := len(s.meta.Axes[a].Values)
		out.Shape = append(out.Shape, n)
		total *= n
	}
	out.Values = make([]float64, total)
	ws := s.spaces.Get().(*workspace)
	defer s.spaces.Put(ws)
	ws.family = i
	position := slices.Clone(at)
	for k := range out.Values {
		rest := k
		for j := len(axes) - 1; j >= 0; j-- {
			position[axes[j]] = rest % out.Shape[j]
			rest /= out.Shape[j]
		}
		row, err := s.row(ws, s.number(position))
		if err != nil {
			return Slice{}, err
		}
		out.Values[k] = get(row, position)
	}
	return out, nil
}

func (s *Surfaces) checkSlice(axes, at []int) error {
	if len(at) != len(s.meta.Axes) {
		return fmt.Errorf("surface: found %d positions, expected one for each of %d axes", len(at), len(s.meta.Axes))
	}
	for i, a := range axes {
		if a < 0 || a >= len(at) || slices.Contains(axes[:i], a) {
			return fmt.Errorf("surface: found axis %d in a slice, expected 0 to %d, each once", a, len(at)-1)
		}
	}
	for a, p := range at {
		if n := len(s.meta.Axes[a].Values); !slices.Contains(axes, a) && (p < 0 || p >= n) {
			return fmt.Errorf("surface: axis %s: found position %d, expected 0 to %d", s.meta.Axes[a].Parameter, p, n-1)
		}
	}
	return nil
}

// number is the node at positions in file order.
func (s *Surfaces) number(position []int) int {
	node := 0
	for a, m := range s.meta.Axes {
		node = node*len(m.Values) + position[a]
	}
	return node
}

// getter finds a column in a node's row.
func (s *Surfaces) getter(name string) (func(row []float64, position []int) float64, error) {
	if name == dColumn {
		return func(row []float64, position []int) float64 {
			return row[fGVD] * perD(s.wavelength(position))
		}, nil
	}
	c := slices.IndexFunc(s.columns, func(c column.Column) bool { return c.Name == name })
	if c < 0 {
		return nil, fmt.Errorf("surface: found column %s, expected one of the file's", name)
	}
	return func(row []float64, _ []int) float64 { return row[c] }, nil
}

// wavelength is that of a node, in m.
func (s *Surfaces) wavelength(position []int) float64 {
	const c = schema.LightSpeed
	for a, m := range s.meta.Axes {
		if s.axes[a].frequency {
			return 2 * math.Pi * c / s.axes[a].coordinate(m.Values[position[a]])
		}
	}
	return c / s.meta.FrequencyHz
}
