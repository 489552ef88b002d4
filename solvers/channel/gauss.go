package channel

import "math"

// gauss gives the nodes, rising, and weights of Gauss and Legendre's rule on [-1, 1], by Newton's method from
// Tricomi's estimate (Davis and Rabinowitz, Methods of Numerical Integration, 2.7). Own code because the
// library's table is wrong for 26 points (gonum v0.17.0); TestGauss holds every size used.
func gauss(n int) (x, w []float64) {
	x, w = make([]float64, n), make([]float64, n)
	for i := range n {
		at := -math.Cos(math.Pi * (float64(i) + 0.75) / (float64(n) + 0.5))
		var slope float64
		for range 20 {
			var p float64
			p, slope = legendreAt(n, at)
			step := p / slope
			at -= step
			if math.Abs(step) < 1e-16 {
				break
			}
		}
		_, slope = legendreAt(n, at)
		x[i], w[i] = at, 2/((1-at*at)*slope*slope)
	}
	return x, w
}

// legendreAt is P_n and its derivative inside (-1, 1).
func legendreAt(n int, x float64) (p, slope float64) {
	before, now := 1.0, x
	for a := 2; a <= n; a++ {
		before, now = now, ((2*float64(a)-1)*x*now-(float64(a)-1)*before)/float64(a)
	}
	return now, float64(n) * (x*now - before) / (x*x - 1)
}
