package sweep

import (
	"go.yaml.in/yaml/v3"

	"betaloom/schema"
)

func rectangleForm(what string) form[*schema.Rectangle] {
	type p = schema.Rectangle
	size := numeric{lengthOf(positive)}
	return optional(object[p]{
		what: what, doc: "A width along x and a height along y.",
		keys: []key[p]{
			must(keyOf("width", "along x", size, func(p *p, v schema.Number) { p.Width = v })),
			must(keyOf("height", "along y", size, func(p *p, v schema.Number) { p.Height = v })),
		},
	})
}

func circleForm() form[*schema.Circle] {
	type p = schema.Circle
	return optional(object[p]{
		what: "a circle", doc: "A round tube.",
		keys: []key[p]{
			must(keyOf("diameter", "inside the tube", numeric{lengthOf(positive)}, func(p *p, v schema.Number) { p.Diameter = v })),
		},
	})
}

func coaxForm() form[*schema.Coax] {
	type p = schema.Coax
	size := numeric{lengthOf(positive)}
	return optional(object[p]{
		what: "a coax", doc: "A round tube with a round conductor in it.",
		keys: []key[p]{
			must(keyOf("inner", "diameter of the inner conductor", size, func(p *p, v schema.Number) { p.Inner = v })),
			must(keyOf("outer", "diameter inside the tube", size, func(p *p, v schema.Number) { p.Outer = v })),
			keyOf("offset", "of the inner conductor along x (0 where absent)", number(lengthOf(anyValue)), func(p *p, v *schema.Number) { p.Offset = v }),
		},
	})
}

// fill is what a pipe holds: a material, or layers along an axis.
type fill struct {
	material, along string
	layers          []schema.Layer
}

func fillForm() form[fill] {
	one := mapped[string, fill]{materialName{dielectric}, func(s string) fill { return fill{material: s} }}
	layered := object[fill]{
		what: "a layered fill", doc: "Layers whose thicknesses add up to the pipe's width (along x) or height (along y).",
		keys: []key[fill]{
			must(keyOf("along", "the axis along which they are stacked", choice{"an axis", []string{"x", "y"}}, func(f *fill, v string) { f.along = v })),
			must(keyOf("layers", "in the direction of the axis", list[schema.Layer]{fillLayerForm(), 1, maxLayers, "layers"}, func(f *fill, v []schema.Layer) { f.layers = v })),
		},
	}
	return either[fill]{one, yaml.MappingNode, layered}
}

func fillLayerForm() form[schema.Layer] {
	type l = schema.Layer
	return object[l]{
		what: "a layer of a fill", doc: "One layer of a fill.",
		keys: []key[l]{
			keyOf("name", "gives the column confinement_<name>", columnName("a layer"), func(l *l, v string) { l.Name = v }),
			must(keyOf("material", "its material", materialName{dielectric}, func(l *l, v string) { l.Material = v })),
			must(keyOf("thickness", "along the axis", number(lengthOf(notNegative)), func(l *l, v *schema.Number) { l.Thickness = v })),
		},
	}
}
