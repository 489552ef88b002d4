package smooth

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/mat"
)

// spline is the i-th B-spline of a degree, or its derivative, straight from
// the definition (de Boor, A Practical Guide to Splines, chapters IX and X).
func spline(t []float64, i, degree, order int, x float64) float64 {
	ratio := func(a, b float64) float64 {
		if b == 0 {
			return 0
		}
		return a / b
	}
	if order > 0 {
		return float64(degree) * (ratio(spline(t, i, degree-1, order-1, x), t[i+degree]-t[i]) -
			ratio(spline(t, i+1, degree-1, order-1, x), t[i+degree+1]-t[i+1]))
	}
	if degree == 0 {
		if t[i] <= x && x < t[i+1] {
			return 1
		}
		return 0
	}
	return ratio(x-t[i], t[i+degree]-t[i])*spline(t, i, degree-1, 0, x) +
		ratio(t[i+degree+1]-x, t[i+degree+1]-t[i+1])*spline(t, i+1, degree-1, 0, x)
}

// scattered are rising abscissae from 0 to 1 and values with noise.
func scattered(rows int) (x, y []float64) {
	source := rand.New(rand.NewPCG(7, 8))
	sum := 0.0
	for range rows {
		x = append(x, sum)
		sum += 0.1 + source.Float64()
	}
	for i := range x {
		x[i] /= x[rows-1]
	}
	for _, v := range x {
		y = append(y, math.Sin(5*v)+0.01*source.NormFloat64())
	}
	return x, y
}

func TestRowsAreBSplines(t *testing.T) {
	x, _ := scattered(40)
	k := placed(x, 20, 7)
	row := make([]float64, 8)
	for _, at := range []float64{0, 0.1234, 0.5, 0.77, 0.999} {
		i := k.span(at)
		if !(k.t[i] <= at && at < k.t[i+1]) {
			t.Fatalf("span of %v is %v to %v", at, k.t[i], k.t[i+1])
		}
		for order := range 5 {
			k.row(row, i, at, order)
			for j, got := range row {
				want := spline(k.t, i-7+j, 7, order, at)
				if math.Abs(got-want) > 1e-12*math.Pow(20, float64(order)) { // rounding over the knot intervals
					t.Errorf("order %d of spline %d at %v: %v, want %v", order, i-7+j, at, got, want)
				}
			}
		}
	}
}

// dense solves the same penalised problem by gonum's dense algebra from the
// definition of the B-splines: coefficients, misfit and the trace of the
// smoother.
func dense(t *testing.T, k knots, x, y []float64, weight float64) (c *mat.VecDense, misfit, trace float64) {
	n, d := k.size(), k.degree
	b, data := mat.NewDense(len(x), n, nil), mat.NewVecDense(len(y), y)
	for r, v := range x {
		for i := range n {
			b.Set(r, i, spline(k.t, i, d, 0, min(v, 1-1e-15))) // the definition leaves out the right end
		}
	}
	var gram, penalty, both, inverse, rhs mat.Dense
	gram.Mul(b.T(), b)
	penalty.CloneFrom(mat.NewDense(n, n, nil))
	for i := range n {
		for j := range n {
			sum := 0.0
			for s := d; s < n; s++ {
				sum += quad.Fixed(func(u float64) float64 {
					return spline(k.t, i, d, penalised, u) * spline(k.t, j, d, penalised, u)
				}, k.t[s], k.t[s+1], 6, nil, 0)
			}
			penalty.Set(i, j, sum*weight*weight)
		}
	}
	both.Add(&gram, &penalty)
	if err := inverse.Inverse(&both); err != nil {
		t.Fatal(err)
	}
	rhs.Mul(b.T(), data)
	var coef, smoother, fit mat.Dense
	coef.Mul(&inverse, &rhs)
	smoother.Mul(&inverse, &gram)
	fit.Mul(b, &coef)
	fit.Sub(&fit, data)
	return mat.NewVecDense(n, coef.RawMatrix().Data), math.Pow(mat.Norm(&fit, 2), 2), mat.Trace(&smoother)
}

func TestPenalisedProblemAgainstDenseAlgebra(t *testing.T) {
	x, y := scattered(60)
	k := placed(x, 16, 7)
	d, p := data(k, x, y), roughness(k)
	for _, weight := range []float64{1e-4, 1e-3, 1e-2} {
		s := newTriangle(k.size(), d.width)
		merge(s, d, p, weight)
		c := make([]float64, k.size())
		if !s.solve(c) {
			t.Fatal("not determined")
		}
		want, misfit, trace := dense(t, k, x, y, weight)
		// the dense normal equations lose the square of the condition number, about 1e7
		for i := range c {
			if math.Abs(c[i]-want.AtVec(i)) > 1e-7 {
				t.Errorf("weight %g: coefficient %d %v, want %v", weight, i, c[i], want.AtVec(i))
			}
		}
		if got := d.misfit(c); math.Abs(got-misfit) > 1e-8*misfit {
			t.Errorf("weight %g: misfit %v, want %v", weight, got, misfit)
		}
		if got := s.trace(d.gram(), make([]float64, len(d.r))); math.Abs(got-trace) > 1e-7*trace {
			t.Errorf("weight %g: trace %v, want %v", weight, got, trace)
		}
	}
}

// Cubics cost no penalty and lie in every spline space: they come back
// exactly, with their derivatives.
func TestCubicIsReproduced(t *testing.T) {
	for _, rows := range []int{4, 5, 6, 9, 40, 3000} {
		x, y := scattered(rows)
		for i, v := range x {
			x[i] = -3 + 5*v
			y[i] = 2 - x[i] + 0.25*x[i]*x[i]*x[i]
		}
		f, err := New(x, y)
		if err != nil {
			t.Fatal(err)
		}
		for _, v := range []float64{-3, -1.1, 0, 1.9, 2} {
			want := [4]float64{2 - v + 0.25*v*v*v, -1 + 0.75*v*v, 1.5 * v, 1.5}
			for order, got := range f.At(v) {
				// rounding of the rows, over a quarter of the range to the order
				if math.Abs(got-want[order]) > 1e-13*math.Pow(40, float64(order)) {
					t.Errorf("%d rows: order %d at %v: %v, want %v", rows, order, v, got, want[order])
				}
			}
		}
	}
}

func TestFewRowsArePassedThrough(t *testing.T) {
	x, y := []float64{1, 2, 4, 7}, []float64{3, -1, 2, 0.5}
	for rows := 2; rows <= 4; rows++ {
		f, err := New(x[:rows], y[:rows])
		if err != nil {
			t.Fatal(err)
		}
		for i := range rows {
			if got := f.At(x[i])[0]; math.Abs(got-y[i]) > 1e-13 {
				t.Errorf("%d rows: %v at %v, want %v", rows, got, x[i], y[i])
			}
		}
		if f.Max() > 1e-13 || f.RMS() > f.Max() {
			t.Errorf("%d rows: residual %v, %v", rows, f.RMS(), f.Max())
		}
	}
}

func TestResidual(t *testing.T) {
	x, y := scattered(200)
	f, err := New(x, y)
	if err != nil {
		t.Fatal(err)
	}
	sum, largest := 0.0, 0.0
	for i := range x {
		d := math.Abs(f.At(x[i])[0] - y[i])
		sum, largest = sum+d*d, max(largest, d)
	}
	if math.Abs(f.RMS()-math.Sqrt(sum/200)) > 1e-15 || f.Max() != largest {
		t.Errorf("residual %v, %v, want %v, %v", f.RMS(), f.Max(), math.Sqrt(sum/200), largest)
	}
	if f.RMS() < 0.009 || f.RMS() > 0.011 { // the noise is 0.01; 200 rows tell it to 5 %, two standard deviations
		t.Errorf("residual %v, want the noise of 0.01", f.RMS())
	}
}

func TestConstantRows(t *testing.T) {
	f, err := New([]float64{0, 1, 2, 3, 4, 5, 6}, []float64{2, 2, 2, 2, 2, 2, 2})
	if err != nil {
		t.Fatal(err)
	}
	for order, got := range f.At(2.5) {
		if want := [4]float64{2}[order]; math.Abs(got-want) > 1e-15 { // rounding of the mean
			t.Errorf("order %d: %v, want %v", order, got, want)
		}
	}
}

func TestRounding(t *testing.T) {
	cases := []struct {
		name string
		y    []float64
		want float64 // the unit of the last place
	}{
		{"four decimals", []float64{1.4567, 1.4621, 1.47}, 1e-4},
		{"six decimals", []float64{1.456701, 1.46, 0.000003}, 1e-6},
		{"three decimals at least", []float64{1.45, 1.46, 1.47}, 1e-3},
		{"floating-point numbers", []float64{math.Pi, math.E, math.Sqrt2}, 4 * math.Pi * 0x1p-52},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			want := c.want / math.Sqrt(12)
			if got := rounding(c.y); math.Abs(got-want) > 1e-9*want {
				t.Errorf("%v, want %v", got, want)
			}
		})
	}
}

func TestNewRefuses(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	cases := []struct {
		name string
		x, y []float64
	}{
		{"nothing", nil, nil},
		{"one sample", []float64{1}, []float64{1}},
		{"more values than abscissae", []float64{1, 2}, []float64{1, 2, 3}},
		{"equal abscissae", []float64{1, 1}, []float64{1, 2}},
		{"falling abscissae", []float64{2, 1}, []float64{1, 2}},
		{"an abscissa that is no number", []float64{1, nan}, []float64{1, 2}},
		{"an infinite abscissa", []float64{1, inf}, []float64{1, 2}},
		{"a value that is no number", []float64{1, 2}, []float64{nan, 2}},
		{"an infinite value", []float64{1, 2}, []float64{1, inf}},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			if _, err := New(c.x, c.y); err == nil {
				t.Error("no error")
			}
		})
	}
}
