package smooth

import "math"

// triangle is the factor R of a least-squares problem whose rows have width
// neighbouring entries, with the right-hand side it belongs to: rows come in
// the order of their first column and are rotated in one by one (Givens
// rotations; Dierckx, Curve and Surface Fitting with Splines, chapter 4).
type triangle struct {
	width int
	r     []float64 // row j holds columns j .. j+width-1
	z     []float64
	rss   float64 // what no coefficients can fit
}

func newTriangle(size, width int) *triangle {
	return &triangle{width: width, r: make([]float64, size*width), z: make([]float64, size)}
}

func (t *triangle) size() int { return len(t.z) }

func (t *triangle) row(j int) []float64 { return t.r[j*t.width : (j+1)*t.width] }

// reset empties the triangle.
func (t *triangle) reset() {
	clear(t.r)
	clear(t.z)
	t.rss = 0
}

// insert rotates in a row whose first column is col; it overwrites the row.
func (t *triangle) insert(col int, row []float64, y float64) {
	for i := 0; i < len(row) && col+i < t.size(); i++ {
		if row[i] == 0 {
			continue
		}
		r := t.row(col + i)
		h := math.Hypot(r[0], row[i])
		c, s := r[0]/h, row[i]/h
		for m := i; m < len(row); m++ {
			a, b := r[m-i], row[m]
			r[m-i], row[m] = c*a+s*b, c*b-s*a
		}
		z := t.z[col+i]
		t.z[col+i], y = c*z+s*y, c*y-s*z
	}
	t.rss += y * y
}

// solve gives the coefficients; false where they are not determined.
func (t *triangle) solve(c []float64) bool {
	for j := t.size() - 1; j >= 0; j-- {
		r, sum := t.row(j), t.z[j]
		for m := 1; m < t.width && j+m < t.size(); m++ {
			sum -= r[m] * c[j+m]
		}
		if r[0] == 0 {
			return false
		}
		c[j] = sum / r[0]
	}
	return true
}

// misfit is the squared distance |z - R c|^2 + rss.
func (t *triangle) misfit(c []float64) float64 {
	sum := t.rss
	for j := range t.z {
		d := t.z[j]
		for m, r := range t.row(j) {
			if j+m < len(c) {
				d -= r * c[j+m]
			}
		}
		sum += d * d
	}
	return sum
}

// gram is the band of R'R: entry (j, j+m) at j*width+m.
func (t *triangle) gram() []float64 {
	g := make([]float64, len(t.r))
	for l := range t.z {
		r := t.row(l)
		for a := 0; a < t.width && l+a < t.size(); a++ {
			for b := a; b < t.width; b++ {
				g[(l+a)*t.width+b-a] += r[a] * r[b]
			}
		}
	}
	return g
}

// trace is that of (S'S)^-1 G for the factor S in t and a banded symmetric G.
// Only the band of the inverse is needed, and it follows from the last row
// upward (Hutchinson and de Hoog, Numer. Math. 47, 99 (1985)). inverse is
// work space as long as r.
func (t *triangle) trace(g, inverse []float64) float64 {
	n, w, sum := t.size(), t.width, 0.0
	at := func(i, j int) float64 {
		if i > j {
			i, j = j, i
		}
		return inverse[i*w+j-i]
	}
	for i := n - 1; i >= 0; i-- {
		r := t.row(i)
		last := min(w-1, n-1-i)
		for m := last; m >= 0; m-- {
			v := 0.0
			for l := 1; l <= last; l++ {
				v -= r[l] * at(i+l, i+m)
			}
			if m == 0 {
				v += 1 / r[0]
			}
			inverse[i*w+m] = v / r[0]
		}
		sum += g[i*w] * inverse[i*w]
		for m := 1; m <= last; m++ {
			sum += 2 * g[i*w+m] * inverse[i*w+m]
		}
	}
	return sum
}
