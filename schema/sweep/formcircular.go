package sweep

import (
	"betaloom/schema"
	"betaloom/schema/expr"
)

func circularForm() form[*schema.Circular] {
	type c = schema.Circular
	return optional(object[c]{
		what: "a round guide", doc: "A round guide of rings. Every material has the same permittivity along x and y.",
		keys: []key[c]{
			must(keyOf("layers", "inside out; the last is open and has no radius, unless there is a wall",
				list[schema.Ring]{ringForm(), 1, maxLayers, "layers, inside out"}, func(c *c, v []schema.Ring) { c.Layers = v })),
			must(keyOf("orders", "the lowest and the highest azimuthal order",
				pair(wholeNumber{0, MaxModes, "an azimuthal order"}, "the lowest and the highest azimuthal order"), func(c *c, v [2]int) { c.Orders = v })),
			keyOf("wall", "a metal around the last layer", materialName{metal}, func(c *c, v string) { c.Wall = v }),
		},
	})
}

func ringForm() form[schema.Ring] {
	type r = schema.Ring
	return object[r]{
		what: "a layer of a round guide", doc: "One layer of a round guide: of a material, or with an index that varies along the radius.",
		keys: []key[r]{
			keyOf("name", "gives the column confinement_<name>", columnName("a layer"), func(r *r, v string) { r.Name = v }),
			keyOf("material", "its material", materialName{dielectric}, func(r *r, v string) { r.Material = v }),
			keyOf("radius", "its outer radius", number(lengthOf(positive)), func(r *r, v *schema.Number) { r.Radius = v }),
			keyOf("profile", "an index that varies along the radius", profileForm(), func(r *r, v string) { r.Profile = v }),
		},
		one: []string{"material", "profile"},
	}
}

func profileForm() form[string] {
	return object[string]{
		what: "a profile", doc: "An index that varies along the radius.",
		keys: []key[string]{
			must(keyOf("index", "an expression of r (from the centre), radius (the layer's) and parameters",
				profileIndex{}, func(s *string, v string) { *s = v })),
		},
	}
}

// profileIndex is a form for the expression of a profile. Where it stands is
// kept for the check of the whole.
type profileIndex struct{}

func (f profileIndex) text() plainText {
	return plainText{`an expression such as "1.45 - 0.01*(r/radius)^2"`, nil, "", expr.MaxSource}
}

func (f profileIndex) read(r *reader, at place) (string, bool) {
	t, ok := f.text().read(r, at)
	if ok {
		r.profiles[at.path] = t
	}
	return t.s, ok
}

func (f profileIndex) expects() string    { return f.text().expects() }
func (f profileIndex) describe() fragment { return f.text().describe() }

func pipeForm() form[*schema.Pipe] {
	type p = schema.Pipe
	shapes := []string{"rectangle", "circle", "coax", "ellipse", "polygon"}
	return optional(object[p]{
		what: "a pipe", doc: "A metal tube: one shape, its fill and its wall. x runs along width.",
		keys: []key[p]{
			keyOf("rectangle", "a rectangle: width along x, height along y", rectangleForm("a rectangle"), func(p *p, v *schema.Rectangle) { p.Rectangle = v }),
			keyOf("circle", "a round tube", circleForm(), func(p *p, v *schema.Circle) { p.Circle = v }),
			keyOf("coax", "a round tube with a round conductor in it", coaxForm(), func(p *p, v *schema.Coax) { p.Coax = v }),
			keyOf("ellipse", "an ellipse: width along x, height along y", rectangleForm("an ellipse"), func(p *p, v *schema.Rectangle) { p.Ellipse = v }),
			keyOf("polygon", "the corners [x, y] in order", list[[2]schema.Number]{
				pair(numeric{lengthOf(anyValue)}, "x and y of a corner"), 3, MaxPolygon, "corners [x, y]"}, func(p *p, v [][2]schema.Number) { p.Polygon = v }),
			must(keyOf("fill", "a material, or layers along x or y", fillForm(), func(p *p, v fill) { p.Fill, p.FillAlong, p.FillLayers = v.material, v.along, v.layers })),
			keyOf("wall", "a metal, for loss (a perfect conductor where absent)", materialName{metal}, func(p *p, v string) { p.Wall = v }),
			keyOf("evanescent", "how many modes below cut-off to add (0 where absent)", wholeNumber{0, MaxModes, "a number of modes"}, func(p *p, v int) { p.Evanescent = v }),
		},
		one: shapes,
	})
}
