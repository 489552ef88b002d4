package report

import (
	"math"
	"testing"
)

// sampled evaluates a function on a grid.
func sampled(nx, ny int, lo, hi float64, f func(x, y float64) float64) *field {
	g := &field{X: linspace(lo, hi, nx), Y: linspace(lo, hi, ny)}
	for _, y := range g.Y {
		for _, x := range g.X {
			g.V = append(g.V, f(x, y))
		}
	}
	return g
}

func TestContourOfCircle(t *testing.T) {
	g := sampled(81, 61, -2, 2, func(x, y float64) float64 { return x*x + y*y })
	lines := g.contours(1.44)
	if len(lines) != 1 {
		t.Fatalf("%d lines, expected one loop", len(lines))
	}
	line := lines[0]
	if line[0] != line[len(line)-1] {
		t.Errorf("the loop is open: %v to %v", line[0], line[len(line)-1])
	}
	// Linear interpolation of a quadratic over a step h is off by at most h^2/8 times
	// the second derivative 2, here (4/60)^2/4 = 1.1e-3 in r^2, over 2 r = 2.4.
	for _, p := range line {
		if r := math.Hypot(p.X, p.Y); math.Abs(r-1.2) > 5e-4 {
			t.Errorf("a vertex has radius %.5f, expected 1.2", r)
		}
	}
	// The circumference of the circle, less the chords' shortfall of order h^2.
	if got := length(line); math.Abs(got-2*math.Pi*1.2) > 0.01 {
		t.Errorf("length %.4f, expected %.4f", got, 2*math.Pi*1.2)
	}
}

func TestContours(t *testing.T) {
	for _, c := range []struct {
		name  string
		f     func(x, y float64) float64
		level float64
		lines int
		on    func(p vertex) float64 // zero on the line
	}{
		{"straight", func(x, y float64) float64 { return x + 2*y }, 0.3, 1, func(p vertex) float64 { return p.X + 2*p.Y - 0.3 }},
		{"two branches", func(x, y float64) float64 { return x * y }, 0.5, 2, func(p vertex) float64 { return p.X*p.Y - 0.5 }},
		{"level not met", func(x, y float64) float64 { return x }, 5, 0, nil},
		{"plane at the level", func(x, y float64) float64 { return 1 }, 1, 0, nil},
		{"two hills", func(x, y float64) float64 {
			return math.Exp(-8*((x-1)*(x-1)+y*y)) + math.Exp(-8*((x+1)*(x+1)+y*y))
		}, 0.5, 2, func(p vertex) float64 {
			x := math.Abs(p.X)
			return (math.Exp(-8*((x-1)*(x-1)+p.Y*p.Y)) - 0.5) / 8
		}},
	} {
		t.Run(c.name, func(t *testing.T) {
			lines := sampled(201, 201, -2, 2, c.f).contours(c.level)
			if len(lines) != c.lines {
				t.Fatalf("%d lines, expected %d", len(lines), c.lines)
			}
			for _, line := range lines {
				for _, p := range line {
					if d := c.on(p); math.Abs(d) > 1e-3 { // the step is 0.02
						t.Errorf("vertex %v is off the line by %.2g", p, d)
					}
				}
			}
		})
	}
}

func TestContourStopsAtMissingValues(t *testing.T) {
	g := sampled(41, 41, -1, 1, func(x, y float64) float64 {
		if math.Abs(x) < 0.2 {
			return math.NaN()
		}
		return y
	})
	lines := g.contours(0.33)
	if len(lines) != 2 {
		t.Fatalf("%d lines, expected one on each side of the gap", len(lines))
	}
	for _, line := range lines {
		for _, p := range line {
			if math.Abs(p.X) < 0.19 {
				t.Errorf("a vertex at %v, inside the gap", p)
			}
		}
	}
}

func TestSimplify(t *testing.T) {
	var line []vertex
	for _, x := range linspace(0, 10, 1001) {
		line = append(line, vertex{x, math.Sin(x)})
	}
	short := simplify(line, 0.01)
	if len(short) > 60 || len(short) < 10 {
		t.Errorf("%d vertices are left of %d", len(short), len(line))
	}
	for _, p := range line {
		near := math.Inf(1)
		for i := 1; i < len(short); i++ {
			near = min(near, distance(p, short[i-1], short[i]))
		}
		if near > 0.01 {
			t.Errorf("%v is %.3g from the line that is left, expected at most 0.01", p, near)
		}
	}
}
