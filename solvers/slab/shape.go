package slab

import "math"

// face is the field in a film as it was entered, at the point: psi and psi'
// on that face and psi on the other.
type face[T scalar] struct{ psi, rise, end T }

// moments gives the integrals of |psi|^2 and |psi|^4 over film i.
func (q *line[T]) moments(i int) (two, four float64) {
	f, c := &q.films[i], &q.faces[i]
	switch p := any(c).(type) {
	case *face[float64]:
		z := re(q.z[i].a)
		if z > 1 {
			t := q.trig(i, q.z[i].a)
			return standing(math.Sqrt(z), re(t.f[0]), re(t.f[1]), f.d, p)
		}
		return momentsReal(z, f.d, p)
	case *face[complex128]:
		return momentsComplex(widen(q.z[i].a), f.d, p)
	}
	return 0, 0
}

func momentsReal(z, d float64, f *face[float64]) (two, four float64) {
	if z < -1 {
		return decaying(math.Sqrt(-z)/d, d, f)
	}
	return gauss(d, 1, func(y float64) float64 {
		v := f.at(y, z, d)
		return v * v
	})
}

// standing integrates powers of psi = a cos qy + b sin qy through
// psi^2 = m + r cos 2qy + s sin 2qy, with x = qd, its cosine and sin x / x.
func standing(x, cos, sinc, d float64, f *face[float64]) (two, four float64) {
	q := x / d
	a, b := f.psi, f.rise/q
	m, r, s := (a*a+b*b)/2, (a*a-b*b)/2, a*b
	sin := sinc * x
	s2, c2 := 2*sin*cos, 1-2*sin*sin
	s4, c4 := 2*s2*c2, 1-2*s2*s2
	two = m*x + r*s2/2 + s*(1-c2)/2
	four = m*m*x + r*r*(x/2+s4/8) + s*s*(x/2-s4/8) + m*r*s2 + m*s*(1-c2) + r*s*(1-c4)/4
	return two / q, four / q
}

// decaying integrates powers of psi = a exp(-ky) + b exp(-k(d-y)).
func decaying(k, d float64, f *face[float64]) (two, four float64) {
	e := math.Exp(-k * d)
	ee := e * e
	a, b := (f.psi-f.end*e)/(1-ee), (f.end-f.psi*e)/(1-ee)
	aa, bb, ab := a*a, b*b, a*b
	two = (aa+bb)*(1-ee)/(2*k) + 2*ab*e*d
	four = (aa*aa+bb*bb)*(1-ee*ee)/(4*k) + 2*ab*(aa+bb)*e*(1-ee)/k + 6*ab*ab*ee*d
	return two, four
}

// momentsComplex integrates by quadrature, panel by panel: with loss |psi|^2
// has no short form that is safe everywhere.
func momentsComplex(z complex128, d float64, f *face[complex128]) (two, four float64) {
	x := csqrt(z)
	panels := 1 + int(abs(x))
	if panels > 4096 {
		panels = 4096
	}
	return gauss(d, panels, func(y float64) float64 {
		v := f.at(y, z, d)
		return real(v)*real(v) + imag(v)*imag(v)
	})
}

// gaussNodes and gaussWeights are the eight-point Gauss-Legendre rule on
// [-1, 1] (Abramowitz and Stegun, table 25.4), the positive half.
var gaussNodes = [4]float64{0.1834346424956498, 0.5255324099163290, 0.7966664774136267, 0.9602898564975363}
var gaussWeights = [4]float64{0.3626837833783620, 0.3137066458778873, 0.2223810344533745, 0.1012285362903763}

// gauss integrates f and f^2 over [0, d].
func gauss(d float64, panels int, f func(float64) float64) (one, two float64) {
	half := d / float64(2*panels)
	for p := range panels {
		mid := float64(2*p+1) * half
		for i, x := range gaussNodes {
			a, b := f(mid-half*x), f(mid+half*x)
			one += gaussWeights[i] * half * (a + b)
			two += gaussWeights[i] * half * (a*a + b*b)
		}
	}
	return one, two
}

// at is psi at the distance y from the face that was entered.
func (f *face[T]) at(y float64, z T, d float64) T {
	if d == 0 {
		return f.psi
	}
	r := y / d
	if !evanescent(z) {
		fn, factor := entire(z * num[T](r*r))
		return (f.psi*fn[0] + f.rise*num[T](y)*fn[1]) * num[T](1/factor)
	}
	x := sqrt(-z)
	e := exp(-x)
	a, b := (f.psi-f.end*e)/(1-e*e), (f.end-f.psi*e)/(1-e*e)
	return a*exp(-x*num[T](r)) + b*exp(-x*num[T](1-r))
}
