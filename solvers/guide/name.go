package guide

import (
	"fmt"
	"math"

	"betaloom/solvers"
	"betaloom/solvers/section"
)

// name gives every mode its type, its name and its signature. The name counts the lobes of the
// dominant field: TE10 has two across and one up.
func (p *point) name(answer []solved, out []solvers.Mode) {
	seen := map[string]int{}
	for i := range answer {
		m := &out[i]
		te := m.ExShare >= 0.5
		kind := "TM"
		if te {
			kind = "TE"
		}
		across, up := p.lobes(&answer[i], te)
		m.Type, m.Family = "quasi-"+kind, fmt.Sprintf("%s%d%d", kind, across, up)
		if seen[m.Family]++; seen[m.Family] > 1 {
			m.Family = fmt.Sprintf("%s-%d", m.Family, seen[m.Family])
		}
		m.Signature = p.signature(&answer[i])
	}
}

// window is the part of the section where a mode is looked at: the box of all wall ends and a little around it.
func (p *point) window() (x, y [2]float64) {
	l, r, b, t, ok := p.outline.Corners()
	if !ok {
		return [2]float64{-p.size, p.size}, [2]float64{-p.size, p.size}
	}
	margin := 0.25 * max(r-l, t-b)
	return [2]float64{l - margin, r + margin}, [2]float64{b - margin, t + margin}
}

// signature samples Ex and Ey at four places across and two up the window, with unit norm and the largest
// one positive.
func (p *point) signature(m *solved) (s [16]float32) {
	x, y := p.window()
	xs, ys := make([]float64, 8), make([]float64, 8)
	var sign [8][2]float64
	for i := range xs {
		xs[i] = x[0] + (x[1]-x[0])*[]float64{0.3, 0.42, 0.58, 0.7}[i%4]
		ys[i] = y[0] + (y[1]-y[0])*[]float64{0.4, 0.6}[i/4]
		sign[i] = m.class.reflect(&xs[i], &ys[i], (x[0]+x[1])/2, (y[0]+y[1])/2)
	}
	var v [16]float64
	top := 0.0
	for i, f := range m.pencil.Samples(&m.pair, xs, ys) {
		v[i], v[8+i] = sign[i][0]*real(f.E[0]), sign[i][1]*real(f.E[1])
	}
	for _, f := range v {
		if math.Abs(f) > 1.000001*math.Abs(top) {
			top = f
		}
	}
	scale := math.Copysign(norm(v[:]), top)
	for i := range s {
		if scale != 0 {
			s[i] = float32(v[i] / scale)
		}
	}
	return s
}

// reflect moves a place into the part of the section that a class is solved on, and gives the signs of Ex and Ey at the place
// from which it came. The two have opposite parities across either plane.
func (c *class) reflect(x, y *float64, midX, midY float64) [2]float64 {
	sign := [2]float64{1, 1}
	turn := func(exEven bool) {
		if exEven {
			sign[1] = -sign[1]
		} else {
			sign[0] = -sign[0]
		}
	}
	if c.halfX && *x < midX {
		*x = 2*midX - *x
		turn(c.wallX == section.Electric)
	}
	if c.halfY && *y < midY {
		*y = 2*midY - *y
		turn(c.wallY == section.Magnetic)
	}
	return sign
}

func dot(a, b []float64) (sum float64) {
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}

func norm(a []float64) float64 { return math.Sqrt(dot(a, a)) }
