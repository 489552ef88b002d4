package sweep

import (
	"errors"
	"slices"
	"strings"

	"betaloom/schema"
	"betaloom/schema/expr"
)

// checkDerived parses the expressions, finds the order in which they can be
// evaluated, and with it their dimensions and, where nothing in them varies,
// their values.
func (c *checker) checkDerived() {
	waiting := map[string]int{} // how many derived parameters it still needs
	users := map[string][]string{}
	var ready []string
	for _, p := range c.raw.parameters {
		if q := c.parameters[p.name]; p.v.kind == schema.Derived && !q.broken {
			q.expr, q.broken = c.parse(p.v.expr)
		}
	}
	for _, name := range c.order {
		q := c.parameters[name]
		if q.expr == nil {
			continue
		}
		for _, n := range q.expr.Names() {
			if d := c.parameters[n]; d != nil && d.expr != nil {
				waiting[name]++
				users[n] = append(users[n], name)
			}
		}
		if waiting[name] == 0 {
			ready = append(ready, name)
		}
	}
	for len(ready) > 0 {
		name := ready[0]
		ready = ready[1:]
		c.derive(c.parameters[name])
		delete(waiting, name)
		for _, u := range users[name] {
			if waiting[u]--; waiting[u] == 0 {
				ready = append(ready, u)
			}
		}
	}
	c.checkCycles(waiting)
}

// parse parses an expression and checks the names in it.
func (c *checker) parse(t text) (e *expr.Expr, broken bool) {
	e, err := expr.Parse(t.s)
	if err != nil {
		c.faultExpr(t, err)
		return nil, true
	}
	return e, !c.known(t, e.Names())
}

// known reports the names in an expression that no parameter has.
func (c *checker) known(t text, names []string, more ...string) bool {
	all := true
	for _, n := range names {
		if c.parameters[n] != nil || slices.Contains(more, n) {
			continue
		}
		all = false
		if c.whole() {
			c.faultExpr(t, &expr.Error{
				Offset: wordIn(t.s, n), Found: "the unknown name " + n,
				Expected: "a parameter" + c.hint(n, c.order),
			})
		}
	}
	return all
}

// wordIn is where a name stands in an expression.
func wordIn(s, name string) int {
	inWord := func(i int) bool {
		return i >= 0 && i < len(s) && (s[i] == '_' || s[i] >= '0' && s[i] <= '9' || s[i]|0x20 >= 'a' && s[i]|0x20 <= 'z')
	}
	for at := 0; at < len(s); {
		i := strings.Index(s[at:], name)
		if i < 0 {
			break
		}
		if i += at; !inWord(i-1) && !inWord(i+len(name)) {
			return i
		}
		at = i + 1
	}
	return 0
}

// derive finds the dimension and the value of a derived parameter whose
// expression names parameters that are done.
func (c *checker) derive(q *resolved) {
	known := true
	for _, n := range q.expr.Names() {
		d := c.parameters[n]
		if d == nil || d.broken {
			q.broken = true
		} else {
			known = known && d.known
		}
	}
	if q.broken {
		return
	}
	dim, err := q.expr.Dimension(c.dimension)
	if err != nil {
		c.faultExpr(q.v.expr, err)
		q.broken = true
		return
	}
	q.dim = dim
	if !known {
		return
	}
	q.known = true
	if q.value, err = q.expr.Float(func(n string) float64 { return c.parameters[n].value }); err != nil {
		c.faultExpr(q.v.expr, err)
		q.broken = true
	}
}

func (c *checker) dimension(name string) (schema.Dimension, bool) {
	q := c.parameters[name]
	if q == nil {
		return schema.Dimension{}, false
	}
	return q.dim, true
}

// checkCycles reports the cycles among the derived parameters that could not
// be put in order, each once.
func (c *checker) checkCycles(waiting map[string]int) {
	trail := map[string]int{} // the walk that came by, from 1
	walk := 0
	for _, start := range c.order {
		walk++
		var path []string
		at := start
		for waiting[at] > 0 && trail[at] == 0 {
			trail[at] = walk
			path = append(path, at)
			at = c.blocker(at, waiting)
		}
		if len(path) > 0 && trail[at] == walk {
			c.faultCycle(path[slices.Index(path, at):])
		}
	}
	for name := range waiting {
		c.parameters[name].broken = true
	}
}

// blocker is the first parameter in an expression that could not be put in
// order.
func (c *checker) blocker(name string, waiting map[string]int) string {
	for _, n := range c.parameters[name].expr.Names() {
		if waiting[n] > 0 {
			return n
		}
	}
	return ""
}

func (c *checker) faultCycle(cycle []string) {
	const most = 10
	shown := cycle
	if len(shown) > most {
		shown = append(slices.Clone(shown[:most]), "...")
	}
	c.fault(c.parameters[cycle[0]].v.expr.path, "a cycle: "+strings.Join(shown, " needs ")+" needs "+cycle[0],
		"expressions that do not come back to the parameter itself")
}

// faultExpr reports an error in an expression, at its place in the text
// where the text stands in one piece.
func (c *checker) faultExpr(t text, err error) {
	var e *expr.Error
	if !errors.As(err, &e) {
		e = &expr.Error{Found: err.Error(), Expected: "an expression"}
	}
	line, column := c.inText(t, e.Offset)
	c.add(Diagnostic{c.file, line, column, t.path, e.Found, e.Expected})
}
