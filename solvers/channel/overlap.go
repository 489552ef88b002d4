package channel

import "betaloom/solvers/internal/ldl"

// The integrals of two fields that F is a sum of, for one cell: with kappa = k^2 eps
//
//	F = curl - kappa_x x - kappa_y y + L (sx + sy - kappa_z z)
//
// x and y are the masses of e along x and y, sx and sy those of s = e + grad e_z.
const (
	pieceCurl = iota
	pieceX
	pieceY
	pieceSX
	pieceSY
	pieceZ
	pieces
)

// The numbers that a cell's shape has: half the width of its lower and upper edge, half the
// shift of its left and right one between bottom and top, half its height.
const (
	shapeLow = iota
	shapeHigh
	shapeLeft
	shapeRight
	shapeHeight
	shapeNumbers
)

// overlap is the pieces of two fields in one cell with their derivatives in its shape.
type overlap[T ldl.Number] struct {
	v [pieces]T
	d [pieces][shapeNumbers]T
}

// moments is the sums over one row of points of a component's products with its like (uu), with the other
// component (uv) and of the others' (vv), times powers of the shift c and the share
// of the left end (l).
type moments[T ldl.Number] struct {
	uu, uuc, uucc, uucl, uv, uvc, uvl, vv T
}

// between forms the pieces of two fields in a cell.
func between[T ldl.Number](r *ruled, f, o *field[T]) (p overlap[T]) {
	n := len(r.fx.x)
	for j, v := range r.fy.x {
		row := func(s []T) []T { return s[j*n : (j+1)*n] }
		at := level[T]{g: fromReal[T](r.g[j]), h: fromReal[T](r.h), w: fromReal[T](r.fy.w[j]), low: fromReal[T]((1 - v) / 2)}
		var curl, zz T
		fc, oc, fz, oz := row(f.curl), row(o.curl), row(f.z), row(o.z)
		for q, w := range r.fx.w {
			w := fromReal[T](w)
			curl += w * fc[q] * oc[q]
			zz += w * fz[q] * oz[q]
		}
		at.curl(&p, curl)
		at.axial(&p, zz)
		e := gatherMoments(r, row(f.eu), row(f.ev), row(o.eu), row(o.ev))
		at.masses(&p, &e, pieceX, pieceY)
		s := gatherMoments(r, row(f.su), row(f.sv), row(o.su), row(o.sv))
		at.masses(&p, &s, pieceSX, pieceSY)
	}
	return p
}

func gatherMoments[T ldl.Number](r *ruled, fu, fv, ou, ov []T) (m moments[T]) {
	for q, w := range r.fx.w {
		w, c, left := fromReal[T](w), fromReal[T](r.c[q]), fromReal[T]((1-r.fx.x[q])/2)
		uu, uv := w*fu[q]*ou[q], w*(fu[q]*ov[q]+fv[q]*ou[q])
		m.uu += uu
		m.uuc += uu * c
		m.uucc += uu * c * c
		m.uucl += uu * c * left
		m.uv += uv
		m.uvc += uv * c
		m.uvl += uv * left
		m.vv += w * fv[q] * ov[q]
	}
	return m
}

// level is one row of points: its weight, the half width there, the half height and the share of the lower edge.
type level[T ldl.Number] struct{ g, h, w, low T }

// width books a derivative in g.
func (l *level[T]) width(d *[shapeNumbers]T, v T) {
	d[shapeLow] += v * l.low
	d[shapeHigh] += v * (1 - l.low)
}

// curl adds curl curl/(g h).
func (l *level[T]) curl(p *overlap[T], sum T) {
	v := l.w * sum / (l.g * l.h)
	p.v[pieceCurl] += v
	l.width(&p.d[pieceCurl], -v/l.g)
	p.d[pieceCurl][shapeHeight] -= v / l.h
}

// axial adds z z g h.
func (l *level[T]) axial(p *overlap[T], sum T) {
	v := l.w * sum
	p.v[pieceZ] += v * l.g * l.h
	l.width(&p.d[pieceZ], v*l.h)
	p.d[pieceZ][shapeHeight] += v * l.g
}

// masses adds h/g uu along x and c^2/(g h) uu - c/h (uv + vu) + g/h vv along y.
func (l *level[T]) masses(p *overlap[T], m *moments[T], x, y int) {
	v := l.w * m.uu / l.g
	p.v[x] += v * l.h
	l.width(&p.d[x], -v*l.h/l.g)
	p.d[x][shapeHeight] += v
	cc, vv := m.uucc/l.g, m.vv*l.g
	s := l.w / l.h
	v = s * (cc - m.uvc + vv)
	p.v[y] += v
	l.width(&p.d[y], s*(m.vv-cc/l.g))
	left := s * (2*m.uucl/l.g - m.uvl)
	p.d[y][shapeLeft] += left
	p.d[y][shapeRight] += s*(2*m.uuc/l.g-m.uv) - left
	p.d[y][shapeHeight] -= v / l.h
}
