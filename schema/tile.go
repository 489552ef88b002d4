package schema

import (
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
)

// Tile is a box of the grid, or a stretch of a points file, with the physics
// to solve at each of its points. It needs nothing outside itself.
//
// The points of a box run in row-major order over Axes (the last varies
// fastest); those of a stretch are Rows in order. Exactly one of the two is
// set, unless the sweep has no axis: then both are empty and the tile is one
// point.
type Tile struct {
	Physics Physics     `json:"physics"`
	Axes    []AxisBlock `json:"axes,omitempty"`
	Columns []string    `json:"columns,omitempty"` // parameter names of Rows
	Rows    [][]float64 `json:"rows,omitempty"`    // SI, angles in radians
}

// AxisBlock is the part of one axis that a tile covers.
type AxisBlock struct {
	Parameter string    `json:"parameter"`
	Values    []float64 `json:"values"` // SI, angles in radians
}

// Points counts the tile's points.
func (t *Tile) Points() int {
	if t.Rows != nil {
		return len(t.Rows)
	}
	n := 1
	for _, a := range t.Axes {
		n *= len(a.Values)
	}
	return n
}

// Values sets dst to the axis values (or row) of the i-th point, in the
// order of Axes or Columns, and returns it.
func (t *Tile) Values(i int, dst []float64) []float64 {
	if t.Rows != nil {
		return append(dst[:0], t.Rows[i]...)
	}
	dst = append(dst[:0], make([]float64, len(t.Axes))...)
	for a := len(t.Axes) - 1; a >= 0; a-- {
		n := len(t.Axes[a].Values)
		dst[a] = t.Axes[a].Values[i%n]
		i /= n
	}
	return dst
}

// Varying lists the parameters that Values gives, in its order.
func (t *Tile) Varying() []string {
	if t.Rows != nil {
		return t.Columns
	}
	names := make([]string, len(t.Axes))
	for i, a := range t.Axes {
		names[i] = a.Parameter
	}
	return names
}

// Name is the tile's name: the hash of its content, 64 hexadecimal digits.
// Equal physics at equal points have equal names, whatever sweep they come
// from.
func (t *Tile) Name() (string, error) {
	b, err := json.Marshal(t)
	if err != nil {
		return "", fmt.Errorf("tile: %w", err)
	}
	h := sha256.Sum256(b)
	return hex.EncodeToString(h[:]), nil
}
