package guide

import (
	"math"
	"slices"

	"betaloom/solvers/section"
)

// lobes is how often the dominant field changes its sign across and up. In the half on one side of a mirror plane it is counted
// once, and once more in the plane for an odd field. The field normal to a conductor turns round from one of its faces to the
// other whatever the mode: such a change is not counted.
func (p *point) lobes(m *solved, te bool) (across, up int) {
	c := m.class
	lines := p.across(m.mesh)
	rulers := [2]ruler{p.rule(lines[0]), p.rule(lines[1])}
	field := p.dominant(m, te, &rulers)
	fx, fy := profiles(field, len(rulers[0].at))
	normal := 1
	if te {
		normal = 0
	}
	metal := p.conductors(normal)
	rulers[normal].breaks(metal)
	across, up = rulers[0].changes(fx), rulers[1].changes(fy)
	l, r, b, t, _ := p.outline.Corners()
	if c.halfX {
		across = 2*across + odd(te != (c.wallX == section.Electric) && !(te && covered(metal, (l+r)/2)))
	}
	if c.halfY {
		up = 2*up + odd(te != (c.wallY == section.Magnetic) && !(!te && covered(metal, (b+t)/2)))
	}
	return across, up
}

// dominant is the field on the two rulers' places, row by row, each value times the root of the area it stands for.
func (p *point) dominant(m *solved, te bool, r *[2]ruler) []float64 {
	var xs, ys []float64
	for _, y := range r[1].at {
		for _, x := range r[0].at {
			xs, ys = append(xs, x), append(ys, y)
		}
	}
	axis := 1
	if te {
		axis = 0
	}
	field := make([]float64, len(xs))
	n := len(r[0].at)
	for i, s := range m.pencil.Samples(&m.pair, xs, ys) {
		field[i] = real(s.E[axis]) * r[0].weight[i%n] * r[1].weight[i/n]
	}
	return field
}

// across gives the lines along x and y between which the materials do not change, and the ends of a mesh or, where
// it is open, places a little beyond the outermost lines.
func (p *point) across(m *section.Mesh) (lines [2][]float64) {
	for i := range p.outline.Layers {
		l := &p.outline.Layers[i]
		lines[1] = append(lines[1], l.Bottom.V, l.Top.V)
		for _, s := range l.Strips {
			lines[0] = append(lines[0], (s.Left.Bottom.V+s.Left.Top.V)/2, (s.Right.Bottom.V+s.Right.Top.V)/2)
		}
	}
	ends := [2][2]float64{{m.X[0][0], m.X[0][len(m.X[0])-1]}, {m.Y[0], m.Y[len(m.Y)-1]}}
	l, r, b, t, ok := p.outline.Corners()
	margin := 0.25 * max(r-l, t-b)
	for axis := range lines {
		lines[axis] = slices.DeleteFunc(lines[axis], func(v float64) bool { return math.IsInf(v, 0) })
		slices.Sort(lines[axis])
		lo, hi := ends[axis][0], ends[axis][1]
		if n := len(lines[axis]); ok && n > 0 {
			lo, hi = max(lo, lines[axis][0]-margin), min(hi, lines[axis][n-1]+margin)
		}
		hair := 1e-6 * (hi - lo)
		lines[axis] = append(slices.DeleteFunc(lines[axis], func(v float64) bool { return v < lo+hair || v > hi-hair }), lo, hi)
		slices.Sort(lines[axis])
		lines[axis] = slices.CompactFunc(lines[axis], func(a, b float64) bool { return math.Abs(a-b) < hair })
	}
	return lines
}

// ruler is places along an axis.
type ruler struct {
	at, weight []float64 // weight is the root of the length that a place stands for
	broken     []bool    // a conductor is at the place or between it and the one before
}

// rule takes a few places between each two lines, more where a wave of the densest medium has room.
func (p *point) rule(lines []float64) (r ruler) {
	const least, most, wave = 4, 40, 6
	for i := 1; i < len(lines); i++ {
		d := lines[i] - lines[i-1]
		n := int(min(least+wave*d*p.k*p.densest()/(2*math.Pi), most))
		for j := range n {
			r.at = append(r.at, lines[i-1]+d*(float64(j)+0.5)/float64(n))
			r.weight = append(r.weight, math.Sqrt(d/float64(n)))
		}
	}
	r.broken = make([]bool, len(r.at))
	return r
}

// conductors are the stretches of an axis that strips of metal take up.
func (p *point) conductors(axis int) (list [][2]float64) {
	for i := range p.outline.Layers {
		l := &p.outline.Layers[i]
		for _, s := range l.Strips {
			if s.Medium == section.Metal {
				list = append(list, [2][2]float64{
					{min(s.Left.Bottom.V, s.Left.Top.V), max(s.Right.Bottom.V, s.Right.Top.V)}, {l.Bottom.V, l.Top.V},
				}[axis])
			}
		}
	}
	return list
}

func covered(list [][2]float64, at float64) bool {
	return slices.ContainsFunc(list, func(s [2]float64) bool { return at >= s[0] && at <= s[1] })
}

// breaks marks where conductors stand.
func (r *ruler) breaks(metal [][2]float64) {
	for i := 1; i < len(r.at); i++ {
		r.broken[i] = slices.ContainsFunc(metal, func(s [2]float64) bool { return s[0] <= r.at[i] && s[1] >= r.at[i-1] })
	}
}

func odd(b bool) int {
	if b {
		return 1
	}
	return 0
}

// profiles are the functions of x and of y whose product comes nearest to a field given in rows of n: its first singular
// vectors, by iteration.
func profiles(field []float64, n int) (fx, fy []float64) {
	fx, fy = make([]float64, n), make([]float64, len(field)/n)
	best := 0.0
	for j := range fy {
		row := field[j*n : (j+1)*n]
		if size := norm(row); size > best {
			best = size
			copy(fx, row)
		}
	}
	const enough = 30
	for range enough {
		for j := range fy {
			fy[j] = dot(field[j*n:(j+1)*n], fx)
		}
		clear(fx)
		for j, w := range fy {
			for i := range fx {
				fx[i] += w * field[j*n+i]
			}
		}
		size := norm(fx)
		if size == 0 {
			return fx, fy
		}
		for i := range fx {
			fx[i] /= size
		}
	}
	return fx, fy
}

// changes counts changes of sign among values that are not small.
func (r *ruler) changes(f []float64) (n int) {
	const small = 0.08
	top := 0.0
	for i := range f {
		top = max(top, math.Abs(f[i]/r.weight[i]))
	}
	last := 0.0
	for i := range f {
		if r.broken[i] {
			last = 0
		}
		v := f[i] / r.weight[i]
		if math.Abs(v) <= small*top {
			continue
		}
		if last*v < 0 {
			n++
		}
		last = v
	}
	return n
}
