package section

import (
	"errors"
	"math"
	"strings"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/resolve"
)

// one is a section of a single layer with strips.
func one(h float64, strips func(s *sketch) []schema.Strip) *sketch {
	s := newSketch().layer("oxide", -1, "")
	return s.layer("core", h, "air", strips(s)...).layer("oxide", -1, "")
}

func list(strips ...schema.Strip) []schema.Strip { return strips }

// TestRefusals holds that what cannot be meshed is refused with its place,
// what was found and what was expected.
func TestRefusals(t *testing.T) {
	named := func(name string, p schema.Strip) schema.Strip {
		p.Name = name
		return p
	}
	for _, c := range []struct {
		name     string
		sketch   *sketch
		messages []string
	}{
		{"triangle", one(1*um, func(s *sketch) []schema.Strip { return list(s.strip(0, 0, 80, 80)) }),
			[]string{"section.layers[1].strips[0]", "walls that meet or cross", "walls apart"}},
		{"walls cross", one(1*um, func(s *sketch) []schema.Strip {
			p := named("rail", s.strip(0, 0.1*um, 60, 60))
			p.WidthAt = "foot"
			return list(p)
		}), []string{"strip rail", "walls that meet or cross", "-1.05"}},
		{"negative width", one(1*um, func(s *sketch) []schema.Strip { return list(s.strip(0, -1*um, 90, 90)) }),
			[]string{"strips[0]", "a width of -1e-06 m", "zero or more"}},
		{"overlap", one(1*um, func(s *sketch) []schema.Strip {
			return list(named("b", s.strip(0.3*um, 0.5*um, 90, 90)), named("a", s.strip(0, 0.5*um, 90, 90)))
		}), []string{"strip b", "an overlap with strip a", "a gap, or none"}},
		{"overlapping feet", one(1*um, func(s *sketch) []schema.Strip {
			return list(s.strip(0, 0.5*um, 80, 80), s.strip(0.7*um, 0.5*um, 80, 80))
		}), []string{"strips[1]", "an overlap with section.layers[1].strips[0]", "-1.5"}},
		{"touching feet", one(1*um, func(s *sketch) []schema.Strip {
			a, b := s.strip(0, 0.5*um, 80, 80), s.strip(0.5*um, 0.5*um, 80, 80)
			a.WidthAt, b.WidthAt = "foot", "foot"
			return list(a, b)
		}), []string{"strips[1]", "throughout the layer"}},
		{"flat wall", one(1*um, func(s *sketch) []schema.Strip { return list(s.strip(0, 1*um, 0, 90)) }),
			[]string{"strips[0]", "a left wall at 0 deg", "between 0 and 180 deg"}},
		{"negative thickness", one(-1*um, func(s *sketch) []schema.Strip { return nil }),
			[]string{"section.layers[1]", "a thickness of -1e-06 m", "zero or more"}},
		{"infinite thickness", one(math.Inf(1), func(s *sketch) []schema.Strip { return nil }),
			[]string{"section.layers[1]", "a thickness of +Inf m"}},
		{"where the width is", one(1*um, func(s *sketch) []schema.Strip {
			p := s.strip(0, 1*um, 90, 90)
			p.WidthAt = "head"
			return list(p)
		}), []string{"strips[0]", `the width at "head"`, "top, foot or middle"}},
		{"thin conductor", one(0, func(s *sketch) []schema.Strip {
			p := s.strip(0, 1*um, 90, 90)
			p.Material = "metal"
			return list(p)
		}), []string{"strips[0]", "a conductor of no thickness"}},
		{"metal fill", newSketch().layer("oxide", -1, "").layer("metal", 1*um, "").layer("air", -1, ""),
			[]string{"section.layers[1]", "the metal metal", "a dielectric"}},
		{"no thickness", newSketch().layer("oxide", -1, "").layer("core", -1, "").layer("air", -1, ""),
			[]string{"section.layers[1]", "no thickness"}},
		{"thickness of a half-space", newSketch().layer("oxide", 1*um, "").layer("air", -1, ""),
			[]string{"section.layers[0]", "a thickness", "half-space"}},
		{"unknown material", newSketch().layer("oxide", -1, "").layer("jam", -1, ""), []string{"material jam"}},
		{"nothing", newSketch(), []string{"section.layers", "a list of 0"}},
		{"one half-space", newSketch().layer("oxide", -1, ""), []string{"section.layers", "at least one layer for each open end"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := c.sketch.outline()
			refused(t, err, c.messages...)
		})
	}
}

// TestRefusedWalls is the same for side walls, and for no layers at all.
func TestRefusedWalls(t *testing.T) {
	t.Run("beyond the side walls", func(t *testing.T) {
		for _, centre := range []float64{-0.8 * um, 0.8 * um} {
			s := one(1*um, func(s *sketch) []schema.Strip { return list(s.strip(centre, 0.5*um, 90, 90)) })
			s.physics.Section.Layers.WallsWidth = &schema.Number{Value: 2 * um}
			_, err := s.outline()
			refused(t, err, "strips[0]", "a strip beyond the", "a strip between the side walls")
		}
	})
	t.Run("width of the side walls", func(t *testing.T) {
		s := one(1*um, func(s *sketch) []schema.Strip { return nil })
		s.physics.Section.Layers.WallsWidth = &schema.Number{Value: -2 * um}
		_, err := s.outline()
		refused(t, err, "walls", "a width of -2e-06 m")
	})
	t.Run("no layers", func(t *testing.T) {
		s := newSketch()
		r, err := resolve.New(&s.physics)
		if err != nil {
			t.Fatal(err)
		}
		_, err = New(&schema.Physics{}, r)
		refused(t, err, "section", "no layers")
	})
}

func refused(t *testing.T, err error, messages ...string) {
	t.Helper()
	var input *solvers.InputError
	if !errors.As(err, &input) {
		t.Fatalf("%v, expected an InputError", err)
	}
	for _, m := range messages {
		if !strings.Contains(err.Error(), m) {
			t.Errorf("%q, expected it to say %q", err, m)
		}
	}
}

// TestOptions refuses options out of range and meshes beyond all bounds.
func TestOptions(t *testing.T) {
	o := one(0.3*um, func(s *sketch) []schema.Strip { return list(s.strip(0, 0.5*um, 85, 80)) }).must(t)
	for _, c := range []struct {
		name    string
		change  func(o *Options)
		message string
	}{
		{"order", func(o *Options) { o.Order = 31 }, "order 31"},
		{"layers", func(o *Options) { o.CornerLayers = -1 }, "corner layers -1"},
		{"ratio", func(o *Options) { o.Ratio = 1 }, "ratio 1"},
		{"steep ratio", func(o *Options) { o.Ratio = 1e-3 }, "ratio 0.001"},
		{"size", func(o *Options) { o.Size = math.NaN() }, "size NaN"},
		{"shrinking", func(o *Options) { o.Growth = 0.5 }, "growth 0.5"},
		{"no bound", func(o *Options) { o.Bounds.Top = 0 }, "a bound of 0 m at the top"},
		{"infinite bound", func(o *Options) { o.Bounds.Left = math.Inf(1) }, "at the left"},
		{"half", func(o *Options) { o.HalfX = true }, "no vertical mirror plane"},
		{"upper half", func(o *Options) { o.HalfY = true }, "no horizontal mirror plane"},
		{"cells", func(o *Options) { o.Size = 1e-15 }, "at most 1000 cells"},
		{"far bound", func(o *Options) { o.Bounds.Right = 1e300 }, "at most 1000 cells"},
		{"coincident lines", func(o *Options) { o.CornerLayers, o.Ratio = 15, 0.01 }, "at"},
	} {
		t.Run(c.name, func(t *testing.T) {
			opt := options()
			opt.Growth = 1
			c.change(&opt)
			_, err := o.Mesh(opt)
			refused(t, err, c.message)
		})
	}
}

// TestManyStrips bounds the size of a mesh before it takes memory.
func TestManyStrips(t *testing.T) {
	o := one(0.3*um, func(s *sketch) []schema.Strip {
		strips := make([]schema.Strip, 1000)
		for i := range strips {
			strips[i] = schema.Strip{Centre: schema.Number{Value: float64(i) * um}, Width: schema.Number{Value: 0.5 * um}}
		}
		return strips
	}).must(t)
	m := mesh(t, o, options())
	if n := len(m.OrderX); n < 2000 {
		t.Errorf("%d columns", n)
	}
	fine := options()
	fine.Size, fine.CornerLayers = 5*nm, 8
	_, err := o.Mesh(fine)
	refused(t, err, "a mesh of at most")
}
