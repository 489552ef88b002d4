package section

// Wall is what stands at an outer side of a mesh.
type Wall uint8

// The kinds of wall.
const (
	Electric Wall = iota // the tangential electric field is zero: a metal wall, or a mirror plane that turns it round
	Magnetic             // the tangential magnetic field is zero
)

// Mesh is a tensor grid of quadrilaterals whose horizontal lines are straight and level and whose vertical lines
// may bend at each of them. Every cell is convex: its lower and upper edges are horizontal and of positive length.
type Mesh struct {
	Y      []float64   // ny+1 lines, rising, m
	X      [][]float64 // X[j][i]: position of vertical line i on horizontal line j (ny+1 of nx+1), m
	Medium [][]int     // [row j][column i]: index into the outline's Media; Metal is not part of the domain
	Part   [][][]int   // [row j][column i]: indices into the outline's Parts, one for each of Copies
	OrderX []int       // polynomial order of each column (nx)
	OrderY []int       // polynomial order of each row (ny)

	Left, Right, Bottom, Top Wall

	// DX[p][j][i] and DY[p][j] are the derivatives of X and Y with respect to base parameter p, per SI unit;
	// both are nil for a parameter that moves nothing.
	DX [][][]float64
	DY [][]float64

	// Split marks the base parameters that would open a layer, a strip or a gap of no extent, or part two walls
	// that coincide: DX and DY do not give the derivative in these.
	Split  []bool
	Copies int // how often the mesh stands in the section: 1, 2 with a mirror plane used, 4 with both
}

// Metal is the medium of a cell of metal.
const Metal = -1

// Same reports whether two meshes have the same topology: the same cells, media, orders and walls.
func (m *Mesh) Same(other *Mesh) bool {
	if len(m.OrderX) != len(other.OrderX) || len(m.OrderY) != len(other.OrderY) ||
		m.Left != other.Left || m.Right != other.Right || m.Bottom != other.Bottom || m.Top != other.Top {
		return false
	}
	for j := range m.Medium {
		if m.OrderY[j] != other.OrderY[j] {
			return false
		}
		for i, medium := range m.Medium[j] {
			if medium != other.Medium[j][i] || m.OrderX[i] != other.OrderX[i] {
				return false
			}
		}
	}
	return true
}
