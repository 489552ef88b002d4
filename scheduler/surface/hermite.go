package surface

// hermite sets w to the weights of the interpolant of Hermite's type at t: the values and the first
// m-1 derivatives at the nodes ts, m at most 4, are matched. w[i*m+j]
// weighs the j-th derivative at node i. With m = 1 it is Lagrange's.
//
// With l_i Lagrange's polynomial, d = t - t_i and c the Taylor coefficients of
// l_i^-m at t_i, the basis function of the j-th derivative at node i is
//
//	l_i(t)^m d^j/j! sum over s < m-j of c_s d^s
//
// (Stoer and Bulirsch, Introduction to Numerical Analysis, section 2.1.5). The
// coefficients follow from log l_i = sum over the other nodes of log(1 + d/(t_i-t_l)).
func hermite(ts []float64, t float64, m int, w []float64) {
	for i, ti := range ts {
		d := t - ti
		l, s1, s2, s3 := 1.0, 0.0, 0.0, 0.0
		for k, tk := range ts {
			if k == i {
				continue
			}
			r := 1 / (ti - tk)
			l *= (t - tk) * r
			s1 += r
			s2 += r * r
			s3 += r * r * r
		}
		if m == 1 {
			w[i] = l
			continue
		}
		f := float64(m)
		a1, a2, a3 := -f*s1*d, f*s2*d*d/2, -f*s3*d*d*d/3
		c := [4]float64{1, a1, a2 + a1*a1/2, a3 + a1*a2 + a1*a1*a1/6}
		power := l
		for range m - 1 {
			power *= l
		}
		for j := range m {
			sum := 0.0
			for s := range m - j {
				sum += c[s]
			}
			w[i*m+j] = power * sum
			power *= d / float64(j+1)
		}
	}
}
