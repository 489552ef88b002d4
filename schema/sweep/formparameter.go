package sweep

import (
	"go.yaml.in/yaml/v3"

	"betaloom/schema"
	"betaloom/schema/expr"
)

// parameter is a parameter as written. Which of its fields are set follows
// its kind.
type parameter struct {
	kind     schema.Kind
	value    literal // fixed
	values   []literal
	from, to literal
	step     literal
	count    int // 0: step is given
	expr     text
}

func parameterForm() form[parameter] {
	fixed := mapped[literal, parameter]{anyQuantity{}, func(l literal) parameter {
		return parameter{kind: schema.Fixed, value: l}
	}}
	return either[parameter]{fixed, yaml.MappingNode, variedForm()}
}

// variedForm is the form of a parameter that is an axis or derived.
func variedForm() form[parameter] {
	type p = parameter
	o := object[p]{
		what: "an axis or an expression",
		doc:  "An axis of the sweep (from, to and count or step; or values), or a parameter derived from others (expr).",
		keys: []key[p]{
			keyOf("from", "the axis' first value", anyNumber(), func(p *p, v literal) { p.from = v }),
			keyOf("to", "the axis' last value", anyNumber(), func(p *p, v literal) { p.to = v }),
			keyOf("count", "how many values, ends included", wholeNumber{1, MaxAxis, "a count"}, func(p *p, v int) { p.count = v }),
			keyOf("step", "from one value to the next; the last value does not go beyond `to`", anyNumber(), func(p *p, v literal) { p.step = v }),
			keyOf("values", "the axis' values one by one", list[literal]{anyQuantity{}, 1, MaxAxis, "values"}, func(p *p, v []literal) { p.values = v }),
			keyOf("expr", `an expression of other parameters, such as "0.25 * height + 20 nm"`, expression(), func(p *p, v text) { p.expr = v }),
		},
		one: []string{"from", "values", "expr"},
		needs: map[string][]string{
			"from": {"to"}, "to": {"from"}, "count": {"from"}, "step": {"from"},
		},
	}
	return variedParameter{o}
}

func anyNumber() form[literal] { return anyQuantity{} }

// expression is a form for an expression. It is parsed when the whole file
// is checked.
func expression() form[text] {
	return plainText{`an expression such as "0.25 * height + 20 nm"`, nil, "", expr.MaxSource}
}

// variedParameter adds to the object what its declaration cannot say: an
// axis with ends has either a count or a step.
type variedParameter struct{ object[parameter] }

func (f variedParameter) read(r *reader, at place) (parameter, bool) {
	p, ok := f.object.read(r, at)
	p.kind = schema.Axis
	has := func(name string) bool { return r.has(join(at.path, name)) }
	if has("expr") {
		p.kind = schema.Derived
	}
	if has("from") && has("to") && has("count") == has("step") {
		found := "from and to with neither count nor step"
		if has("count") {
			found = "count and step together"
		}
		r.fault(at.path, found, "beside from and to exactly one of count and step")
		ok = false
	}
	return p, ok
}

func (f variedParameter) describe() fragment {
	d := f.object.describe()
	d["dependentSchemas"].(fragment)["from"] = fragment{
		"required": []string{"to"}, "oneOf": require([]string{"count", "step"}),
	}
	return d
}
