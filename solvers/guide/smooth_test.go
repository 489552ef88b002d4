package guide

import (
	"context"
	"math"
	"testing"

	"betaloom/solvers"
)

// What a local fit is: a polynomial of degree eight in the wavelength by least squares over thirteen rows, 0.12 um. It leaves four
// degrees of freedom to what is not smooth. What it cannot follow of GVD is measured by the term of
// degree nine, which stays below half the bound. (Degree six over eleven rows left two thirds of the bound for the strip's TM00, whose
// GVD bends most, once the walls' share in the bound was raised and a finer mesh taken.)
const (
	fitRows   = 13
	fitDegree = 8
)

// TestSmooth: each row is solved on its own mesh, from its neighbour and with its own walls, so an error that the bound does not
// cover shows as a jump of GVD from row to row. The bound asked, 0.01 ps^2/km, is this project's own aim.
func TestSmooth(t *testing.T) {
	const asked = 0.01
	for _, c := range []struct {
		name, text           string
		want                 int
		width, height, angle float64
	}{
		{"strip", strip, 2, 0.5, 0.22, 90},
		{"nitride", nitride, 1, 1.6, 0.8, 88},
	} {
		t.Run(c.name, func(t *testing.T) {
			g := guide(t, at(c.text, "accuracy: {neff: 1e-6, gvd_ps2_per_km: 0.01}"))
			values, bounds := map[string][]float64{}, map[string][]float64{}
			var near []solvers.Mode
			for i := range 21 {
				q := solvers.Q{frequency((1.45 + 0.01*float64(i)) * um), c.width * um, c.height * um, c.angle * math.Pi / 180}
				modes, _, err := g.Modes(context.Background(), q, c.want, near)
				if err != nil {
					t.Fatal(err)
				}
				near = modes
				for _, m := range modes {
					values[m.Family] = append(values[m.Family], 1e27*m.GVD)
					bounds[m.Family] = append(bounds[m.Family], 1e27*m.GVDErr)
				}
			}
			if len(values) != c.want {
				t.Fatalf("%d families, expected %d", len(values), c.want)
			}
			for family, v := range values {
				if len(v) != 21 {
					t.Fatalf("%s in %d rows of 21", family, len(v))
				}
				smooth(t, family, v, bounds[family], asked)
			}
		})
	}
}

// smooth holds every row to the fit around it.
func smooth(t *testing.T, family string, v, bound []float64, asked float64) {
	worst, missed := 0.0, 0.0
	for i := range v {
		if !(bound[i] > 0 && bound[i] <= asked) {
			t.Errorf("%s row %d: bound %.2g ps^2/km, asked %g", family, i, bound[i], asked)
		}
		lo := min(max(i-fitRows/2, 0), len(v)-fitRows)
		fit, next := leastSquares(v[lo : lo+fitRows])
		left := math.Abs(next[i-lo])
		if missed = max(missed, left/bound[i]); left > bound[i]/2 {
			t.Errorf("%s row %d: the fit leaves %.2g ps^2/km of a smooth function, bound %.2g", family, i, left, bound[i])
		}
		off := math.Abs(v[i] - fit[i-lo])
		if worst = max(worst, off/bound[i]); off > bound[i] {
			t.Errorf("%s row %d: %.2g ps^2/km off the fit, bound %.2g", family, i, off, bound[i])
		}
	}
	t.Logf("%s: at most %.2g of the bound off the fit, which leaves %.2g of it", family, worst, missed)
}

// leastSquares fits equidistant values by polynomials that are orthogonal on their places; next is the term of the next degree.
func leastSquares(v []float64) (fit, next []float64) {
	fit = make([]float64, len(v))
	var basis [][]float64
	for d := range fitDegree + 2 {
		b := make([]float64, len(v))
		for i := range b {
			b[i] = math.Pow(2*float64(i)/float64(len(v)-1)-1, float64(d))
		}
		for range 2 { // twice, for rounding
			for _, o := range basis {
				c := dot(b, o)
				for i := range b {
					b[i] -= c * o[i]
				}
			}
		}
		n := norm(b)
		next = make([]float64, len(v))
		for i := range b {
			b[i] /= n
		}
		c := dot(v, b)
		for i := range b {
			next[i] = c * b[i]
			if d <= fitDegree {
				fit[i] += next[i]
			}
		}
		basis = append(basis, b)
	}
	return fit, next
}
