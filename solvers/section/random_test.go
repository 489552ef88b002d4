package section

import (
	"flag"
	"math"
	"math/rand/v2"
	"sort"
	"testing"
)

var sections = flag.Int("sections", 100, "how many random sections are meshed")

// TestRandomSections meshes sections of fixed seed. That every cell is a
// convex quadrilateral of positive area and that its middle and random points in it have the section's material
// is checked against the section's definition, in the test's own words.
func TestRandomSections(t *testing.T) {
	var pinch []float64
	nx, ny := 0, 0
	for n := range *sections {
		r := rand.New(rand.NewPCG(1, uint64(n))) // a section does not depend on those before
		s := random(r)
		o := s.must(t)
		m := mesh(t, o, options())
		nx, ny = nx+len(m.OrderX), ny+len(m.OrderY)
		box, worst, own := 0.0, 1.0, s.taper()
		for j := range m.OrderY {
			for i := range m.OrderX {
				area, ratio := quadrilateral(t, m, j, i)
				box += area
				worst = min(worst, ratio)
				probe(t, r, s, o, m, j, i)
			}
		}
		pinch = append(pinch, worst/own)
		last := len(m.OrderX)
		want := (m.X[0][last] - m.X[0][0]) * (m.Y[len(m.OrderY)] - m.Y[0])
		if math.Abs(box-want) > 1e-12*want { // rounding of some thousand terms
			t.Fatalf("cells of %g m^2 in all, expected %g", box, want)
		}
	}
	sort.Float64s(pinch)
	if n := sort.SearchFloat64s(pinch, worstTaper); n > 1+*sections/200 { // no source: what is kept so far, with room
		t.Errorf("in %d sections a cell tapers over 5 times more than its section", n)
	}
	t.Logf("%d x %d cells on average; taper of the worst cell over that of its section: least %.2g, %.2g (1 %%), %.2g (10 %%)",
		nx / *sections, ny / *sections, pinch[0], pinch[len(pinch)/100], pinch[len(pinch)/10])
}

// taper is the least ratio of the horizontal edges of a strip or a gap.
func (s *sketch) taper() float64 {
	least := 1.0
	for _, l := range s.physics.Section.Layers.Layers {
		var edges [][2]float64 // foot and top of each wall
		for _, p := range l.Strips {
			h, c, w := s.value(*l.Thickness), s.value(p.Centre), s.value(p.Width)
			down := map[string]float64{"": h, "top": h, "middle": h / 2, "foot": 0}[p.WidthAt]
			a, b := 1/math.Tan(s.value(*p.SidewallLeft)), 1/math.Tan(s.value(*p.SidewallRight))
			edges = append(edges, [2]float64{c - w/2 - down*a, c - w/2 + (h-down)*a}, [2]float64{c + w/2 + down*b, c + w/2 - (h-down)*b})
		}
		for i := 1; i < len(edges); i++ {
			foot, top := edges[i][0]-edges[i-1][0], edges[i][1]-edges[i-1][1]
			least = min(least, foot/top, top/foot)
		}
	}
	return least
}

// quadrilateral gives the area of a cell by the shoelace formula and the
// ratio of its horizontal edges.
func quadrilateral(t *testing.T, m *Mesh, j, i int) (area, ratio float64) {
	t.Helper()
	x := [4]float64{m.X[j][i], m.X[j][i+1], m.X[j+1][i+1], m.X[j+1][i]}
	y := [4]float64{m.Y[j], m.Y[j], m.Y[j+1], m.Y[j+1]}
	for k := range 4 { // every turn to the left
		a, b := (k+1)%4, (k+2)%4
		if turn := (x[a]-x[k])*(y[b]-y[a]) - (y[a]-y[k])*(x[b]-x[a]); !(turn > 0) {
			t.Fatalf("cell %d %d turns by %g at a corner", j, i, turn)
		}
		area += ((x[k]-x[0])*(y[a]-y[0]) - (x[a]-x[0])*(y[k]-y[0])) / 2
	}
	lo, hi := x[1]-x[0], x[2]-x[3]
	return area, min(lo, hi) / max(lo, hi)
}

// probe compares the medium at random points of a cell.
func probe(t *testing.T, r *rand.Rand, s *sketch, o *Outline, m *Mesh, j, i int) {
	t.Helper()
	u, v := 0.01+0.98*r.Float64(), 0.01+0.98*r.Float64()
	x := (1-v)*((1-u)*m.X[j][i]+u*m.X[j][i+1]) + v*((1-u)*m.X[j+1][i]+u*m.X[j+1][i+1])
	y := (1-v)*m.Y[j] + v*m.Y[j+1]
	found, want := o.Media[m.Medium[j][i]].Name, s.material(x, y)
	if found != want {
		t.Fatalf("%s at %g %g m, expected %s", found, x, y, want)
	}
}
