package smooth

import "sort"

// knots are those of a B-spline: rising, the ends repeated degree+1 times.
type knots struct {
	degree int
	t      []float64
}

// placed puts the knots for size coefficients where the abscissae x are:
// each inner knot is the average of degree neighbouring sites, and the sites
// are spread evenly over the rows of x (de Boor, A Practical Guide to
// Splines, chapter XIII). Least squares at x then has one solution for any
// size up to len(x).
func placed(x []float64, size, degree int) knots {
	site := func(i int) float64 { return x[i*(len(x)-1)/(size-1)] }
	k := knots{degree: degree, t: make([]float64, size+degree+1)}
	for i := range degree + 1 {
		k.t[i], k.t[size+i] = x[0], x[len(x)-1]
	}
	for j := 1; j < size-degree; j++ {
		sum := 0.0
		for i := j; i < j+degree; i++ {
			sum += site(i)
		}
		k.t[degree+j] = sum / float64(degree)
	}
	return k
}

// size counts the coefficients.
func (k knots) size() int { return len(k.t) - k.degree - 1 }

// span is the index of the knot interval of x: t[i] <= x < t[i+1], the last
// one closed.
func (k knots) span(x float64) int {
	lo, hi := k.degree, k.size()
	i := lo + sort.SearchFloat64s(k.t[lo+1:hi], x)
	if i+1 < hi && k.t[i+1] == x {
		i++
	}
	return i
}

// row sets dst to the order-th derivatives at x of the degree+1 B-splines
// that live on interval i: values of the lower degree by the recursion of de
// Boor and Cox, then one differentiation a degree.
func (k knots) row(dst []float64, i int, x float64, order int) {
	clear(dst)
	d := k.degree
	dst[d] = 1 // dst[d-q..d] hold the q+1 splines of degree q, first one starting at knot i-q
	for q := 1; q <= d; q++ {
		if q <= d-order {
			k.raise(dst[d-q:d+1], i-q, q, x)
		} else {
			k.differentiate(dst[d-q:d+1], i-q, q)
		}
	}
}

// raise goes from the splines of degree q-1 (b[1:]) to those of degree q,
// the first of which starts at knot first.
func (k knots) raise(b []float64, first, q int, x float64) {
	t := k.t[first:]
	for j := range b {
		v := 0.0
		if j > 0 {
			v = (x - t[j]) / (t[j+q] - t[j]) * b[j]
		}
		if j < q {
			v += (t[j+q+1] - x) / (t[j+q+1] - t[j+1]) * b[j+1]
		}
		b[j] = v
	}
}

// differentiate goes from derivatives of the splines of degree q-1 to those,
// one order higher, of degree q.
func (k knots) differentiate(b []float64, first, q int) {
	t := k.t[first:]
	for j := range b {
		v := 0.0
		if j > 0 {
			v = b[j] / (t[j+q] - t[j])
		}
		if j < q {
			v -= b[j+1] / (t[j+q+1] - t[j+1])
		}
		b[j] = float64(q) * v
	}
}
