package channel

import (
	"betaloom/schema"
	"betaloom/solvers/internal/ldl"
	"betaloom/solvers/jet"
	"betaloom/solvers/section"
)

// Derivatives is what a mode's L (1/m^2) owes to the angular frequency (rad/s) and the base
// parameters: exact for the mesh, to the accuracy of the mode's vectors.
type Derivatives struct {
	L    jet.Jet
	Wall [4]Slope // per metre that the left, right, bottom, top computational wall moves outward; zero where it is a plane or metal
}

// Slope is a derivative of L and its own derivative in the angular frequency.
type Slope struct{ L, LW complex128 }

// squared gives k^2 eps of each medium as jets, 1/m^2.
func squared(w float64, media []section.Medium) [][3]jet.Jet {
	const c = schema.LightSpeed
	k2 := jet.Jet{V: complex(w/c*(w/c), 0), W: complex(2*w/(c*c), 0), WW: complex(2/(c*c), 0)}
	out := make([][3]jet.Jet, len(media))
	for i := range media {
		for a := range out[i] {
			out[i][a] = jet.Mul(k2, media[i].Eps[a])
		}
	}
	return out
}

// Differentiate gives the derivatives of a mode that Modes found with Slopes: eigenvalue derivatives to third order from
// the vector and its own first derivative (Nelson, AIAA J. 14 (1976) 1201; the 2n+1 rule), with respect to dimensions by the motion
// of the mesh.
func (p *Pencil) Differentiate(m *Pair) Derivatives {
	if p.lossless {
		return differentiate(p, &p.t.real, convertAll[float64](m.X), convertAll[float64](m.X1), real(m.L))
	}
	return differentiate(p, &p.t.cplx, m.X, m.X1, m.L)
}

func convertAll[T ldl.Number](x []complex128) []T {
	out := make([]T, len(x))
	for i, c := range x {
		out[i] = fromComplex[T](c)
	}
	return out
}

// masses is x, y and z of two fields, of one medium.
type masses[T ldl.Number] [3]T

func (m *masses[T]) add(f *overlap[T]) {
	m[0] += f.v[pieceX]
	m[1] += f.v[pieceY]
	m[2] += f.v[pieceZ]
}

// shapeSlope is a derivative in the shape of one cell.
type shapeSlope[T ldl.Number] [shapeNumbers]T

// mixed adds up pieces' derivatives in the shape.
func (f *overlap[T]) mixed(c [pieces]T) (s shapeSlope[T]) {
	for i, w := range c {
		for j := range s {
			s[j] += w * f.d[i][j]
		}
	}
	return s
}

// sums is what the derivatives of one mode are made of.
type sums[T ldl.Number] struct {
	m00, m01, m11 []masses[T]     // of each medium: vector and vector, vector and its derivative, derivative with itself
	b, b11        T               // B of the vector with itself, of the derivative with itself
	f00, f01      []shapeSlope[T] // of each cell: F of the vectors
	w00, b00      []shapeSlope[T] // F_w and B
}

// sign is x'Bx: 1, or -1 for a backward wave.
func (s *sums[T]) sign() T {
	if realPart(s.b) < 0 {
		return fromReal[T](-1)
	}
	return fromReal[T](1)
}

// coefficients of F, F_w and B in the pieces.
func (k *rates[T]) full(m int, l T) [pieces]T {
	c := k.v[m]
	return [pieces]T{1, -c[0], -c[1], l, l, -l * c[2]}
}
func (k *rates[T]) slope(m int, l T) [pieces]T {
	c := k.w[m]
	return [pieces]T{0, -c[0], -c[1], 0, 0, -l * c[2]}
}
func (k *rates[T]) axial(m int) [pieces]T { return [pieces]T{0, 0, 0, 1, 1, -k.v[m][2]} }

// rates is kappa = k^2 eps of each medium with its derivatives in w.
type rates[T ldl.Number] struct{ v, w, ww, www [][3]T }

func newRates[T ldl.Number](kappa [][3]jet.Jet) *rates[T] {
	n := len(kappa)
	r := &rates[T]{make([][3]T, n), make([][3]T, n), make([][3]T, n), make([][3]T, n)}
	for i := range kappa {
		for a, j := range kappa[i] {
			r.v[i][a], r.w[i][a] = fromComplex[T](j.V), fromComplex[T](j.W)
			r.ww[i][a], r.www[i][a] = fromComplex[T](j.WW), fromComplex[T](j.WWW)
		}
	}
	return r
}

// weigh is the sum over media of -kappa_x x - kappa_y y - l kappa_z z.
func weigh[T ldl.Number](kappa [][3]T, m []masses[T], l T) (sum T) {
	for i := range m {
		c := &kappa[i]
		sum -= c[0]*m[i][0] + c[1]*m[i][1] + l*c[2]*m[i][2]
	}
	return sum
}

// axially is x'B_w x from kappa's derivative: the sum of -kappa_z z.
func axially[T ldl.Number](kappa [][3]T, m []masses[T]) (sum T) {
	for i := range m {
		sum -= kappa[i][2] * m[i][2]
	}
	return sum
}

func differentiate[T ldl.Number](p *Pencil, kit *kit[T], x, x1 []T, l T) Derivatives {
	k := newRates[T](p.kappa)
	s := gatherSums(p, kit, k, x, x1, l)
	b := s.sign()
	two, three, six := fromReal[T](2), fromReal[T](3), fromReal[T](6)
	zero := fromReal[T](0)
	l1 := -weigh(k.w, s.m00, l) * b
	bw, bww := axially(k.w, s.m00), axially(k.ww, s.m00)
	l2 := -(weigh(k.ww, s.m00, l) + two*l1*bw + two*weigh(k.w, s.m01, l)) * b
	second := weigh(k.ww, s.m01, l) + two*l1*axially(k.w, s.m01)
	l3 := -(weigh(k.www, s.m00, l) + three*l1*bww + three*l2*bw + six*second + six*(weigh(k.w, s.m11, l)+l1*s.b11)) * b
	d := Derivatives{L: jet.Jet{V: toComplex(l), W: toComplex(l1), WW: toComplex(l2), WWW: toComplex(l3)}}
	if n := p.params; n > 0 {
		d.L.P, d.L.WP = make([]complex128, n), make([]complex128, n)
	}
	slope := func(move func(c *cell) [shapeNumbers]float64, i int) Slope {
		fp, wp, f1 := zero, zero, zero
		if move != nil {
			fp, wp, f1 = s.moved(p, move, l1)
		}
		if i >= 0 {
			fp += alongP(p.kappa, s.m00, l, i, false)
			wp += alongP(p.kappa, s.m00, l, i, true) + l1*alongZ(p.kappa, s.m00, i)
			f1 += alongP(p.kappa, s.m01, l, i, false)
		}
		lp := -fp * b
		return Slope{toComplex(lp), toComplex(-(wp + lp*bw + two*f1) * b)}
	}
	for i := range p.params {
		v := slope(p.motion(i), i)
		d.L.P[i], d.L.WP[i] = v.L, v.LW
	}
	for side := range d.Wall {
		if move := p.wall(side); move != nil {
			d.Wall[side] = slope(move, -1)
		}
	}
	return d
}

// alongP is weigh with the derivative of kappa in base parameter i, or that in w and it.
func alongP[T ldl.Number](kappa [][3]jet.Jet, m []masses[T], l T, i int, w bool) (sum T) {
	for n := range m {
		for a, j := range kappa[n] {
			list := j.P
			if w {
				list = j.WP
			}
			if list == nil {
				continue
			}
			c := fromComplex[T](list[i]) * m[n][a]
			if a == 2 {
				c *= l
			}
			sum -= c
		}
	}
	return sum
}

// alongZ is axially with the derivative of kappa in base parameter i.
func alongZ[T ldl.Number](kappa [][3]jet.Jet, m []masses[T], i int) (sum T) {
	for n := range m {
		if j := &kappa[n][2]; j.P != nil {
			sum -= fromComplex[T](j.P[i]) * m[n][2]
		}
	}
	return sum
}

// moved sums the cells' slopes as their shapes move: of F on the vector, of F_w + L1 B, and of F between vector and derivative.
func (s *sums[T]) moved(p *Pencil, move func(c *cell) [shapeNumbers]float64, l1 T) (f, w, f1 T) {
	for n := range p.t.cells {
		for j, v := range move(&p.t.cells[n]) {
			if v == 0 {
				continue
			}
			v := fromReal[T](v)
			f += v * s.f00[n][j]
			w += v * (s.w00[n][j] + l1*s.b00[n][j])
			f1 += v * s.f01[n][j]
		}
	}
	return f, w, f1
}

// motion says how cells' shapes change with base parameter i; nil if they do not.
func (p *Pencil) motion(i int) func(c *cell) [shapeNumbers]float64 {
	if i >= len(p.mesh.DX) || p.mesh.DX[i] == nil {
		return nil
	}
	dx, dy := p.mesh.DX[i], p.mesh.DY[i]
	return func(c *cell) [shapeNumbers]float64 {
		low, high := dx[c.j], dx[c.j+1]
		return [shapeNumbers]float64{
			(low[c.i+1] - low[c.i]) / 2, (high[c.i+1] - high[c.i]) / 2,
			(high[c.i] - low[c.i]) / 2, (high[c.i+1] - low[c.i+1]) / 2,
			(dy[c.j+1] - dy[c.j]) / 2,
		}
	}
}

// Sides of a mesh, as in Derivatives.Wall.
const (
	sideLeft = iota
	sideRight
	sideBottom
	sideTop
)

// wall says how cells' shapes change as an outer line moves outward.
func (p *Pencil) wall(side int) func(c *cell) [shapeNumbers]float64 {
	nx, ny := len(p.mesh.OrderX), len(p.mesh.OrderY)
	return func(c *cell) (s [shapeNumbers]float64) {
		switch {
		case side == sideLeft && c.i == 0, side == sideRight && c.i == nx-1:
			s[shapeLow], s[shapeHigh] = 0.5, 0.5
		case side == sideBottom && c.j == 0, side == sideTop && c.j == ny-1:
			s[shapeHeight] = 0.5
		}
		return s
	}
}

// gatherSums integrates over all cells.
func gatherSums[T ldl.Number](p *Pencil, kit *kit[T], k *rates[T], x, x1 []T, l T) *sums[T] {
	n := len(p.t.cells)
	s := &sums[T]{
		m00: make([]masses[T], len(k.v)), m01: make([]masses[T], len(k.v)), m11: make([]masses[T], len(k.v)),
		f00: make([]shapeSlope[T], n), f01: make([]shapeSlope[T], n), w00: make([]shapeSlope[T], n), b00: make([]shapeSlope[T], n),
	}
	v := kit.evaluator(p.t)
	for i := range p.t.cells {
		c := &p.t.cells[i]
		r := p.t.rule(c.orders, corners(p.mesh, c.i, c.j, 1))
		v.evaluate(c, r, x, &kit.fields[0])
		v.evaluate(c, r, x1, &kit.fields[1])
		f00, f01 := between(r, &kit.fields[0], &kit.fields[0]), between(r, &kit.fields[0], &kit.fields[1])
		f11 := between(r, &kit.fields[1], &kit.fields[1])
		s.m00[c.medium].add(&f00)
		s.m01[c.medium].add(&f01)
		s.m11[c.medium].add(&f11)
		s.b += f00.v[pieceSX] + f00.v[pieceSY] - k.v[c.medium][2]*f00.v[pieceZ]
		s.b11 += f11.v[pieceSX] + f11.v[pieceSY] - k.v[c.medium][2]*f11.v[pieceZ]
		full := k.full(c.medium, l)
		s.f00[i], s.f01[i] = f00.mixed(full), f01.mixed(full)
		s.w00[i], s.b00[i] = f00.mixed(k.slope(c.medium, l)), f00.mixed(k.axial(c.medium))
	}
	return s
}
