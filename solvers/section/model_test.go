package section

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"betaloom/schema"
	"betaloom/solvers"
	"betaloom/solvers/resolve"
)

const (
	um  = 1e-6
	nm  = 1e-9
	deg = math.Pi / 180
)

// sketch is a section under construction: its numbers are the base
// parameters p0, p1, ...
type sketch struct {
	physics schema.Physics
	point   solvers.Q
}

func newSketch() *sketch {
	s := &sketch{point: solvers.Q{2 * math.Pi * schema.LightSpeed / (1.55 * um)}}
	s.physics.Parameters = []schema.Parameter{{Name: "wavelength", Kind: schema.Axis, Dimension: schema.Dimension{Length: 1}}}
	s.physics.Materials = map[string]schema.Material{"metal": {Conductivity: &schema.Number{Value: 1e7}}}
	for i, name := range []string{"oxide", "core", "nitride", "air"} {
		s.physics.Materials[name] = schema.Material{Index: &schema.Number{Value: []float64{1.4444, 3.4777, 2, 1}[i]}}
	}
	s.physics.Section.Layers = &schema.Layers{}
	return s
}

// number is a new parameter with that value.
func (s *sketch) number(v float64, dimension schema.Dimension) schema.Number {
	name := fmt.Sprintf("p%d", len(s.point)-1)
	s.physics.Parameters = append(s.physics.Parameters, schema.Parameter{Name: name, Kind: schema.Axis, Dimension: dimension})
	s.point = append(s.point, v)
	return schema.Number{Parameter: name}
}

func (s *sketch) length(v float64) schema.Number { return s.number(v, schema.Dimension{Length: 1}) }

// layer adds a layer; a thickness of -1 is a half-space.
func (s *sketch) layer(material string, thickness float64, fill string, strips ...schema.Strip) *sketch {
	l := schema.Layer{Material: material, Fill: fill, Strips: strips}
	if thickness != -1 {
		t := s.length(thickness)
		l.Thickness = &t
	}
	s.physics.Section.Layers.Layers = append(s.physics.Section.Layers.Layers, l)
	return s
}

// strip has its centre, width and two angles as parameters.
func (s *sketch) strip(centre, width, left, right float64) schema.Strip {
	a, b := s.number(left*deg, schema.Dimension{Angle: 1}), s.number(right*deg, schema.Dimension{Angle: 1})
	return schema.Strip{Centre: s.length(centre), Width: s.length(width), SidewallLeft: &a, SidewallRight: &b}
}

func (s *sketch) outline() (*Outline, error) {
	r, err := resolve.New(&s.physics)
	if err != nil {
		return nil, err
	}
	if err := r.Set(s.point); err != nil {
		return nil, err
	}
	return New(&s.physics, r)
}

func (s *sketch) must(t *testing.T) *Outline {
	t.Helper()
	o, err := s.outline()
	if err != nil {
		t.Fatal(err)
	}
	return o
}

func mesh(t *testing.T, o *Outline, options Options) *Mesh {
	t.Helper()
	m, err := o.Mesh(options)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// options for a section of about a micrometre.
func options() Options {
	return Options{Bounds: Bounds{1 * um, 1.2 * um, 0.9 * um, 1.1 * um}, CornerLayers: 3, Size: 0.25 * um}
}

// value of a number of the section, past the resolver.
func (s *sketch) value(n schema.Number) float64 {
	if n.Parameter == "" {
		return n.Value
	}
	var i int
	fmt.Sscanf(n.Parameter, "p%d", &i)
	return s.point[1+i]
}

// material says what stands at a point, straight from the section's numbers.
func (s *sketch) material(x, y float64) string {
	layers := s.physics.Section.Layers.Layers
	bottom := 0.0
	for i, l := range layers {
		if l.Thickness == nil {
			if i == 0 && y < 0 || i > 0 {
				return l.Material
			}
			continue
		}
		h := s.value(*l.Thickness)
		if y >= bottom+h {
			bottom += h
			continue
		}
		if len(l.Strips) == 0 {
			return l.Material
		}
		for _, strip := range l.Strips {
			if s.inside(strip, x, y-bottom, h) {
				if strip.Material != "" {
					return strip.Material
				}
				return l.Material
			}
		}
		return l.Fill
	}
	return ""
}

// inside is the strip's definition: at a depth d below the place of its
// width each wall is d/tan(angle) further out.
func (s *sketch) inside(strip schema.Strip, x, y, h float64) bool {
	depth := map[string]float64{"": h - y, "top": h - y, "middle": h/2 - y, "foot": -y}[strip.WidthAt]
	out := func(angle *schema.Number) float64 {
		if angle == nil {
			return 0
		}
		return depth / math.Tan(s.value(*angle))
	}
	c, w := s.value(strip.Centre), s.value(strip.Width)
	return x > c-w/2-out(strip.SidewallLeft) && x < c+w/2+out(strip.SidewallRight)
}

// random makes a valid section: 1 to 5 layers between half-spaces, 0 to 3
// strips in each, walls at 60 to 90 deg, everything at least 10 nm apart.
func random(r *rand.Rand) *sketch {
	s := newSketch()
	materials := []string{"oxide", "core", "nitride", "air"}
	pick := func() string { return materials[r.IntN(len(materials))] }
	s.layer(pick(), -1, "")
	for range 1 + r.IntN(5) {
		h := 20*nm + 480*nm*r.Float64()*r.Float64()
		var strips []schema.Strip
		foot := -2*um + 1.5*um*r.Float64()
		for range r.IntN(4) {
			strip, right := s.randomStrip(r, foot, h)
			strips = append(strips, strip)
			foot = right + 10*nm + 500*nm*r.Float64()
		}
		if len(strips) == 0 {
			s.layer(pick(), h, "")
			continue
		}
		strips[0].Material = pick()
		s.layer(pick(), h, pick(), strips...)
	}
	return s.layer(pick(), -1, "")
}

// randomStrip starts at its left foot and gives its right foot.
func (s *sketch) randomStrip(r *rand.Rand, foot, h float64) (schema.Strip, float64) {
	angle := func() float64 {
		if r.IntN(2) == 0 {
			return 90
		}
		return 60 + 30*r.Float64()
	}
	a, b := angle(), angle()
	inLeft, inRight := h/math.Tan(a*deg), h/math.Tan(b*deg)
	top := 10*nm + 600*nm*r.Float64()
	right := foot + inLeft + top + inRight
	at := []string{"", "top", "middle", "foot"}[r.IntN(4)]
	up := map[string]float64{"": 0, "top": 0, "middle": 0.5, "foot": 1}[at]
	lo, hi := foot+inLeft*(1-up), right-inRight*(1-up)
	strip := s.strip((lo+hi)/2, hi-lo, a, b)
	strip.WidthAt = at
	return strip, right
}
