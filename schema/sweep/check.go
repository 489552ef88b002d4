package sweep

import (
	"maps"
	"slices"

	"betaloom/schema"
	"betaloom/schema/expr"
	"betaloom/schema/quantity"
)

// checker checks what only the whole file can tell and builds the Sweep.
type checker struct {
	*reader
	raw *content

	physics    schema.Physics
	parameters map[string]*resolved
	order      []string // names of parameters, in the order of physics
}

// resolved is a parameter and what is known of it before anything is solved.
type resolved struct {
	named[parameter]
	dim    schema.Dimension
	column bool    // of the points file
	broken bool    // its dimension is not known, because of a problem already reported
	known  bool    // it has one value over the whole sweep
	value  float64 // where known
	expr   *expr.Expr
}

func newChecker(r *reader, raw *content) *checker {
	return &checker{reader: r, raw: raw, parameters: map[string]*resolved{}}
}

// run makes every check; the Sweep is whole only where nothing was reported.
func (c *checker) run() *Sweep {
	c.build()
	c.checkNames()
	c.checkParameters()
	c.checkDerived()
	c.checkClock()
	c.describe()
	c.checkNumbers()
	c.checkMaterials()
	c.checkSection()
	c.checkKeep()
	c.checkColumns()
	c.checkWindows()
	s := &Sweep{Name: c.raw.name, Physics: c.physics, Windows: c.raw.windows}
	if c.checkGrid() && len(c.problems) == 0 {
		c.expand(s)
	}
	return s
}

// build puts the physics together; the values of parameters follow later.
func (c *checker) build() {
	c.physics = schema.Physics{
		Format: schema.FormatPhysics, Materials: map[string]schema.Material{},
		Section: c.raw.section, Equation: c.raw.equation, Modes: c.raw.modes,
		Accuracy: c.raw.accuracy, Keep: c.raw.keep.s,
	}
	if c.physics.Equation == "" {
		c.physics.Equation = "auto"
	}
	if c.physics.Modes == 0 {
		c.physics.Modes = DefaultModes
	}
	for _, m := range c.raw.materials {
		c.physics.Materials[m.name] = m.v
	}
}

// describe adds the parameters to the physics.
func (c *checker) describe() {
	for _, name := range c.order {
		q := c.parameters[name]
		p := schema.Parameter{Name: name, Kind: q.v.kind, Dimension: q.dim}
		switch p.Kind {
		case schema.Fixed:
			p.Value = q.v.value.v
		case schema.Derived:
			p.Expr = q.v.expr.s
		}
		c.physics.Parameters = append(c.physics.Parameters, p)
	}
}

// checkNumbers checks the parameters that stand for numbers.
func (c *checker) checkNumbers() {
	for _, n := range c.numbers {
		p := c.parameters[n.name]
		switch {
		case p == nil && !c.whole():
		case p == nil:
			c.fault(n.path, "the unknown name "+quote(n.name), n.String()+", or the name of a parameter"+c.hint(n.name, c.order))
		case p.broken:
		case p.dim != n.dim:
			c.fault(n.path, "the parameter "+n.name+", "+quantity.Describe(p.dim), n.String()+", or a parameter of that kind")
		case p.known && !n.in.holds(p.value):
			c.fault(n.path, "the parameter "+n.name+" = "+quantity.Format(p.value, p.dim), n.String())
		case p.v.kind == schema.Axis && !p.column && c.raw.keep.s == "":
			c.checkEnds(n, &p.v)
		}
	}
}

// checkEnds checks an axis that stands for a number. keep may exclude what is
// out of range, so it is called without one.
func (c *checker) checkEnds(n numberUse, axis *parameter) {
	lo, hi := axis.ends()
	for _, v := range []float64{lo, hi} {
		if !n.in.holds(v) {
			c.fault(n.path, "the axis "+n.name+", which reaches "+quantity.Format(v, n.dim), n.String())
			return
		}
	}
}

// checkMaterials checks the names of materials where they are used.
func (c *checker) checkMaterials() {
	names := slices.Sorted(maps.Keys(c.physics.Materials))
	for _, u := range c.materials {
		m, ok := c.physics.Materials[u.name]
		switch {
		case !ok && !c.has(join("materials", u.name)) && (len(names) > 0 || !c.has("materials")):
			c.fault(u.path, "the unknown material "+quote(u.name), "the name of "+string(u.role)+" under materials"+c.hint(u.name, names))
		case !ok:
		case u.role == dielectric && m.Metal():
			c.fault(u.path, "the metal "+u.name, "a dielectric: a metal stands as a strip, a wall or a ground")
		case u.role == metal && !m.Metal():
			c.fault(u.path, u.name+", a dielectric", "a metal: a material with a conductivity")
		}
	}
}

// value is the value of a number that is the same over the whole sweep.
func (c *checker) value(path string, n *schema.Number) (float64, bool) {
	if n == nil || !c.has(path) {
		return 0, false
	}
	if n.Parameter == "" {
		return n.Value, n.Value == n.Value
	}
	p := c.parameters[n.Parameter]
	if p == nil || p.broken || !p.known {
		return 0, false
	}
	return p.value, true
}
