package smooth

import "math"

// data reduces the samples to a triangle.
func data(k knots, x, y []float64) *triangle {
	t := newTriangle(k.size(), k.degree+1)
	row := make([]float64, k.degree+1)
	for i := range x {
		at := k.span(x[i])
		k.row(row, at, x[i], 0)
		t.insert(at-k.degree, row, y[i])
	}
	return t
}

// roughness reduces the penalty: its triangle times the coefficients has
// the squared length of the integral of the penalised derivative squared.
// Gauss's rule of four points is exact for it.
func roughness(k knots) *triangle {
	nodes := [4]float64{-0.8611363115940526, -0.3399810435848563, 0.3399810435848563, 0.8611363115940526}
	weights := [4]float64{0.3478548451374538, 0.6521451548625461, 0.6521451548625461, 0.3478548451374538}
	t := newTriangle(k.size(), k.degree+1)
	row := make([]float64, k.degree+1)
	for i := k.degree; i < k.size(); i++ {
		half := (k.t[i+1] - k.t[i]) / 2
		if half == 0 {
			continue // two sites apart by less than rounding
		}
		for g, node := range nodes {
			k.row(row, i, k.t[i]+half*(1+node), penalised)
			scale := math.Sqrt(half * weights[g])
			for j := range row {
				row[j] *= scale
			}
			t.insert(i-k.degree, row, 0)
		}
	}
	return t
}

// merge sets s to the factor of both problems, the second weighted.
func merge(s, d, p *triangle, weight float64) {
	row := make([]float64, s.width)
	s.reset()
	for j := range s.size() {
		copy(row, d.row(j))
		s.insert(j, row, d.z[j])
		for m, r := range p.row(j) {
			row[m] = weight * r
		}
		s.insert(j, row, 0)
	}
}
