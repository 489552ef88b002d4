package surface

import (
	"math"
	"testing"

	"betaloom/schema"
)

// exactZero finds a zero of the slab's GVD between a and b by halving.
func exactZero(a, b float64, q func(x float64) slabPoint) float64 {
	sign := slabTE(0, q(a)).gvd < 0
	for range 100 {
		m := (a + b) / 2
		if (slabTE(0, q(m)).gvd < 0) == sign {
			a = m
		} else {
			b = m
		}
	}
	return a
}

func wavelengthPoint(l, d float64) slabPoint {
	return slabPoint{w: 2 * math.Pi * schema.LightSpeed / l, d: d}
}

func TestZeroPoints(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(21), thickness(31)}
	s := writeSlab(t, axes, 1)
	d := 0.7123e-6
	list, err := s.ZeroPoints("TE0", 0, []float64{0, d})
	if err != nil || len(list) != 1 {
		t.Fatalf("found %v, %v, expected one crossing", list, err)
	}
	exact := exactZero(1.3e-6, 1.7e-6, func(l float64) slabPoint { return wavelengthPoint(l, d) })
	if e := math.Abs(list[0].Value - exact); e > list[0].Bound || e > 1e-13 {
		t.Errorf("found %.12g with bound %.2g, expected %.12g", list[0].Value, list[0].Bound, exact)
	}
	const h = 1e-10
	slope := (slabTE(0, wavelengthPoint(exact+h, d)).gvd - slabTE(0, wavelengthPoint(exact-h, d)).gvd) / (2 * h)
	if math.Abs(list[0].Slope/slope-1) > 1e-4 { // a secant over 2e-3 of a cell
		t.Errorf("found a slope of %g, expected %g", list[0].Slope, slope)
	}
}

// Two crossings between neighbouring nodes show through beta3. The coarse axis
// is placed around the slab's extremum of GVD at thickness d; the index step moves it across zero.
func TestTwoCrossingsInACell(t *testing.T) {
	p := slabSweep(nil)
	axes := []schema.AxisBlock{span("wavelength", 1.30e-6, 1.50e-6, 3)}
	p.Parameters[0].Kind = schema.Axis
	// n with GVD = 100((w-w0)/w0)^2 - 0.01 in SI by construction: beta = b0 + (w-w0)/v + series
	w0 := 2 * math.Pi * schema.LightSpeed / 1.35e-6
	s := writeRows(t, p, axes, func(values []float64) []slabValues {
		return []slabValues{parabola(2*math.Pi*schema.LightSpeed/values[0], w0)}
	})
	list, err := s.ZeroPoints("TE0", 0, []float64{0})
	if err != nil || len(list) != 2 {
		t.Fatalf("found %v, %v, expected two crossings", list, err)
	}
	for i, sign := range []float64{1, -1} {
		exact := 1.35e-6 / (1 + sign*0.01)
		if math.Abs(list[i].Value-exact) > 1e-12 {
			t.Errorf("found %.12g, expected %.12g", list[i].Value, exact)
		}
	}
}

// parabola has GVD = g ((u^2 - 1e-4) with u = w/w0 - 1 and g = 1e6 ps^2/km, beta3 its slope.
func parabola(w, w0 float64) slabValues {
	const c, g = schema.LightSpeed, 1e6 * 1e-27
	u := w/w0 - 1
	beta1 := 2/c + g*w0*(u*u*u/3-1e-4*u)
	beta := 1.8*w0/c + 2/c*u*w0 + g*w0*w0*(u*u*u*u/12-1e-4*u*u/2)
	return slabValues{
		neff: beta * c / w, ng: beta1 * c, gvd: g * (u*u - 1e-4) / siGVD, beta3: 2 * g * u / w0 / siBeta3, guided: true,
	}
}

// Every point of the lines is on the exact line of zero GVD.
func TestZeroLines(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(21), thickness(31), shifts(3)}
	s := writeSlab(t, axes, 1)
	lines, err := s.ZeroLines("TE0", 0, 1, []float64{0, 0, 0})
	if err != nil || len(lines) == 0 {
		t.Fatalf("found %v, %v, expected lines", lines, err)
	}
	points := 0
	for _, line := range lines {
		for _, p := range line.Points {
			exact := exactZero(p[1]-0.02e-6, p[1]+0.02e-6, func(d float64) slabPoint { return wavelengthPoint(p[0], d) })
			if math.Abs(p[1]-exact) > 1e-12 { // 1e-3 ps^2/km over the slope, 1e3 ps^2/km per um
				t.Errorf("at %g m: found %.10g, expected %.10g", p[0], p[1], exact)
			}
			points++
		}
		if line.Closed {
			t.Errorf("found a closed line, expected one from side to side")
		}
	}
	if len(lines) != 1 || points < 30 {
		t.Errorf("found %d lines of %d points, expected one across the box", len(lines), points)
	}
}

// Circles and saddles: lines of zero of a made-up GVD close, and pair as its sign in the cell's middle says.
func TestContour(t *testing.T) {
	axes := []schema.AxisBlock{span("thickness", -1, 1, 12), span("index_shift", -1, 1, 15)}
	made := func(f func(x, y float64) float64) *Surfaces {
		return writeRows(t, slabSweep(axes), axes, func(values []float64) []slabValues {
			return []slabValues{{neff: 2, ng: 2, gvd: f(values[0], values[1]), guided: true}}
		})
	}
	t.Run("circle", func(t *testing.T) {
		lines, err := made(func(x, y float64) float64 { return x*x + y*y - 0.5 }).ZeroLines("TE0", 0, 1, []float64{0, 0})
		if err != nil || len(lines) != 1 || !lines[0].Closed {
			t.Fatalf("found %+v, %v, expected one closed line", lines, err)
		}
		for i, p := range lines[0].Points {
			if r := math.Hypot(p[0], p[1]); math.Abs(r-math.Sqrt(0.5)) > 1e-10 {
				t.Errorf("point %d: found radius %g, expected %g", i, r, math.Sqrt(0.5))
			}
			q := lines[0].Points[(i+1)%len(lines[0].Points)]
			if d := math.Hypot(p[0]-q[0], p[1]-q[1]); d > 0.25 { // a cell's diagonal is 0.23
				t.Errorf("point %d: found the next %g away, expected it in the same cell", i, d)
			}
		}
	})
	for name, shift := range map[string]float64{"saddle up": 0.001, "saddle down": -0.001} {
		t.Run(name, func(t *testing.T) {
			lines, err := made(func(x, y float64) float64 { return x*y + shift }).ZeroLines("TE0", 1, 0, []float64{0, 0})
			if err != nil || len(lines) != 2 {
				t.Fatalf("found %+v, %v, expected two branches of a hyperbola", lines, err)
			}
			for _, line := range lines {
				for _, p := range line.Points {
					if first := line.Points[0]; math.Abs(p[0]*p[1]+shift) > 1e-10 || p[0]*first[0] < 0 || p[1]*first[1] < 0 {
						t.Errorf("found %v on a branch that begins at %v", p, first)
					}
				}
			}
		})
	}
}

func TestZeroErrors(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(5), thickness(5)}
	s := writeSlab(t, axes, 1)
	for name, f := range map[string]func() error{
		"family":  func() error { _, err := s.ZeroPoints("TM9", 0, []float64{0, 0}); return err },
		"axis":    func() error { _, err := s.ZeroPoints("TE0", 2, []float64{0, 0}); return err },
		"count":   func() error { _, err := s.ZeroPoints("TE0", 0, nil); return err },
		"twice":   func() error { _, err := s.ZeroLines("TE0", 1, 1, []float64{0, 0}); return err },
		"outside": func() error { _, err := s.ZeroPoints("TE0", 0, []float64{0, 7}); return err },
	} {
		t.Run(name, func(t *testing.T) {
			if f() == nil {
				t.Error("found no error")
			}
		})
	}
}
