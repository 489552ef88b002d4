package channel

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"
	"sort"

	"betaloom/schema"
	"betaloom/solvers/internal/ldl"
)

// Shares is what a mode's power and fields divide into, over the whole section: that of a half or quarter is
// taken as often as it stands in it.
type Shares struct {
	ExShare float64   // integral of |Ex|^2 over that of |Ex|^2 + |Ey|^2
	Aeff    float64   // (int S)^2 / int S^2 of the axial power flow S, m^2
	Parts   []float64 // share of the axial power of each part of the outline
	Power   float64   // axial power of the fields that Samples gives, W
}

// Shares integrates a mode's fields; parts is the number of the outline's.
func (p *Pencil) Shares(m *Pair, parts int) Shares {
	if p.lossless {
		return sharesOf(p, &p.t.real, m, convertAll[float64](m.X), parts)
	}
	return sharesOf(p, &p.t.cplx, m, m.X, parts)
}

func sharesOf[T ldl.Number](p *Pencil, kit *kit[T], m *Pair, x []T, parts int) Shares {
	s := Shares{Parts: make([]float64, parts)}
	copies := float64(max(p.mesh.Copies, 1))
	var ex, ey, power, lag, square float64
	v, f := kit.evaluator(p.t), &kit.fields[0]
	for i := range p.t.cells {
		c := &p.t.cells[i]
		r := p.t.rule(c.orders, corners(p.mesh, c.i, c.j, 1))
		v.evaluate(c, r, x, f)
		w := flow(r, f)
		ex, ey, power, lag, square = ex+w.ex, ey+w.ey, power+w.s, lag+w.lag, square+w.ss
		if p.mesh.Part != nil {
			for _, part := range p.mesh.Part[c.j][c.i] {
				s.Parts[part] += w.s / copies
			}
		}
	}
	for i := range s.Parts {
		s.Parts[i] /= power
	}
	s.ExShare, s.Aeff = ex/(ex+ey), copies*power*power/square
	s.Power = copies * real(complex(power, lag)/cmplx.Sqrt(m.L)) / (2 * 4e-7 * math.Pi * schema.LightSpeed * p.k)
	return s
}

// flows are a cell's integrals of |Ex|^2, |Ey|^2, the axial power flow and its square, each to a factor; lag is the
// imaginary part of e s*, of which s is the real one.
type flows struct{ ex, ey, s, lag, ss float64 }

func flow[T ldl.Number](r *ruled, f *field[T]) (w flows) {
	n := len(r.fx.x)
	for j, wy := range r.fy.w {
		g := r.g[j]
		for q, wx := range r.fx.w {
			i, area := j*n+q, wx*wy*g*r.h
			eu, su := toComplex(f.eu[i]), toComplex(f.su[i])
			c := complex(r.c[q]/g, 0)
			ex, sx := eu/complex(g, 0), su/complex(g, 0)
			ey, sy := (toComplex(f.ev[i])-c*eu)/complex(r.h, 0), (toComplex(f.sv[i])-c*su)/complex(r.h, 0)
			w.ex += area * square(ex)
			w.ey += area * square(ey)
			s := real(ex)*real(sx) + imag(ex)*imag(sx) + real(ey)*real(sy) + imag(ey)*imag(sy)
			w.s += area * s
			w.lag += area * (imag(ex)*real(sx) - real(ex)*imag(sx) + imag(ey)*real(sy) - real(ey)*imag(sy))
			w.ss += area * s * s
		}
	}
	return w
}

func square(c complex128) float64 { return real(c)*real(c) + imag(c)*imag(c) }

// Sample is the field of a mode at one point: E in V/m, H in A/m, for the mode's power as it comes.
type Sample struct{ E, H [3]complex128 }

// Samples gives the field at points of the mesh; points in metal or outside have none.
func (p *Pencil) Samples(m *Pair, x, y []float64) []Sample {
	out := make([]Sample, len(x))
	beta := cmplx.Sqrt(m.L)
	for n := range x {
		i, j, u, v, ok := p.locate(x[n], y[n])
		if c := p.t.cell(i, j); ok && c != nil {
			out[n] = p.sample(c, m.X, u, v, beta)
		}
	}
	return out
}

// cell gives the active cell of column i and row j, nil where there is none; they are listed row by row.
func (t *Topology) cell(i, j int) *cell {
	at, in := slices.BinarySearchFunc(t.cells, [2]int{j, i}, func(c cell, want [2]int) int {
		return cmp.Or(cmp.Compare(c.j, want[0]), cmp.Compare(c.i, want[1]))
	})
	if !in {
		return nil
	}
	return &t.cells[at]
}

// locate finds the cell of a point and its place there.
func (p *Pencil) locate(x, y float64) (i, j int, u, v float64, ok bool) {
	j = sort.SearchFloat64s(p.mesh.Y, y) - 1
	if j < 0 && y == p.mesh.Y[0] {
		j = 0
	}
	if j < 0 || j+1 >= len(p.mesh.Y) {
		return 0, 0, 0, 0, false
	}
	t := (y - p.mesh.Y[j]) / (p.mesh.Y[j+1] - p.mesh.Y[j])
	line := func(i int) float64 { return (1-t)*p.mesh.X[j][i] + t*p.mesh.X[j+1][i] }
	n := len(p.mesh.OrderX)
	i = sort.Search(n, func(i int) bool { return line(i+1) >= x })
	if i == n || x < line(0) {
		return 0, 0, 0, 0, false
	}
	return i, j, 2*(x-line(i))/(line(i+1)-line(i)) - 1, 2*t - 1, true
}

// sample sums the functions of a cell at one place.
func (p *Pencil) sample(c *cell, x []complex128, u, v float64, beta complex128) Sample {
	q := corners(p.mesh, c.i, c.j, 1)
	hx, lx := legendre(c.px, u)
	hy, ly := legendre(c.py, v)
	dx, dy := append([]float64{-0.5, 0.5}, lx[2:]...), append([]float64{-0.5, 0.5}, ly[2:]...)
	var e, s [2]complex128
	var z, curl complex128
	k := p.t.cplx.evaluator(p.t)
	list := k.lists[c.orders]
	for i, f := range list.list {
		at := k.at(c, list, i)
		if at < 0 {
			continue
		}
		w := x[at]
		r := func(a, b float64) complex128 { return w * complex(a*b, 0) }
		switch f.kind {
		case kindX:
			e[0] += r(lx[f.a], hy[f.b])
			curl -= r(lx[f.a], dy[f.b])
		case kindY:
			e[1] += r(hx[f.a], ly[f.b])
			curl += r(dx[f.a], ly[f.b])
		case kindZ:
			z += r(hx[f.a], hy[f.b])
			s[0] += r(dx[f.a], hy[f.b])
			s[1] += r(hx[f.a], dy[f.b])
		}
	}
	s[0], s[1] = s[0]+e[0], s[1]+e[1]
	return q.physical(u, v, e, s, z, curl, beta, p.k*schema.LightSpeed)
}

// physical carries reference components to the section and to E and H: E_t = e/beta, E_z = j e_z, H = (-s_y, s_x, j curl e/beta)/(w mu).
func (q *quadrilateral) physical(u, v float64, e, s [2]complex128, z, curl, beta complex128, w float64) Sample {
	h := q.height / 2
	g := ((q.right[0]-q.left[0])*(1-v) + (q.right[1]-q.left[1])*(1+v)) / 4
	c := ((q.left[1]-q.left[0])*(1-u) + (q.right[1]-q.right[0])*(1+u)) / 4
	carry := func(a [2]complex128) (x, y complex128) {
		return a[0] / complex(g, 0), (a[1] - complex(c/g, 0)*a[0]) / complex(h, 0)
	}
	ex, ey := carry(e)
	sx, sy := carry(s)
	wm := complex(w*4e-7*math.Pi, 0)
	return Sample{
		E: [3]complex128{ex / beta, ey / beta, 1i * z},
		H: [3]complex128{-sy / wm, sx / wm, 1i * curl / complex(g*h, 0) / beta / wm},
	}
}
