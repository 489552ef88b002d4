package sweep

import "go.yaml.in/yaml/v3"

// parameterQuantity is a quantity that belongs to a parameter and must be of
// its dimension.
type parameterQuantity struct {
	parameter  string
	q          literal
	difference bool // so it may not be written in degC
}

// stretchesForm is the form of for: the stretch of one or more axes.
type stretchesForm struct{}

func (f stretchesForm) read(r *reader, at place) (all []Stretch, ok bool) {
	if at.node.Kind != yaml.MappingNode || len(at.node.Content) == 0 {
		r.wrong(at, f.expects())
		return nil, false
	}
	ok = true
	for _, e := range r.entries(at) {
		ends, good := f.ends().read(r, e.at)
		ok = ok && good
		if good {
			for _, q := range ends {
				r.quantities = append(r.quantities, parameterQuantity{e.name, q, false})
			}
		}
		all = append(all, Stretch{e.name, ends[0].v, ends[1].v})
	}
	return all, ok
}

func (stretchesForm) ends() form[[2]literal] {
	return pair(anyQuantity{}, "the first and the last value")
}

func (stretchesForm) expects() string {
	return "a mapping from axes to a stretch, such as {wavelength: [1.50 um, 1.60 um]}"
}

func (f stretchesForm) describe() fragment {
	return fragment{
		"type": "object", "minProperties": 1,
		"propertyNames": parameterName(), "additionalProperties": f.ends().describe(),
	}
}

// tolerance is a window's tolerance.
type tolerance struct {
	each  []Tolerance
	pairs []Correlation
}

// spread is one parameter's tolerance.
type spread struct {
	shape Spread
	by    literal
}

func spreadForm() form[spread] {
	return object[spread]{
		what: "a tolerance", doc: "How far a parameter strays from its design value.",
		keys: []key[spread]{
			keyOf("normal", "the standard deviation", anyNumber(), func(s *spread, v literal) { s.shape, s.by = Normal, v }),
			keyOf("uniform", "the most on either side", anyNumber(), func(s *spread, v literal) { s.shape, s.by = Uniform, v }),
		},
		one: []string{string(Normal), string(Uniform)},
	}
}

// correlationKey is the one key of a tolerance that is no parameter.
const correlationKey = "correlation"

// toleranceForm is a mapping from parameters to tolerances, and the
// correlations among them.
type toleranceForm struct{}

func (f toleranceForm) read(r *reader, at place) (t tolerance, ok bool) {
	if at.node.Kind != yaml.MappingNode {
		r.wrong(at, f.expects())
		return t, false
	}
	ok = true
	for _, e := range r.entries(at) {
		good := false
		if e.name == correlationKey {
			t.pairs, good = f.pairs().read(r, e.at)
		} else {
			good = t.add(r, e)
		}
		ok = ok && good
	}
	return t, ok
}

// add reads one parameter's tolerance.
func (t *tolerance) add(r *reader, e entry) bool {
	s, ok := spreadForm().read(r, e.at)
	if ok && !(s.by.v > 0) {
		r.fault(s.by.path, quote(s.by.text), "a tolerance above zero")
		ok = false
	}
	if ok {
		r.quantities = append(r.quantities, parameterQuantity{e.name, s.by, true})
	}
	t.each = append(t.each, Tolerance{e.name, s.shape, s.by.v})
	return ok
}

func (toleranceForm) pairs() form[[]Correlation] {
	return list[Correlation]{correlationForm{}, 1, MaxTolerance * MaxTolerance, "correlations [parameter, parameter, coefficient]"}
}

func (toleranceForm) expects() string {
	return "a mapping from parameters to tolerances, such as {width: {normal: 10 nm}}"
}

func (f toleranceForm) describe() fragment {
	return fragment{
		"type": "object", "propertyNames": parameterName(), "additionalProperties": spreadForm().describe(),
		"properties": fragment{correlationKey: f.pairs().describe()},
	}
}

// correlationForm is [parameter, parameter, coefficient].
type correlationForm struct{}

func (f correlationForm) read(r *reader, at place) (c Correlation, ok bool) {
	if at.node.Kind != yaml.SequenceNode || len(at.node.Content) != 3 {
		r.wrong(at, f.expects())
		return c, false
	}
	items := make([]place, 3)
	for i, n := range at.node.Content {
		items[i] = place{n, index(at.path, i)}
		r.enter(items[i], nil)
	}
	a, okA := r.scalar(items[0], "the name of a parameter")
	b, okB := r.scalar(items[1], "the name of a parameter")
	rho, okRho := f.coefficient().read(r, items[2])
	return Correlation{a, b, rho}, okA && okB && okRho
}

func (correlationForm) coefficient() form[float64] {
	return plainNumber{pureOf(span{-1, 1, true, "between -1 and 1"}, "0.3")}
}

func (correlationForm) expects() string {
	return "[parameter, parameter, coefficient], such as [width, height, 0.3]"
}

func (f correlationForm) describe() fragment {
	return fragment{
		"type": "array", "minItems": 3, "maxItems": 3, "items": false,
		"prefixItems": []fragment{parameterName(), parameterName(), f.coefficient().describe()},
	}
}
