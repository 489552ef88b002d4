package smooth

import (
	"errors"
	"math"
)

const (
	fullDegree = 7
	penalised  = 4    // order of the derivative in the penalty
	most       = 1024 // coefficients
	manyRows   = 50   // from here on a degree of freedom costs 1.4
)

// Fit is a fitted function. It does not change.
type Fit struct {
	lo, scale float64 // x of the samples to 0..1
	k         knots
	pieces    []float64 // degree+1 Taylor coefficients an interval, about its middle
	rms, max  float64
}

// RMS and Max tell how far the fit passes from the samples.
func (f *Fit) RMS() float64 { return f.rms }

// Max is the largest distance from a sample.
func (f *Fit) Max() float64 { return f.max }

// New fits y over x. There are two samples or more, x rises, and all are
// finite.
func New(x, y []float64) (*Fit, error) {
	if err := check(x, y); err != nil {
		return nil, err
	}
	f := &Fit{lo: x[0], scale: 1 / (x[len(x)-1] - x[0])}
	u := make([]float64, len(x))
	v := make([]float64, len(x))
	mean := 0.0
	for _, y := range y {
		mean += y / float64(len(x))
	}
	for i := range x {
		u[i], v[i] = (x[i]-f.lo)*f.scale, y[i]-mean
	}
	u[len(u)-1] = 1
	degree := min(fullDegree, len(x)-1)
	var best trial
	if len(x) <= penalised {
		best = exact(u, v, degree)
	} else {
		best = choose(u, v, degree, rounding(y))
	}
	f.k = best.k
	f.toPieces(best.c, mean)
	f.measure(x, y)
	return f, nil
}

func check(x, y []float64) error {
	if len(x) < 2 || len(x) != len(y) {
		return errors.New("fewer than two samples, or not as many values as abscissae")
	}
	for i := range x {
		if math.IsNaN(y[i]) || math.IsInf(y[i], 0) || math.IsInf(x[i], 0) {
			return errors.New("a sample is not finite")
		}
		if i > 0 && !(x[i] > x[i-1]) {
			return errors.New("the abscissae do not rise")
		}
	}
	return nil
}

// exact is the polynomial through all samples.
func exact(x, y []float64, degree int) trial {
	k := placed(x, len(x), degree)
	c := make([]float64, len(x))
	data(k, x, y).solve(c)
	return trial{k: k, c: c}
}

// toPieces turns the spline into one polynomial an interval, in the variable
// that runs from -1 to 1 over it.
func (f *Fit) toPieces(c []float64, mean float64) {
	d := f.k.degree
	row := make([]float64, d+1)
	for i := d; i < f.k.size(); i++ {
		a, b := f.k.t[i], f.k.t[i+1]
		scale := 1.0
		for order := 0; order <= d; order++ {
			f.k.row(row, i, (a+b)/2, order)
			f.pieces = append(f.pieces, scale*dot(row, c[i-d:]))
			scale *= (b - a) / 2 / float64(order+1)
		}
		f.pieces[len(f.pieces)-1-d] += mean
	}
}

func dot(a, b []float64) (s float64) {
	for i := range a {
		s += a[i] * b[i]
	}
	return s
}

// At gives the fit and its first three derivatives at x. Beyond the samples
// it goes on with its last piece.
func (f *Fit) At(x float64) [4]float64 {
	u := (x - f.lo) * f.scale
	i, d := f.k.span(u), f.k.degree
	half := (f.k.t[i+1] - f.k.t[i]) / 2
	s := (u - f.k.t[i] - half) / half
	p := f.pieces[(i-d)*(d+1) : (i-d+1)*(d+1)]
	var v, v1, v2, v3 float64 // the value, f', f''/2 and f'''/6 by Horner's rule
	for j := d; j >= 0; j-- {
		v3 = v3*s + v2
		v2 = v2*s + v1
		v1 = v1*s + v
		v = v*s + p[j]
	}
	g := f.scale / half
	return [4]float64{v, v1 * g, 2 * v2 * g * g, 6 * v3 * g * g * g}
}

// measure keeps the residual.
func (f *Fit) measure(x, y []float64) {
	sum := 0.0
	for i := range x {
		d := math.Abs(f.At(x[i])[0] - y[i])
		sum += d * d
		f.max = max(f.max, d)
	}
	f.rms = math.Sqrt(sum / float64(len(x)))
}
