package section

import (
	"math"
	"testing"
)

// TestMirror has sections whose planes are plain to see.
func TestMirror(t *testing.T) {
	type strip struct{ centre, width, left, right float64 }
	build := func(s *sketch, material string, h float64, fill string, strips ...strip) {
		l := len(s.physics.Section.Layers.Layers)
		s.layer(material, h, fill)
		for _, p := range strips {
			layer := &s.physics.Section.Layers.Layers[l]
			layer.Strips = append(layer.Strips, s.strip(p.centre*um, p.width*um, p.left, p.right))
		}
	}
	upright := strip{0.3, 0.5, 90, 90}
	tilted := strip{0.3, 0.5, 80, 80}
	for _, c := range []struct {
		name       string
		build      func(s *sketch)
		x, y       float64 // um
		hasX, hasY bool
	}{
		{"strip", func(s *sketch) { build(s, "core", 0.22*um, "oxide", upright) }, 0.3, 0.11, true, true},
		{"strip with other fill", func(s *sketch) { build(s, "core", 0.22*um, "air", upright) }, 0.3, 0.11, true, true},
		{"trapezoid", func(s *sketch) { build(s, "core", 0.22*um, "oxide", tilted) }, 0.3, 0, true, false},
		{"one wall tilted", func(s *sketch) { build(s, "core", 0.22*um, "oxide", strip{0.3, 0.5, 80, 90}) }, 0, 0, false, false},
		{"leaning over", func(s *sketch) { build(s, "core", 0.22*um, "oxide", strip{0.3, 0.5, 80, 100}) }, 0, 0, false, false},
		{"two strips", func(s *sketch) {
			build(s, "core", 0.22*um, "oxide", strip{-0.1, 0.5, 80, 85}, strip{0.9, 0.5, 85, 80})
		}, 0.4, 0, true, false},
		{"two unequal strips", func(s *sketch) {
			build(s, "core", 0.22*um, "oxide", strip{-0.1, 0.5, 90, 90}, strip{0.9, 0.5001, 90, 90})
		}, 0, 0.11, false, true},
		{"two strips of two materials", func(s *sketch) {
			build(s, "core", 0.22*um, "oxide", strip{-0.1, 0.5, 90, 90}, strip{0.9, 0.5, 90, 90})
			s.physics.Section.Layers.Layers[1].Strips[0].Material = "nitride"
		}, 0, 0.11, false, true},
		{"hexagon", func(s *sketch) {
			build(s, "core", 0.2*um, "oxide", strip{0.3, 0.5, 100, 100})
			build(s, "core", 0.2*um, "oxide", strip{0.3, 0.5 - 2*0.2*math.Tan(10*deg), 80, 80})
			s.physics.Section.Layers.Layers[1].Strips[0].WidthAt = "top"
		}, 0.3, 0.2, true, true},
		{"rib", func(s *sketch) {
			build(s, "nitride", 0.1*um, "")
			build(s, "core", 0.1*um, "oxide", upright)
		}, 0.3, 0, true, false},
		{"rib on both sides", func(s *sketch) {
			build(s, "core", 0.1*um, "oxide", upright)
			build(s, "nitride", 0.05*um, "")
			build(s, "core", 0.1*um, "oxide", upright)
		}, 0.3, 0.125, true, true},
		{"cladding in two layers", func(s *sketch) {
			build(s, "core", 0.22*um, "oxide", upright)
			build(s, "oxide", 2*um, "")
		}, 0.3, 0.11, true, true},
		{"shifted ledge", func(s *sketch) {
			build(s, "core", 0.1*um, "oxide", upright)
			build(s, "core", 0.1*um, "oxide", strip{0.31, 0.3, 90, 90})
		}, 0, 0, false, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			s := newSketch().layer("oxide", -1, "")
			c.build(s)
			o := s.layer("oxide", -1, "").must(t)
			x, hasX := o.MirrorX()
			y, hasY := o.MirrorY()
			if hasX != c.hasX || hasY != c.hasY {
				t.Fatalf("planes %v %v, expected %v %v", hasX, hasY, c.hasX, c.hasY)
			}
			if hasX && math.Abs(x-c.x*um) > 1e-20 || hasY && math.Abs(y-c.y*um) > 1e-20 { // rounding of 1e-6
				t.Errorf("planes at %g %g m", x, y)
			}
			checkFolds(t, o, hasX, hasY)
		})
	}
	t.Run("other half-space", func(t *testing.T) {
		s := newSketch()
		o := s.layer("oxide", -1, "").layer("core", 0.2*um, "oxide", s.strip(0, 0.4*um, 90, 90)).layer("air", -1, "").must(t)
		if _, ok := o.MirrorY(); ok {
			t.Error("found a plane")
		}
	})
}

// checkFolds compares halves and quarters with the whole: areas of the
// materials in the strips, and their derivatives in every parameter, also in those that break the symmetry.
func checkFolds(t *testing.T, o *Outline, hasX, hasY bool) {
	whole := mesh(t, o, options())
	for _, fold := range []struct {
		name string
		x, y bool
	}{{"right half", true, false}, {"upper half", false, true}, {"quarter", true, true}} {
		opt := options()
		opt.HalfX, opt.HalfY, opt.WallX, opt.WallY = fold.x, fold.y, Electric, Magnetic
		m, err := o.Mesh(opt)
		if fold.x && !hasX || fold.y && !hasY {
			if err == nil {
				t.Errorf("%s: expected a refusal", fold.name)
			}
			continue
		}
		if err != nil {
			t.Fatal(err)
		}
		if fold.y != (m.Bottom == Magnetic) || m.Left != Electric || m.Top != Electric {
			t.Errorf("%s: walls %v %v %v", fold.name, m.Left, m.Bottom, m.Top)
		}
		closeTo(t, fold.name, areas(t, o, m)["core"], areas(t, o, whole)["core"])
		for p := range o.Split {
			found, want := motion(o, m, p), motion(o, whole, p)
			if math.Abs(found-want) > 1e-12*um { // rounding of terms of the section's size
				t.Errorf("%s: the core grows by %g m^2 per unit of p%d, expected %g", fold.name, found, p, want)
			}
		}
	}
}

// motion is the derivative of the core's area in parameter p, by the
// product rule on each trapezoid.
func motion(o *Outline, m *Mesh, p int) float64 {
	if m.DX[p] == nil {
		return 0
	}
	sum := 0.0
	for j := range m.OrderY {
		for i := range m.OrderX {
			if k := m.Medium[j][i]; o.Media[k].Name != "core" {
				continue
			}
			w := m.X[j][i+1] - m.X[j][i] + m.X[j+1][i+1] - m.X[j+1][i]
			dw := m.DX[p][j][i+1] - m.DX[p][j][i] + m.DX[p][j+1][i+1] - m.DX[p][j+1][i]
			sum += (w*(m.DY[p][j+1]-m.DY[p][j]) + dw*(m.Y[j+1]-m.Y[j])) / 2
		}
	}
	return sum * float64(m.Copies)
}
