package channel

import (
	"math"

	"betaloom/solvers/internal/ldl"
)

// mediaProduct adds to dst the matrix of the sum over media of cx x + cy y on e, and cz z on e_z, applied to x (SI
// units; overlap.go has the pieces): what F owes to the permittivities.
func mediaProduct[T ldl.Number](p *Pencil, kit *kit[T], dst, x []T, coef [][3]T) {
	v := kit.evaluator(p.t)
	f := &kit.fields[0]
	for i := range p.t.cells {
		c := &p.t.cells[i]
		r := p.t.rule(c.orders, corners(p.mesh, c.i, c.j, 1))
		v.evaluate(c, r, x, f)
		r2 := &kit.fields[1]
		tested(r, f, r2, &coef[c.medium])
		v.integrate(c, r, r2)
		v.scatter(c, dst)
	}
}

// tested makes of a field what its product with the media is tested with: along u, along v, and z.
func tested[T ldl.Number](r *ruled, f, out *field[T], coef *[3]T) {
	n := len(r.fx.x)
	out.eu, out.ev, out.z = grow(out.eu, len(f.eu)), grow(out.ev, len(f.eu)), grow(out.z, len(f.eu))
	h := fromReal[T](r.h)
	for j, wy := range r.fy.w {
		g := fromReal[T](r.g[j])
		for q, wx := range r.fx.w {
			i, w, c := j*n+q, fromReal[T](wx*wy), fromReal[T](r.c[q])
			y := coef[1] * (g*f.ev[i] - c*f.eu[i]) / h
			out.eu[i] = w * (coef[0]*f.eu[i]*h - c*y) / g
			out.ev[i] = w * y
			out.z[i] = w * coef[2] * f.z[i] * g * h
		}
	}
}

// integrate tests with all functions of a cell: into coef, from values with the weights in them.
func (v *evaluator[T]) integrate(c *cell, r *ruled, f *field[T]) {
	v.clear(c)
	fx, fy := r.fx, r.fy
	v.test(fx, fy, fx.l, fy.h, f.eu, kindX, 1, 0)
	v.test(fx, fy, fx.h, fy.l, f.ev, kindY, 0, 1)
	v.test(fx, fy, fx.h, fy.h, f.z, kindZ, 0, 0)
}

func (v *evaluator[T]) test(fx, fy *factors, alongX, alongY func(int) int, in []T, k kind, a0, b0 int) {
	points := len(fx.x)
	rows := len(v.coef[k]) / v.wide
	v.half = grow(v.half, points)
	for b := b0; b < rows; b++ {
		clear(v.half)
		for r, w := range fy.values[alongY(b)] {
			if w != 0 {
				add(v.half, in[r*points:(r+1)*points], fromReal[T](w))
			}
		}
		for a := a0; a < v.wide; a++ {
			v.coef[k][b*v.wide+a] = dotReal(v.half, fx.values[alongX(a)])
		}
	}
}

// dotReal is the sum of x times real numbers.
func dotReal[T ldl.Number](x []T, y []float64) (sum T) {
	for i, v := range x {
		sum += v * fromReal[T](y[i])
	}
	return sum
}

// Slopes: limits of the iteration for a vector's derivative.
const (
	slopeRounds  = 40
	slopePrecise = 1e-11 // relative residual at which to stop
)

// slopeRates is what vectors' derivatives need to know of the pencil.
type slopeRates[T ldl.Number] struct {
	p   *Pencil
	kit *kit[T]
	k   *rates[T]
}

// slopes gives those wanted modes their vector's derivative that have none yet.
func (fd *finder[T]) slopes() error {
	list := fd.found
	if fd.want > 0 && len(list) > fd.want {
		list = list[:fd.want]
	}
	for len(list) > 0 {
		n := 1
		for n < len(list) && ldl.Abs1(list[n-1].n-list[n].n) < near*ldl.Abs1(list[n].n) {
			n++
		}
		done := true
		for _, m := range list[:n] {
			done = done && m.x1 != nil
		}
		if !done {
			if err := fd.under(list[:n]); err != nil {
				return err
			}
			fd.clusterSlopes(list[:n])
		}
		list = list[n:]
	}
	return nil
}

// clusterSlopes finds the derivatives of modes that share the present shift.
func (fd *finder[T]) clusterSlopes(list []pair[T]) {
	fd.settle(list)
	for i := range list {
		list[i].x1 = fd.constrained(list, i, fd.pull(&list[i]))
	}
}

// pull is -F1 x in the units of the system: F_w x and n1 B x, with n1 = -x'F_w x/x'Bx.
func (fd *finder[T]) pull(m *pair[T]) []T {
	p, k := fd.rates.p, fd.rates.k
	k2 := fromReal[T](p.k * p.k)
	coef := make([][3]T, len(k.w))
	for i, w := range k.w {
		coef[i] = [3]T{w[0] / k2, w[1] / k2, m.n * w[2]}
	}
	r := make([]T, len(m.x))
	mediaProduct(p, fd.rates.kit, r, m.x, coef)
	add(r, m.bx, -bilinear(m.x, r)/bilinear(m.x, m.bx))
	return r
}

// constrained solves F(n_i) y = r with x_i'B y = 0, the cluster's modes taken out first: their shares are
// known in closed form, but for twins (the same n to rounding), whose shares no derivative needs.
func (fd *finder[T]) constrained(list []pair[T], i int, r []T) []T {
	m := &list[i]
	y := make([]T, len(r))
	share := make([]T, len(list))
	for j := range list {
		share[j] = bilinear(list[j].x, r) / bilinear(list[j].x, list[j].bx)
		add(r, list[j].bx, -share[j])
	}
	fd.descend(list, m.n, y, r)
	for j := range list {
		if d := m.n - list[j].n; j != i && ldl.Abs1(d) > 1e-13*ldl.Abs1(m.n) {
			add(y, list[j].x, share[j]/d)
		}
	}
	return y
}

// descend adds to y the solution of F(n) y = r without the cluster's modes; r becomes the residual. The factors at the
// shift lead the way, and each step is the best along it and the ones before (generalised conjugate residuals: Eisenstat, Elman and
// Schultz, SIAM J. Numer. Anal. 20 (1983) 345).
func (fd *finder[T]) descend(list []pair[T], n T, y, r []T) {
	var steps, images [][]T
	before := fd.weighed(r)
	for last := before; len(steps) < slopeRounds && last > slopePrecise*before; {
		step, image := append([]T{}, r...), make([]T, len(r))
		fd.f.solve(step)
		fd.expel(list, step)
		fd.s.multiply(image, step, 1, n)
		for i, w := range images {
			c := fd.weighedInner(w, image)
			add(image, w, -c)
			add(step, steps[i], -c)
		}
		size := math.Sqrt(realPart(fd.weighedInner(image, image)))
		if !(size > 0) || math.IsInf(size, 0) {
			return
		}
		scale(image, fromReal[T](1/size))
		scale(step, fromReal[T](1/size))
		c := fd.weighedInner(image, r)
		add(y, step, c)
		add(r, image, -c)
		steps, images = append(steps, step), append(images, image)
		now := fd.weighed(r)
		if now > 0.9*last {
			return
		}
		last = now
	}
}

// weighedInner is the inner product of the norm weighed.
func (fd *finder[T]) weighedInner(a, b []T) (sum T) {
	if x, ok := any(a).([]float64); ok {
		y, _ := any(b).([]float64)
		real := 0.0
		for i, w := range fd.s.weight {
			real += x[i] * y[i] / w
		}
		return fromReal[T](real)
	}
	for i, v := range a {
		sum += conj(v) * b[i] * fromReal[T](1/fd.s.weight[i])
	}
	return sum
}

// expel takes the cluster's modes out of y.
func (fd *finder[T]) expel(list []pair[T], y []T) {
	for j := range list {
		add(y, list[j].x, -bilinear(list[j].bx, y)/bilinear(list[j].bx, list[j].x))
	}
}

// settle turns the vectors of twins, which their equation leaves open, to those that twins have at neighbouring frequencies:
// such that x_i'F_w x_j = 0.
func (fd *finder[T]) settle(list []pair[T]) {
	for i := 0; i < len(list); {
		n := 1
		for i+n < len(list) && ldl.Abs1(list[i+n].n-list[i].n) < same*ldl.Abs1(list[i].n) {
			n++
		}
		if n > 1 {
			fd.turnTwins(list[i : i+n])
		}
		i += n
	}
}

// same is the relative distance in N within which modes are taken for twins of one N.
const same = 1e-12

// turnTwins diagonalises X'F_w X with X'B X.
func (fd *finder[T]) turnTwins(list []pair[T]) {
	m := len(list)
	a, b := make([][]complex128, m), make([][]complex128, m)
	for i := range m {
		r := fd.pull(&list[i])
		a[i], b[i] = make([]complex128, m), make([]complex128, m)
		for j := range m {
			a[i][j], b[i][j] = toComplex(bilinear(list[j].x, r)), toComplex(bilinear(list[j].x, list[i].bx))
		}
	}
	y, err := coefficients[T](a, b)
	if err != nil {
		return
	}
	turned := make([]pair[T], m)
	for i := range turned {
		turned[i] = list[i]
		turned[i].x, turned[i].bx = make([]T, len(list[i].x)), make([]T, len(list[i].x))
		for j := range list {
			c := fromComplex[T](y[j][i])
			add(turned[i].x, list[j].x, c)
			add(turned[i].bx, list[j].bx, c)
		}
	}
	copy(list, turned)
}
