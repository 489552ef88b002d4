package slab

import "math"

// The field of a layer is made of the entire functions
//
//	f[0] = cos x,  f[1] = sin x / x,  f[n+1] = j_n(x) / x^n,   x^2 = z,
//
// with j_n the spherical Bessel functions (DLMF 10.49, 10.51): real for real
// z of either sign, smooth through z = 0, and each the derivative of the one
// before, df[n]/dz = -f[n+1]/2. All are scaled by exp(-|Im x|).

// smallArgument is the |z| up to which the two highest functions are summed
// as power series and the others follow by downward recurrence; beyond, the
// first two are elementary and upward recurrence is stable.
const smallArgument = 4.0

// powers holds the coefficients of f[3] and f[4] as power series in z:
// j_n(x)/x^n = sum (-z/2)^k / (k! (2n+1+2k)!!).
var powers = bothPowers()

func bothPowers() (p [2][12]float64) {
	for i := range p {
		n := float64(2 + i)
		c := 1 / 15.0
		if i == 1 {
			c = 1 / 105.0
		}
		for k := range p[i] {
			p[i][k] = c
			c *= -0.5 / (float64(k+1) * (2*n + 3 + 2*float64(k)))
		}
	}
	return p
}

// entire evaluates the functions and the factor they are scaled by.
func entire[T scalar](z T) (f [5]T, factor float64) {
	switch v := any(z).(type) {
	case float64:
		g, s := entireReal(v)
		return *any(&g).(*[5]T), s
	case complex128:
		g, s := entireComplex(v)
		return *any(&g).(*[5]T), s
	}
	return f, 1
}

// trig is the functions at a film's z, kept because several passes need them there.
type trig[T scalar] struct {
	z, factor T
	f         [5]T
}

// trig gives the functions of film i at z.
func (q *line[T]) trig(i int, z T) *trig[T] {
	t := &q.trigs[i]
	if t.z != z || t.factor == 0 {
		f, factor := entire(z)
		*t = trig[T]{z: z, factor: num[T](factor), f: f}
	}
	return t
}

func entireReal(z float64) (f [5]float64, factor float64) {
	if math.Abs(z) < smallArgument {
		return smallReal(z), 1
	}
	factor = 1
	if z > 0 {
		x := math.Sqrt(z)
		s, c := math.Sincos(x)
		f[0], f[1] = c, s/x
	} else {
		x := math.Sqrt(-z)
		e := math.Exp(-x)
		f[0], f[1] = 0.5+0.5*e*e, (0.5-0.5*e*e)/x
		factor = e
	}
	i := 1 / z
	f[2] = (f[1] - f[0]) * i
	f[3] = (3*f[2] - f[1]) * i
	f[4] = (5*f[3] - f[2]) * i
	return f, factor
}

func smallReal(z float64) (f [5]float64) {
	p, q := &powers[0], &powers[1]
	a, b := p[11], q[11]
	for k := 10; k >= 0; k-- {
		a = a*z + p[k]
		b = b*z + q[k]
	}
	f[3], f[4] = a, b
	f[2] = 5*a - z*b
	f[1] = 3*f[2] - z*a
	f[0] = f[1] - z*f[2]
	return f
}

func entireComplex(z complex128) (f [5]complex128, factor float64) {
	if math.Abs(real(z))+math.Abs(imag(z)) < smallArgument {
		return smallComplex(z), 1
	}
	x := csqrt(z)
	c, s, factor := scaledSincos(x)
	i := 1 / z
	f[0], f[1] = c, s*(x*i)
	f[2] = (f[1] - f[0]) * i
	f[3] = (3*f[2] - f[1]) * i
	f[4] = (5*f[3] - f[2]) * i
	return f, factor
}

func smallComplex(z complex128) (f [5]complex128) {
	p, q := &powers[0], &powers[1]
	a, b := complex(p[11], 0), complex(q[11], 0)
	for k := 10; k >= 0; k-- {
		a = a*z + complex(p[k], 0)
		b = b*z + complex(q[k], 0)
	}
	f[3], f[4] = a, b
	f[2] = 5*a - z*b
	f[1] = 3*f[2] - z*a
	f[0] = f[1] - z*f[2]
	return f
}

// scaledSincos gives cos x and sin x times exp(-|Im x|), and that factor.
func scaledSincos(x complex128) (c, s complex128, factor float64) {
	y := math.Abs(imag(x))
	factor = math.Exp(-y)
	cosh, sinh := 0.5+0.5*factor*factor, 0.5-0.5*factor*factor
	if y < 1 { // the difference would lose digits
		sinh = -math.Expm1(-2*y) / 2
	}
	sinh = math.Copysign(sinh, imag(x))
	si, co := math.Sincos(real(x))
	return complex(co*cosh, -si*sinh), complex(si*cosh, co*sinh), factor
}
