package report

import (
	"math"
	"strconv"
)

// vertex is a point of a picture, in pixels.
type vertex struct{ X, Y float64 }

// field is values on a rectangular grid: rows of len(X), Y rising.
type field struct {
	X, Y []float64
	V    []float64
}

func (f *field) at(i, j int) float64 { return f.V[j*len(f.X)+i] }

// An edge is a side of a grid's cell, numbered by its lower or left node: the
// even one is the side to the right of the node, the odd one that above it.
type edge int32

func (f *field) right(i, j int) edge { return edge(2 * (j*len(f.X) + i)) }
func (f *field) above(i, j int) edge { return edge(2*(j*len(f.X)+i) + 1) }

// joints holds, for each edge that a line crosses, the edges that it comes
// from and goes to; none where there is no more.
type joints [][2]edge

const none edge = -1

func (n joints) join(a, b edge) {
	n.put(a, b)
	n.put(b, a)
}

func (n joints) put(a, b edge) {
	if n[a][0] == none {
		n[a][0] = b
		return
	}
	n[a][1] = b
}

// take removes and gives the next edge after e.
func (n joints) take(e edge) edge {
	to := n[e][0]
	if to == none {
		return none
	}
	n[e][0], n[e][1] = n[e][1], none
	if n[to][0] == e {
		n[to][0] = n[to][1]
	}
	n[to][1] = none
	return to
}

// contours finds the lines on which the field has a level, by marching
// squares (linear along the sides of cells; a saddle is decided by the mean of its
// corners). A cell with a missing corner has no line.
func (f *field) contours(level float64) [][]vertex {
	n := make(joints, 2*len(f.X)*len(f.Y))
	for e := range n {
		n[e] = [2]edge{none, none}
	}
	for j := 0; j+1 < len(f.Y); j++ {
		for i := 0; i+1 < len(f.X); i++ {
			for _, s := range f.segments(i, j, level) {
				n.join(s[0], s[1])
			}
		}
	}
	return f.chain(n, level)
}

// segments gives the pieces of line in one cell.
func (f *field) segments(i, j int, level float64) [][2]edge {
	corners := [4]float64{f.at(i, j), f.at(i+1, j), f.at(i+1, j+1), f.at(i, j+1)}
	sum, index := 0.0, 0
	for k, v := range corners {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil
		}
		sum += v / 4
		if v >= level {
			index |= 1 << k
		}
	}
	bottom, right, top, left := f.right(i, j), f.above(i+1, j), f.right(i, j+1), f.above(i, j)
	switch index {
	case 1, 14:
		return [][2]edge{{left, bottom}}
	case 2, 13:
		return [][2]edge{{bottom, right}}
	case 3, 12:
		return [][2]edge{{left, right}}
	case 4, 11:
		return [][2]edge{{right, top}}
	case 6, 9:
		return [][2]edge{{bottom, top}}
	case 7, 8:
		return [][2]edge{{left, top}}
	case 5, 10:
		if (index == 5) == (sum >= level) {
			return [][2]edge{{bottom, right}, {left, top}}
		}
		return [][2]edge{{left, bottom}, {right, top}}
	}
	return nil
}

// chain joins the pieces: open lines first, from their ends, then loops.
func (f *field) chain(n joints, level float64) [][]vertex {
	var lines [][]vertex
	for _, loops := range []bool{false, true} {
		for e := range n {
			if n[e][0] == none || (n[e][1] != none) != loops {
				continue
			}
			var line []vertex
			for at := edge(e); at != none; at = n.take(at) {
				line = append(line, f.crossing(at, level))
			}
			lines = append(lines, line)
		}
	}
	return lines
}

// crossing is where the level is met on a side.
func (f *field) crossing(e edge, level float64) vertex {
	node := int(e / 2)
	i, j := node%len(f.X), node/len(f.X)
	if e%2 == 1 {
		t := fraction(f.at(i, j), f.at(i, j+1), level)
		return vertex{f.X[i], f.Y[j] + t*(f.Y[j+1]-f.Y[j])}
	}
	t := fraction(f.at(i, j), f.at(i+1, j), level)
	return vertex{f.X[i] + t*(f.X[i+1]-f.X[i]), f.Y[j]}
}

func fraction(a, b, level float64) float64 {
	if a == b {
		return 0.5
	}
	return min(1, max(0, (level-a)/(b-a)))
}

// simplify drops vertices that lie within tolerance of the line through
// those that stay (Douglas and Peucker 1973).
func simplify(line []vertex, tolerance float64) []vertex {
	if len(line) < 3 {
		return line
	}
	keep := make([]bool, len(line))
	keep[0], keep[len(line)-1] = true, true
	stack := [][2]int{{0, len(line) - 1}}
	for len(stack) > 0 {
		a, b := stack[len(stack)-1][0], stack[len(stack)-1][1]
		stack = stack[:len(stack)-1]
		far, at := 0.0, -1
		for i := a + 1; i < b; i++ {
			if d := distance(line[i], line[a], line[b]); d > far {
				far, at = d, i
			}
		}
		if far > tolerance {
			keep[at] = true
			stack = append(stack, [2]int{a, at}, [2]int{at, b})
		}
	}
	var out []vertex
	for i, v := range line {
		if keep[i] {
			out = append(out, v)
		}
	}
	return out
}

// distance is that of p from the segment a-b.
func distance(p, a, b vertex) float64 {
	dx, dy := b.X-a.X, b.Y-a.Y
	t := 0.0
	if q := dx*dx + dy*dy; q > 0 {
		t = min(1, max(0, ((p.X-a.X)*dx+(p.Y-a.Y)*dy)/q))
	}
	return math.Hypot(p.X-a.X-t*dx, p.Y-a.Y-t*dy)
}

// pathData writes lines as the data of an SVG path.
func pathData(lines [][]vertex, closed bool) string {
	var b []byte
	for _, line := range lines {
		for i, v := range line {
			b = append(b, "ML"[min(i, 1)])
			b = tenth(b, v.X)
			b = append(b, ' ')
			b = tenth(b, v.Y)
		}
		if closed {
			b = append(b, 'Z')
		}
	}
	return string(b)
}

// tenth writes a coordinate to a tenth of a pixel, inside what SVG readers
// can draw.
func tenth(b []byte, x float64) []byte {
	x = min(1e5, max(-1e5, x))
	return strconv.AppendFloat(b, math.Round(x*10)/10, 'f', -1, 64)
}
