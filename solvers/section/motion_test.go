package section

import (
	"math"
	"math/rand/v2"
	"testing"
)

// TestMotion compares DX and DY with differences of the whole construction,
// in every parameter of random sections. Steps: 1e-12 m for lengths, in which the mesh is linear but for
// lines that cross layers (rounding 1e-22/1e-12), 1e-6 rad for angles (truncation and rounding 1e-6 and 1e-10 of a
// micrometre). Where the construction has a kink, such as where another wall end becomes the outermost, the derivative lies
// between the slopes of both sides.
func TestMotion(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	compared, kinks := 0, 0
	for range 40 {
		s := random(r)
		m := mesh(t, s.must(t), options())
		for p := range len(s.point) - 1 {
			step, unit := 1e-12, 1.0 // metres move with metres
			if s.physics.Parameters[1+p].Dimension.Angle != 0 {
				step, unit = 1e-6, um
			}
			up, down := s.moved(t, p, step), s.moved(t, p, -step)
			if m.Same(up) && m.Same(down) {
				compared++
				kinks += compareMotion(t, [3]*Mesh{down, m, up}, p, step, unit)
			}
		}
	}
	if compared < 300 || kinks > compared/4 {
		t.Fatalf("%d parameters compared, %d of them with a kink", compared, kinks)
	}
}

func (s *sketch) moved(t *testing.T, p int, step float64) *Mesh {
	t.Helper()
	s.point[1+p] += step
	m := mesh(t, s.must(t), options())
	s.point[1+p] -= step
	return m
}

// compareMotion says 1 where a line has a kink.
func compareMotion(t *testing.T, m [3]*Mesh, p int, step, unit float64) (kink int) {
	t.Helper()
	check := func(what string, down, here, up, found float64) {
		before, after := (here-down)/step, (up-here)/step
		if low, high := min(before, after), max(before, after); !(found >= low-1e-5*unit && found <= high+1e-5*unit) {
			t.Fatalf("%s moves by %g per unit of p%d, expected %g to %g", what, found, p, low, high)
		}
		if math.Abs(after-before) > 1e-4*unit {
			kink = 1
		}
	}
	for j := range m[1].Y {
		dy, dx := 0.0, make([]float64, len(m[1].X[j]))
		if m[1].DY[p] != nil {
			dy, dx = m[1].DY[p][j], m[1].DX[p][j]
		}
		check("Y", m[0].Y[j], m[1].Y[j], m[2].Y[j], dy)
		for i := range dx {
			check("X", m[0].X[j][i], m[1].X[j][i], m[2].X[j][i], dx[i])
		}
	}
	return kink
}
