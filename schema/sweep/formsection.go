package sweep

import (
	"go.yaml.in/yaml/v3"

	"betaloom/schema"
)

// stack is what stands beside layers in a section.
type stack struct {
	layers []schema.Layer
	ground string
	walls  *schema.Number
}

// section is a section as its form reads it.
type section struct {
	stack    stack
	circular *schema.Circular
	pipe     *schema.Pipe
}

func sectionForm() form[schema.Section] {
	type s = section
	o := object[s]{
		what: "a section", doc: "The guide's cross-section: one of layers, circular and pipe. The program decides which equation it needs.",
		keys: []key[s]{
			keyOf("layers", "bottom to top; the first and last have no thickness: they are half-spaces, unless grounded",
				list[schema.Layer]{layerForm(), 1, maxLayers, "layers, bottom to top"}, func(s *s, v []schema.Layer) { s.stack.layers = v }),
			keyOf("ground", "a metal plane in place of a half-space", choice{"a side", []string{"bottom", "top", "both"}}, func(s *s, v string) { s.stack.ground = v }),
			keyOf("walls", "closes the sides", wallsForm(), func(s *s, v *schema.Number) { s.stack.walls = v }),
			keyOf("circular", "a round guide", circularForm(), func(s *s, v *schema.Circular) { s.circular = v }),
			keyOf("pipe", "a metal tube", pipeForm(), func(s *s, v *schema.Pipe) { s.pipe = v }),
		},
		one:   []string{"layers", "circular", "pipe"},
		needs: map[string][]string{"ground": {"layers"}, "walls": {"layers"}},
	}
	return mapped[section, schema.Section]{o, section.build}
}

func (s section) build() schema.Section {
	switch {
	case s.circular != nil:
		return schema.Section{Circular: s.circular}
	case s.pipe != nil:
		return schema.Section{Pipe: s.pipe}
	case s.stack.layers == nil:
		return schema.Section{}
	}
	g := s.stack.ground
	return schema.Section{Layers: &schema.Layers{
		Layers:       s.stack.layers,
		GroundBottom: g == "bottom" || g == "both",
		GroundTop:    g == "top" || g == "both",
		WallsWidth:   s.stack.walls,
	}}
}

func wallsForm() form[*schema.Number] {
	return object[*schema.Number]{
		what: "walls", doc: "Metal side walls.",
		keys: []key[*schema.Number]{
			must(keyOf("width", "how far apart the walls are", number(lengthOf(positive)), func(w **schema.Number, v *schema.Number) { *w = v })),
		},
	}
}

func layerForm() form[schema.Layer] {
	type l = schema.Layer
	return object[l]{
		what: "a layer", doc: "One layer of a stack.",
		keys: []key[l]{
			keyOf("name", "gives the column confinement_<name>", columnName("a layer"), func(l *l, v string) { l.Name = v }),
			must(keyOf("material", "its material; with strips that of the strips, unless they have their own", materialName{anyMaterial}, func(l *l, v string) { l.Material = v })),
			keyOf("thickness", "along y", number(lengthOf(notNegative)), func(l *l, v *schema.Number) { l.Thickness = v }),
			keyOf("fill", "the material beside the strips", materialName{dielectric}, func(l *l, v string) { l.Fill = v }),
			keyOf("strips", "the strips of this layer", list[schema.Strip]{stripForm(), 1, maxLayers, "strips"}, func(l *l, v []schema.Strip) { l.Strips = v }),
		},
		needs: map[string][]string{"fill": {"strips"}, "strips": {"fill"}},
	}
}

func stripForm() form[schema.Strip] {
	type s = schema.Strip
	return object[s]{
		what: "a strip", doc: "One strip of a layer, as high as the layer.",
		keys: []key[s]{
			keyOf("name", "gives the column confinement_<name>", columnName("a strip"), func(s *s, v string) { s.Name = v }),
			keyOf("material", "the layer's where absent", materialName{anyMaterial}, func(s *s, v string) { s.Material = v }),
			must(keyOf("centre", "where its middle is along x", numeric{lengthOf(anyValue)}, func(s *s, v schema.Number) { s.Centre = v })),
			must(keyOf("width", "along x", numeric{lengthOf(positive)}, func(s *s, v schema.Number) { s.Width = v })),
			keyOf("width_at", "where the width is meant (top where absent)", choice{"a height", []string{"top", "middle", "foot"}}, func(s *s, v string) { s.WidthAt = v }),
			keyOf("sidewall", "the walls' angle from the horizontal (90 deg where absent): one for both, or left and right", sidewallForm(), func(s *s, v sidewall) {
				s.SidewallLeft, s.SidewallRight = v.left, v.right
			}),
		},
	}
}

// sidewall is the angles of a strip's two walls.
type sidewall struct{ left, right *schema.Number }

func sidewallForm() form[sidewall] {
	angle := number(sidewallAngle())
	both := mapped[*schema.Number, sidewall]{angle, func(n *schema.Number) sidewall { return sidewall{n, n} }}
	each := object[sidewall]{
		what: "the angle of each wall", doc: "The angles of the left and the right wall.",
		keys: []key[sidewall]{
			must(keyOf("left", "the wall at lower x", angle, func(s *sidewall, v *schema.Number) { s.left = v })),
			must(keyOf("right", "the wall at higher x", angle, func(s *sidewall, v *schema.Number) { s.right = v })),
		},
	}
	return either[sidewall]{both, yaml.MappingNode, each}
}
