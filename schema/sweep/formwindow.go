package sweep

import "regexp"

func windowForm() form[Window] {
	type w = Window
	return object[w]{
		what: "a window", doc: "A question that the sweep is run for: which designs meet every requirement, and how often under their tolerance.",
		keys: []key[w]{
			must(keyOf("name", "its name", bare(plainText{"the name of a window", sweepPattern, sweepRule, maxName}), func(w *w, v string) { w.Name = v })),
			keyOf("family", "the family it is about, such as TE00 (any where absent)", bare(plainText{"the name of a family", familyPattern, "such as TE0, TE00, HE11 or TEM", maxName}), func(w *w, v string) { w.Family = v }),
			must(keyOf("require", "what a design must meet, all of it", list[Requirement]{requirementForm(false), 1, maxRequire, "requirements"}, func(w *w, v []Requirement) { w.Require = v })),
			keyOf("tolerance", "how far parameters stray", toleranceForm{}, func(w *w, v tolerance) { w.Tolerance, w.Correlate = v.each, v.pairs }),
		},
	}
}

// familyPattern is loose: a followed mode's name may end in what tells it
// from another.
var familyPattern = regexp.MustCompile(`^(quasi-)?(TEM|TE|TM|LSE|LSM|HE|EH)[A-Za-z0-9,+_-]{0,32}$`)

// requirementForm is a requirement, which may be any: [...] where it does not
// stand under one itself.
func requirementForm(inside bool) form[Requirement] {
	type q = Requirement
	column := keyOf("column", "a numeric column of modes.parquet or points.parquet",
		bare(plainText{"the name of a column, such as gvd_ps2_per_km", nil, "", maxColumn}), func(q *q, v string) { q.Column = v })
	o := object[q]{
		what: "a requirement", doc: "A bound on a column, in the column's unit.",
		keys: []key[q]{
			column,
			keyOf("between", "the least and the greatest value", pair(plainNumber{pureOf(anyValue, "-20")}, "the least and the greatest value"), func(q *q, v [2]float64) { q.AtLeast, q.AtMost = &v[0], &v[1] }),
			keyOf("at_least", "the least value", plainNumber{pureOf(anyValue, "0.5")}, func(q *q, v float64) { q.AtLeast = &v }),
			keyOf("at_most", "the greatest value", plainNumber{pureOf(anyValue, "6")}, func(q *q, v float64) { q.AtMost = &v }),
			keyOf("for", "over which stretch of an axis it must hold, such as {wavelength: [1.50 um, 1.60 um]}", stretchesForm{}, func(q *q, v []Stretch) { q.For = v }),
		},
		needs: map[string][]string{"between": {"column"}, "at_least": {"column"}, "at_most": {"column"}, "for": {"column"}, "column": {"between", "at_least", "at_most"}},
	}
	if inside {
		o.keys[0] = must(column)
		return bounded{o}
	}
	o.keys = append(o.keys, keyOf("any", "one of these suffices",
		list[Requirement]{requirementForm(true), 1, maxRequire, "requirements"}, func(q *q, v []Requirement) { q.Any = v }))
	o.one = []string{"column", "any"}
	return bounded{o}
}

// bounded adds that between stands alone.
type bounded struct{ object[Requirement] }

func (f bounded) read(r *reader, at place) (Requirement, bool) {
	q, ok := f.object.read(r, at)
	has := func(name string) bool { return r.has(join(at.path, name)) }
	if has("between") && (has("at_least") || has("at_most")) {
		r.fault(at.path, "between with at_least or at_most", "between alone, which gives both bounds")
		return q, false
	}
	if q.AtLeast != nil && q.AtMost != nil && *q.AtLeast > *q.AtMost {
		r.fault(at.path, "a least value above the greatest", "the least value first")
		return q, false
	}
	return q, ok
}
