package sweep

import (
	"fmt"
	"reflect"

	"betaloom/schema"
	"betaloom/schema/expr"
	"betaloom/schema/quantity"
)

const ringsPath = "section.circular.layers"

// checkCircular checks a round guide: radii that grow, an open last layer
// unless it is walled, and materials that are the same along x and y.
func (c *checker) checkCircular(g *schema.Circular) {
	walled := c.has("section.circular.wall")
	n := len(g.Layers)
	if n == 1 && !walled {
		c.fault(ringsPath, "1 layer", "at least 2 where there is no wall: the last is open")
	}
	if g.Orders[0] > g.Orders[1] {
		c.fault("section.circular.orders", fmt.Sprintf("orders from %d to %d", g.Orders[0], g.Orders[1]), "the lowest first")
	}
	inside := 0.0
	for i := range g.Layers {
		path, ring := index(ringsPath, i), &g.Layers[i]
		has := c.has(path + ".radius")
		switch last := i == n-1; {
		case last && !walled && has && n > 1:
			c.fault(path+".radius", "a radius of the last layer", "none: it is open where there is no wall")
		case !(last && !walled) && !has:
			c.fault(path, "no radius", "a radius: only the last layer is open, and not within a wall")
		}
		if r, ok := c.value(path+".radius", ring.Radius); ok {
			if r <= inside {
				c.fault(path+".radius", "the radius "+quantity.Format(r, length)+", not above the one inside it", "radii that grow, inside out")
			}
			inside = max(inside, r)
		}
		c.checkRound(path, ring)
		c.checkProfile(path)
	}
}

// checkRound checks that a ring's material is the same along x and y.
func (c *checker) checkRound(path string, ring *schema.Ring) {
	m, ok := c.physics.Materials[ring.Material]
	if ok && m.Axes != nil && !reflect.DeepEqual(m.Axes.X, m.Axes.Y) {
		c.fault(path+".material", ring.Material+", which differs along x and y", "in a round guide the same material along x and y")
	}
}

// checkProfile checks an expression of r, radius and parameters.
func (c *checker) checkProfile(path string) {
	t, ok := c.profiles[path+".profile.index"]
	if !ok {
		return
	}
	if !c.has(path + ".radius") {
		c.fault(path+".profile", "a profile in an open layer", "a profile in a layer with a radius")
	}
	e, err := expr.Parse(t.s)
	if err != nil {
		c.faultExpr(t, err)
		return
	}
	if c.profileNames(t, e) {
		c.checkPure(t, e)
	}
}

// profileNames checks the names in a profile.
func (c *checker) profileNames(t text, e *expr.Expr) bool {
	ok := c.known(t, e.Names(), "r", "radius")
	for _, n := range e.Names() {
		p := c.parameters[n]
		switch {
		case p == nil:
		case n == "r" || n == "radius":
			c.faultExpr(t, &expr.Error{
				Offset: wordIn(t.s, n), Found: n + ", which is both a name of the layer's and a parameter", Expected: "another name for the parameter",
			})
			ok = false
		case p.broken:
			ok = false
		}
	}
	return ok
}

func (c *checker) checkPure(t text, e *expr.Expr) {
	d, err := e.Dimension(func(name string) (schema.Dimension, bool) {
		if name == "r" || name == "radius" {
			return length, true
		}
		return c.dimension(name)
	})
	if err == nil && d != pure {
		err = &expr.Error{Found: quantity.Describe(d), Expected: "an index, a pure number"}
	}
	if err != nil {
		c.faultExpr(t, err)
	}
}

// checkKeep checks the condition that points must meet.
func (c *checker) checkKeep() {
	t := c.raw.keep
	if t.s == "" {
		return
	}
	e, err := expr.Parse(t.s)
	if err != nil {
		c.faultExpr(t, err)
		return
	}
	if !c.known(t, e.Names()) {
		return
	}
	for _, n := range e.Names() {
		if c.parameters[n].broken {
			return
		}
	}
	if err := e.Condition(c.dimension); err != nil {
		c.faultExpr(t, err)
	}
}
