package sweep

import (
	"fmt"
	"slices"

	"betaloom/schema"
	"betaloom/schema/expr"
	"betaloom/schema/quantity"
)

// checkNames checks the names of parameters and collects these: those of
// the file first, then the columns of the points file.
func (c *checker) checkNames() {
	for _, p := range c.raw.parameters {
		c.checkName(p.name, func(found, expected string) { c.fault(p.path, found, expected) })
		c.parameters[p.name] = &resolved{named: p, broken: !p.ok}
		c.order = append(c.order, p.name)
		if c.raw.points.given && p.v.kind == schema.Axis {
			c.fault(p.path, "an axis", "a value or an expression: the points come from a file, which takes the place of axes")
		}
	}
	for i, q := range c.raw.points.columns {
		at := func(found, expected string) {
			d := c.raw.points.marks[i]
			d.Found, d.Expected = found, expected
			c.add(d)
		}
		if c.parameters[q.Name] != nil {
			if c.has("parameters." + q.Name) {
				at("the column "+q.Name, "a name that is not under parameters too")
			}
			continue
		}
		c.checkName(q.Name, at)
		c.parameters[q.Name] = &resolved{
			named: named[parameter]{name: q.Name, path: "points.file", v: parameter{kind: schema.Axis}},
			dim:   q.Dimension, column: true,
		}
		c.order = append(c.order, q.Name)
	}
}

// checkName refuses what an expression or a YAML file would read otherwise.
func (c *checker) checkName(name string, fault func(found, expected string)) {
	switch {
	case quantity.IsName(name):
		fault("the name "+name+", which is a unit", "another name")
	case slices.Contains(expr.Reserved(), name):
		fault("the name "+name+", which has a meaning in expressions", "another name")
	case name == "true" || name == "false" || name == "null" || name == correlationKey:
		fault("the name "+name+", which has a meaning of its own", "another name")
	}
}

// checkParameters finds the dimension of every parameter that is given by
// its values.
func (c *checker) checkParameters() {
	for _, p := range c.raw.parameters {
		q := c.parameters[p.name]
		if q.broken || p.v.kind == schema.Derived {
			continue
		}
		if p.v.kind == schema.Fixed {
			q.dim, q.known, q.value = p.v.value.dim, true, p.v.value.v
			continue
		}
		q.broken = !c.checkAxis(&p)
		q.dim = p.v.first().dim
	}
}

// first is an axis' first value.
func (p *parameter) first() literal {
	if p.kind == schema.Fixed {
		return p.value
	}
	if len(p.values) > 0 {
		return p.values[0]
	}
	return p.from
}

// checkAxis checks that an axis' values are of one dimension and differ.
func (c *checker) checkAxis(p *named[parameter]) bool {
	first := p.v.first()
	for _, l := range append([]literal{p.v.to, p.v.step}, p.v.values...) {
		if l.path != "" && l.dim != first.dim {
			c.fault(l.path, fmt.Sprintf("%s, %s, beside %s, %s", quote(l.text), quantity.Describe(l.dim), quote(first.text), quantity.Describe(first.dim)), "one kind of quantity along an axis")
			return false
		}
	}
	if len(p.v.values) > 0 {
		return c.checkValues(p.v.values)
	}
	return c.checkSteps(p)
}

func (c *checker) checkValues(values []literal) bool {
	seen := make(map[float64]literal, len(values))
	for _, l := range values {
		if before, ok := seen[l.v]; ok {
			c.fault(l.path, quote(l.text)+" again", "each value once; it stands as "+quote(before.text)+" already")
			return false
		}
		seen[l.v] = l
	}
	return true
}

// checkSteps checks an axis that is given by its ends.
func (c *checker) checkSteps(p *named[parameter]) bool {
	a := p.v
	n, ok := a.length()
	switch {
	case a.step.path != "" && a.step.absolute():
		c.fault(a.step.path, quote(a.step.text)+", an absolute temperature", "a difference in K")
	case a.step.path != "" && a.step.v == 0:
		c.fault(a.step.path, quote(a.step.text), "a step that is not zero")
	case a.step.path != "" && (a.to.v-a.from.v)/a.step.v < 0:
		c.fault(a.step.path, quote(a.step.text)+fmt.Sprintf(" from %s to %s", quote(a.from.text), quote(a.to.text)), "a step in the direction from `from` to `to`")
	case !ok:
		c.fault(p.path, fmt.Sprintf("an axis of more than %d values", MaxAxis), "at most that many")
	case n > 1 && a.from.v == a.to.v:
		c.fault(p.path, fmt.Sprintf("%d values from %s to %s", n, quote(a.from.text), quote(a.to.text)), "ends that differ, or one value")
	case n > 1 && a.tooFine(n):
		c.fault(p.path, fmt.Sprintf("%d values from %s to %s", n, quote(a.from.text), quote(a.to.text)), "values that differ in their first twelve digits")
	default:
		return true
	}
	return false
}

// checkClock checks the parameters with reserved names.
func (c *checker) checkClock() {
	wavelength, frequency := c.parameters[schema.Wavelength], c.parameters[schema.Frequency]
	switch {
	case wavelength == nil && frequency == nil && c.whole():
		c.fault("parameters", "neither wavelength nor frequency", "one of the two as a parameter")
	case wavelength != nil && frequency != nil:
		c.fault(frequency.path, "both wavelength and frequency", "one of the two")
	}
	c.checkReserved(wavelength, measure{length, "1.55 um", positive})
	c.checkReserved(frequency, measure{perTime, "193.1 THz", positive})
	c.checkReserved(c.parameters[schema.Temperature], measure{temperature, "293.15 K", notNegative})
}

// whole reports whether every parameter's name is known: false where the
// parameters or the points file could not be read.
func (c *checker) whole() bool {
	return (len(c.raw.parameters) > 0 || !c.has("parameters")) && !c.raw.points.broken
}

// checkReserved checks the dimension and the values of a parameter that the
// program gives a meaning.
func (c *checker) checkReserved(p *resolved, m measure) {
	if p == nil || p.broken {
		return
	}
	if p.dim != m.dim {
		c.fault(p.path, quantity.Describe(p.dim), "as "+p.name+" "+m.String())
		p.broken = true
		return
	}
	for _, l := range append([]literal{p.v.value, p.v.from, p.v.to}, p.v.values...) {
		if l.path != "" && !m.in.holds(l.v) {
			c.fault(l.path, quote(l.text), "as "+p.name+" "+m.String())
			return
		}
	}
	if p.v.kind == schema.Derived && p.known && !m.in.holds(p.value) {
		c.fault(p.path, p.name+" = "+quantity.Format(p.value, p.dim), "as "+p.name+" "+m.String())
	}
}
