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

// TestBoundsApart refuses bounds that leave the section no digits, or that
// have none beside it.
func TestBoundsApart(t *testing.T) {
	s := one(0.3*um, func(s *sketch) []schema.Strip { return list(s.strip(0.1*um, 0.5*um, 85, 80)) })
	layers := s.physics.Section.Layers
	open := layers.Layers[2]
	layers.Layers = layers.Layers[:2]
	s.layer("core", 0.2*um, "air", s.strip(0, 0.3*um, 90, 90), s.strip(1*um, 0.4*um, 90, 90)) // lines that are free in one layer
	layers.Layers = append(layers.Layers, open)
	o := s.must(t)
	const far, hair = 1e117, 1e-76
	lines := []string{"mesh: ", "vertical lines at ", "a section and bounds whose numbers are not so far apart"}
	for _, c := range []struct {
		name     string
		bounds   Bounds
		messages []string
	}{
		{"far left", Bounds{far, 1 * um, 1 * um, 1 * um}, append(lines, "of a mesh from -1e+117 m to ")},
		{"far right", Bounds{1 * um, far, 1 * um, 1 * um}, append(lines, "to 1e+117 m")},
		{"far left and right", Bounds{far, far, 1 * um, 1 * um}, lines},
		{"the greatest float", Bounds{math.MaxFloat64, math.MaxFloat64, 1 * um, 1 * um}, []string{"at most 1000 cells"}},
		{"far bottom", Bounds{1 * um, 1 * um, far, 1 * um}, []string{"levels at ", "of a mesh from -1e+117 m to "}},
		{"far top", Bounds{1 * um, 1 * um, 1 * um, far}, []string{"levels at ", "to 1e+117 m"}},
		{"far left, hairs elsewhere", Bounds{far, hair, hair, hair}, []string{"a bound of 1e-76 m at the right", "a finite one above "}},
		{"far right, a hair at the left", Bounds{hair, far, 1 * um, 1 * um}, []string{"a bound of 1e-76 m at the left"}},
		{"hair at the left", Bounds{hair, 1 * um, 1 * um, 1 * um}, []string{"a bound of 1e-76 m at the left", "a finite one above "}},
		{"hair at the right", Bounds{1 * um, hair, 1 * um, 1 * um}, []string{"a bound of 1e-76 m at the right"}},
		{"hair at the bottom", Bounds{1 * um, 1 * um, hair, 1 * um}, []string{"a bound of 1e-76 m at the bottom"}},
		{"hair at the top", Bounds{1 * um, 1 * um, 1 * um, hair}, []string{"a bound of 1e-76 m at the top"}},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := o.Mesh(Options{Bounds: c.bounds})
			refused(t, err, c.messages...)
		})
	}
}

// TestMotionOverflows refuses layers so thin that one over their thickness is
// no float: the wall that runs on through two of them has no derivative.
func TestMotionOverflows(t *testing.T) {
	for _, c := range []struct {
		name    string
		h       float64
		refused bool
	}{{"thin", 1e-305, false}, {"below the normal floats", 1e-310, true}} {
		t.Run(c.name, func(t *testing.T) {
			s := newSketch().layer("oxide", -1, "")
			s.layer("core", c.h, "air", s.strip(0, 1, 90, 90)).layer("oxide", c.h, "").layer("nitride", c.h, "")
			s.layer("core", c.h, "air", s.strip(0, 1, 90, 90)).layer("air", -1, "")
			m, err := s.must(t).Mesh(Options{Bounds: Bounds{1, 1, c.h, c.h}})
			if c.refused {
				refused(t, err, "mesh: ", "lines that move without bound", "finite derivatives")
				return
			}
			if err != nil {
				t.Fatal(err)
			}
			moving(t, m)
		})
	}
}

// TestRatio holds that widths which are none give the worst ratio there is:
// of the webs of such a plan one is still taken, for the mesh to be refused.
func TestRatio(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	for _, c := range []struct {
		name       string
		a, b, want float64
	}{
		{"narrower at the top", 2, 1, 0.5},
		{"narrower at the bottom", 1, 2, 0.5},
		{"equal", 1e-9, 1e-9, 1},
		{"both shut", 0, 0, 0},
		{"one shut", 0, 1, 0},
		{"lines cross in between", -3, 1, 0},
		{"lines in the wrong order", -3, -2, 0},
		{"both infinite", inf, inf, 0},
		{"one infinite", 1, inf, 0},
		{"not a number", nan, 1, 0},
	} {
		t.Run(c.name, func(t *testing.T) {
			if got := ratio(c.a, c.b); got != c.want { // exact: powers of two
				t.Errorf("%g, expected %g", got, c.want)
			}
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
