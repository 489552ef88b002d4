package sweep

import (
	"betaloom/schema"
	"betaloom/schema/expr"
)

const sweepRule = "small letters, digits and - (at most 64, - not at an end): it names a folder"

// sweepForm is the form of the whole file.
func sweepForm() form[content] {
	type c = content
	return object[c]{
		what: "a sweep file", doc: "A guide's cross-section, its materials, a box of parameters, and what to report.",
		keys: []key[c]{
			must(keyOf("format", "the version of this file's format, 1", wholeNumber{1, 1, "the format"}, func(*c, int) {})),
			must(keyOf("sweep", "the sweep's name", bare(plainText{"the sweep's name", sweepPattern, sweepRule, maxName}), func(c *c, v string) { c.name = v })),
			must(keyOf("materials", "materials by name", names[schema.Material]{materialForm(), "materials to materials", materialPattern, materialRule},
				func(c *c, v []named[schema.Material]) { c.materials = v })),
			keyOf("parameters", "parameters by name: a value, an axis or an expression. Axis order is file order; the last varies fastest",
				names[parameter]{parameterForm(), "parameters to values, axes or expressions", parameterPattern, parameterRule},
				func(c *c, v []named[parameter]) { c.parameters = v }),
			keyOf("keep", "grid points where this fails are excluded, and counted", plainText{`a condition such as "width > 2 * height"`, nil, "", expr.MaxSource}, func(c *c, v text) { c.keep = v }),
			keyOf("points", "points from a file instead of axes", pointsForm(), func(c *c, v points) { c.points = v }),
			must(keyOf("section", "the guide's cross-section", sectionForm(), func(c *c, v schema.Section) { c.section = v })),
			keyOf("equation", "auto where absent; semi-vectorial is an approximation, flagged in every row", choice{"an equation", []string{"auto", "full-vector", "semi-vectorial"}}, func(c *c, v string) { c.equation = v }),
			keyOf("modes", "the most to report at a point, from the highest neff down (4 where absent)", wholeNumber{1, MaxModes, "a number of modes"}, func(c *c, v int) { c.modes = v }),
			keyOf("accuracy", "absolute bounds to reach", accuracyForm(), func(c *c, v schema.Accuracy) { c.accuracy = v }),
			keyOf("windows", "the questions the sweep is run for", list[Window]{windowForm(), 1, maxWindows, "windows"}, func(c *c, v []Window) { c.windows = v }),
		},
	}
}

func accuracyForm() form[schema.Accuracy] {
	type a = schema.Accuracy
	bound := func(example string) form[float64] { return plainNumber{pureOf(positive, example)} }
	return object[a]{
		what: "an accuracy", doc: "Absolute bounds; the program chooses mesh, order and basis to reach them. What is absent is not asked for.",
		keys: []key[a]{
			keyOf("neff", "of the effective index", bound("1e-6"), func(a *a, v float64) { a.Neff = v }),
			keyOf("ng", "of the group index", bound("1e-5"), func(a *a, v float64) { a.Ng = v }),
			keyOf("gvd_ps2_per_km", "of the group-velocity dispersion, in ps^2/km", bound("0.1"), func(a *a, v float64) { a.GVDPs2PerKm = v }),
			keyOf("beta3_ps3_per_km", "of the third derivative of beta, in ps^3/km", bound("0.01"), func(a *a, v float64) { a.Beta3Ps3PerKm = v }),
		},
	}
}

func pointsForm() form[points] {
	file := pointsFile{}
	return object[points]{
		what: "points", doc: "A CSV file with one row a point and one column a parameter, its unit in brackets: width [um].",
		keys: []key[points]{
			must(keyOf("file", "the CSV file, relative to this one", file, func(p *points, v points) { *p = v })),
		},
	}
}
