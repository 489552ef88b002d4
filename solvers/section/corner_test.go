package section

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"betaloom/schema"
)

// TestCorners holds that every end of a strip's wall is a node of the mesh,
// with cells round it no larger than Size Ratio^(CornerLayers - 1/2), the rounding of the number of layers being half a layer.
func TestCorners(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	seen := 0
	for range 30 {
		s := random(r)
		m := mesh(t, s.must(t), options())
		limit := 0.25 * um * math.Pow(0.15, 2.5) * (1 + 1e-9)
		bottom := 0.0
		for _, l := range s.physics.Section.Layers.Layers {
			if l.Thickness == nil {
				continue
			}
			h := s.value(*l.Thickness)
			for _, p := range l.Strips {
				if p.Material == l.Fill || p.Material == "" && l.Material == l.Fill {
					continue
				}
				for _, end := range s.ends(p, bottom, h) {
					seen++
					checkCorner(t, m, end[0], end[1], limit)
				}
			}
			bottom += h
		}
	}
	if seen < 200 {
		t.Fatalf("%d corners only", seen)
	}
}

// ends are the four corners of a strip.
func (s *sketch) ends(p schema.Strip, bottom, h float64) [4][2]float64 {
	c, w := s.value(p.Centre), s.value(p.Width)
	down := map[string]float64{"": h, "top": h, "middle": h / 2, "foot": 0}[p.WidthAt]
	a, b := 1/math.Tan(s.value(*p.SidewallLeft)), 1/math.Tan(s.value(*p.SidewallRight))
	return [4][2]float64{
		{c - w/2 - down*a, bottom}, {c - w/2 + (h-down)*a, bottom + h},
		{c + w/2 + down*b, bottom}, {c + w/2 - (h-down)*b, bottom + h},
	}
}

func checkCorner(t *testing.T, m *Mesh, x, y, limit float64) {
	t.Helper()
	at := func(places []float64, v float64) int {
		return slices.IndexFunc(places, func(p float64) bool { return math.Abs(p-v) < 1e-18 }) // rounding of 1e-6
	}
	j := at(m.Y, y)
	if j < 0 {
		t.Fatalf("no level at %g m", y)
	}
	i := at(m.X[j], x)
	if i < 0 {
		t.Fatalf("no node at %g %g m", x, y)
	}
	for _, w := range []float64{m.Y[j] - m.Y[j-1], m.Y[j+1] - m.Y[j], m.X[j][i] - m.X[j][i-1], m.X[j][i+1] - m.X[j][i]} {
		if w > limit {
			t.Fatalf("a cell of %g m at the corner %g %g m, expected at most %g m", w, x, y, limit)
		}
	}
}

// TestOrders has the orders of the graded cells of a strip: one lower for
// each layer, and none below the lowest asked for.
func TestOrders(t *testing.T) {
	o := one(0.5*um, func(s *sketch) []schema.Strip { return list(s.strip(0, 0.5*um, 90, 90)) }).must(t)
	opt := options()
	opt.Order, opt.MinOrder, opt.HalfX, opt.HalfY = 6, 4, true, true
	m := mesh(t, o, opt)
	want := []int{6, 5, 4, 4}
	if !slices.Equal(m.OrderX[:4], want) || !slices.Equal(m.OrderY[:4], want) {
		t.Errorf("orders %v %v, expected %v in the strip", m.OrderX, m.OrderY, want)
	}
	for i, x := range []float64{0, 0.85, 0.85 + 0.15*0.85, 1 - 0.15*0.15*0.15, 1} {
		closeTo(t, "line", m.X[0][i], 0.25*um*x)
	}
}
