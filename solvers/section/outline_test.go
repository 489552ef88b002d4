package section

import (
	"math"
	"testing"

	"betaloom/schema"
)

// closeTo compares to 1e-12 of the larger: a few thousand roundings.
func closeTo(t *testing.T, what string, found, want float64) {
	t.Helper()
	if !(math.Abs(found-want) <= 1e-12*max(math.Abs(found), math.Abs(want))) {
		t.Errorf("%s: found %.15g, expected %.15g", what, found, want)
	}
}

// areas sums the cells of each material, copies included.
func areas(t *testing.T, o *Outline, m *Mesh) map[string]float64 {
	t.Helper()
	sum := map[string]float64{}
	for j := range m.OrderY {
		for i := range m.OrderX {
			a, _ := quadrilateral(t, m, j, i)
			name := "metal"
			if k := m.Medium[j][i]; k != Metal {
				name = o.Media[k].Name
			}
			sum[name] += a * float64(m.Copies)
		}
	}
	return sum
}

// TestTrapezoid places one strip by hand: at a depth d below the place of
// its width a wall at angle a is d/tan(a) further out; the area is the mean width times the height.
func TestTrapezoid(t *testing.T) {
	const c, w, h = 0.3 * um, 0.6 * um, 0.4 * um
	left, right := 1/math.Tan(80*deg), 1/math.Tan(70*deg)
	for _, at := range []struct {
		name string
		down float64 // from the place of the width to the foot
	}{{"", h}, {"top", h}, {"middle", h / 2}, {"foot", 0}} {
		t.Run("width at "+at.name, func(t *testing.T) {
			s := newSketch()
			strip := s.strip(c, w, 80, 70)
			strip.WidthAt = at.name
			o := s.layer("oxide", -1, "").layer("core", h, "air", strip).layer("air", -1, "").must(t)
			if len(o.Layers) != 3 || len(o.Layers[1].Strips) != 1 {
				t.Fatalf("%d layers, %d strips in the second", len(o.Layers), len(o.Layers[1].Strips))
			}
			found := o.Layers[1].Strips[0]
			closeTo(t, "left foot", found.Left.Bottom.V, c-w/2-at.down*left)
			closeTo(t, "left top", found.Left.Top.V, c-w/2+(h-at.down)*left)
			closeTo(t, "right foot", found.Right.Bottom.V, c+w/2+at.down*right)
			closeTo(t, "right top", found.Right.Top.V, c+w/2-(h-at.down)*right)
			closeTo(t, "bottom", o.Layers[1].Bottom.V, 0)
			closeTo(t, "top", o.Layers[1].Top.V, h)
			want := (w + (at.down-h/2)*(left+right)) * h
			closeTo(t, "area", areas(t, o, mesh(t, o, options()))["core"], want)
		})
	}
}

// TestPartialEtch is a rib as two layers: the wall goes on from one into the
// other on one line where they meet, and stands at a corner where they do not.
func TestPartialEtch(t *testing.T) {
	rib := func(slabWidth float64) *Outline {
		s := newSketch()
		s.layer("oxide", -1, "")
		s.layer("core", 0.1*um, "oxide", s.strip(0, slabWidth, 90, 90))
		s.layer("core", 0.12*um, "oxide", s.strip(0, 0.5*um, 90, 90))
		return s.layer("oxide", -1, "").must(t)
	}
	flush, ledge := mesh(t, rib(0.5*um), options()), mesh(t, rib(0.6*um), options())
	lines := func(m *Mesh) int {
		n := 0
		for i := range m.X[0] {
			if x := m.X[0][i]; math.Abs(math.Abs(x)-0.25*um) < 1e-16 || math.Abs(math.Abs(x)-0.3*um) < 1e-16 {
				n++
			}
		}
		return n
	}
	if n := lines(flush); n != 2 {
		t.Errorf("%d wall lines of flush layers, expected 2", n)
	}
	if n := lines(ledge); n != 4 {
		t.Errorf("%d wall lines of layers with a ledge, expected 4", n)
	}
	rows := func(m *Mesh, y float64) bool { // whether the mesh is graded at y
		for _, v := range m.Y {
			if v != y && math.Abs(v-y) < 2*nm {
				return true
			}
		}
		return false
	}
	if rows(flush, 0.1*um) || !rows(ledge, 0.1*um) {
		t.Error("the mesh is to be graded where walls part and only there")
	}
	// the two widths are parameters of their own: the flush wall has no motion for either
	if !flush.Split[3] || ledge.Split[3] {
		t.Errorf("split %v and %v in the slab's width, expected true and false", flush.Split[3], ledge.Split[3])
	}
}

// TestNothingThere holds that layers, strips and gaps of no extent leave the
// mesh of the section without them, and are marked.
func TestNothingThere(t *testing.T) {
	build := func(with bool) *Outline {
		s := newSketch()
		strip := s.strip(0.1*um, 0.5*um, 80, 80)
		s.layer("oxide", -1, "")
		if with {
			s.layer("nitride", 0, "")
			s.layer("core", 0.22*um, "air", s.strip(-1*um, 0, 80, 100), strip)
		} else {
			s.layer("core", 0.22*um, "air", strip)
		}
		return s.layer("oxide", -1, "").must(t)
	}
	with, without := build(true), build(false)
	m, want := mesh(t, with, options()), mesh(t, without, options())
	if !m.Same(want) {
		t.Fatal("another topology")
	}
	for j := range want.Y {
		closeTo(t, "Y", m.Y[j], want.Y[j])
		for i := range want.X[j] {
			closeTo(t, "X", m.X[j][i], want.X[j][i])
		}
	}
	// parameters: strip 0-3 (angles, centre, width), layer 4, vanished strip 5-8, thickness 9
	for p, split := range map[int]bool{0: false, 2: false, 3: false, 4: true, 7: false, 8: true, 9: false} {
		if m.Split[p] != split {
			t.Errorf("split[%d] is %v", p, m.Split[p])
		}
	}
}

// TestTouching holds that strips without a gap share a wall, and are one
// where they are of one material.
func TestTouching(t *testing.T) {
	build := func(other string) (*Outline, *Mesh) {
		s := newSketch()
		a, b := s.strip(-0.2*um, 0.4*um, 85, 80), s.strip(0.3*um, 0.6*um, 100, 85)
		b.Material = other
		o := s.layer("oxide", -1, "").layer("core", 0.3*um, "air", a, b).layer("oxide", -1, "").must(t)
		return o, mesh(t, o, options())
	}
	o, m := build("nitride")
	cot := func(a float64) float64 { return 1 / math.Tan(a*deg) }
	closeTo(t, "core", areas(t, o, m)["core"], 0.3*um*(0.4*um+0.15*um*(cot(85)+cot(80))))
	closeTo(t, "nitride", areas(t, o, m)["nitride"], 0.3*um*(0.6*um+0.15*um*(cot(100)+cot(85))))
	for _, p := range []int{1, 2, 3, 4, 6, 7} { // all that move the wall between
		if !m.Split[p] {
			t.Errorf("split[%d] is false", p)
		}
	}
	if m.Split[0] || m.Split[5] || m.Split[8] {
		t.Errorf("split %v: the outer walls and the thickness move on", m.Split)
	}
	o, one := build("")
	if len(one.OrderX) >= len(m.OrderX) {
		t.Errorf("%d columns of one material, %d of two", len(one.OrderX), len(m.OrderX))
	}
	closeTo(t, "both", areas(t, o, one)["core"], 0.3*um*(1*um+0.15*um*(cot(85)+cot(80)+cot(100)+cot(85))))
}

// TestClosed has metal on all sides and a strip against one of them.
func TestClosed(t *testing.T) {
	s := newSketch()
	s.layer("air", 1*um, "").layer("core", 0.5*um, "air", s.strip(-0.75*um, 0.5*um, 90, 75))
	l := s.physics.Section.Layers
	w := s.length(2 * um)
	l.GroundBottom, l.GroundTop, l.WallsWidth = true, true, &w
	o := s.must(t)
	m := mesh(t, o, Options{Outer: Magnetic, CornerLayers: 2})
	if m.Left != Electric || m.Right != Electric || m.Bottom != Electric || m.Top != Electric {
		t.Error("a metal wall is electric")
	}
	nx, ny := len(m.OrderX), len(m.OrderY)
	closeTo(t, "left", m.X[0][0], -1*um)
	closeTo(t, "right", m.X[0][nx], 1*um)
	closeTo(t, "bottom", m.Y[0], 0)
	closeTo(t, "top", m.Y[ny], 1.5*um)
	closeTo(t, "core", areas(t, o, m)["core"], 0.5*um*(0.5*um+0.25*um/math.Tan(75*deg)))
	closeTo(t, "right wall's motion", m.DX[len(o.Split)-1][0][nx], 0.5)
}

// TestMetal leaves the cells of a conductor out.
func TestMetal(t *testing.T) {
	s := newSketch()
	strip := s.strip(0, 0.4*um, 90, 90)
	strip.Material = "metal"
	o := s.layer("oxide", -1, "").layer("core", 0.2*um, "air", strip).layer("air", -1, "").must(t)
	closeTo(t, "metal", areas(t, o, mesh(t, o, options()))["metal"], 0.08*um*um)
	if len(o.Media) != 2 {
		t.Errorf("%d media, expected oxide and air", len(o.Media))
	}
}

// TestFar has the fills as a stack.
func TestFar(t *testing.T) {
	s := newSketch()
	s.layer("oxide", -1, "").layer("core", 0.1*um, "").layer("core", 0.12*um, "air", s.strip(0, 0.5*um, 90, 90))
	o := s.layer("nitride", -1, "").must(t)
	far := o.Far()
	want := []struct{ index, thickness float64 }{{1.4444, 0}, {3.4777, 0.1 * um}, {1, 0.12 * um}, {2, 0}}
	if len(far.Layers) != len(want) {
		t.Fatalf("%d layers", len(far.Layers))
	}
	for i, w := range want {
		closeTo(t, "permittivity", real(far.Layers[i].Eps[1].V), w.index*w.index)
		closeTo(t, "thickness", real(far.Layers[i].Thickness.V), w.thickness)
		if far.Layers[i].HalfSpace != (w.thickness == 0) {
			t.Errorf("half-space %d: %v", i, far.Layers[i].HalfSpace)
		}
	}
	if p := far.Layers[2].Thickness.P; len(p) != 6 || p[5] != 1 {
		t.Errorf("derivatives %v of the thickness", p)
	}
}

// TestParts keeps apart what has a name, also in one material.
func TestParts(t *testing.T) {
	s := newSketch()
	a, b := s.strip(-0.25*um, 0.5*um, 90, 90), s.strip(0.25*um, 0.5*um, 90, 90)
	a.Name, b.Name = "port", "starboard"
	o := s.layer("oxide", -1, "").layer("core", 0.2*um, "oxide", a, b).layer("oxide", -1, "").must(t)
	half := options()
	half.HalfX = true
	for name, options := range map[string]Options{"whole": options(), "half": half} {
		t.Run(name, func(t *testing.T) {
			m := mesh(t, o, options)
			sum := map[Part]float64{}
			for j := range m.OrderY {
				for i := range m.OrderX {
					if len(m.Part[j][i]) != m.Copies {
						t.Fatalf("%d parts of %d copies", len(m.Part[j][i]), m.Copies)
					}
					area, _ := quadrilateral(t, m, j, i)
					for _, p := range m.Part[j][i] {
						sum[o.Parts[p]] += area
					}
				}
			}
			closeTo(t, "port", sum[Part{1, 0}], 0.1*um*um)
			closeTo(t, "starboard", sum[Part{1, 1}], 0.1*um*um)
		})
	}
}

// TestSlab has no walls: x counts from zero.
func TestSlab(t *testing.T) {
	o := newSketch().layer("oxide", -1, "").layer("core", 0.3*um, "").layer("oxide", -1, "").must(t)
	m := mesh(t, o, options())
	closeTo(t, "core", areas(t, o, m)["core"], 0.3*2.2*um*um)
	closeTo(t, "left", m.X[0][0], -1*um)
	closeTo(t, "top", m.Y[len(m.OrderY)], 1.4*um)
	for _, y := range m.Y {
		if y > 0 && y < 0.29*um && math.Mod(y+1e-18, 0.15*um) > 1e-17 {
			t.Errorf("a line at %g m: an interface without corner needs no grading", y)
		}
	}
}

// TestSameMedium takes two names with the same numbers for one medium.
func TestSameMedium(t *testing.T) {
	s := newSketch()
	s.physics.Materials["glass"] = schema.Material{Index: &schema.Number{Value: 1.4444}}
	s.physics.Materials["tuned"] = schema.Material{Index: &schema.Number{Parameter: s.number(1.4444, schema.Dimension{}).Parameter}}
	o := s.layer("oxide", -1, "").layer("glass", 0.2*um, "").layer("tuned", -1, "").must(t)
	if len(o.Media) != 2 {
		t.Errorf("%d media: expected two, of which one moves with a parameter", len(o.Media))
	}
}
