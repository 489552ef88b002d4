package expr

import (
	"fmt"
	"math"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// Dimension checks a numeric expression and gives its dimension; of gives
// that of a parameter and whether there is one of this name. What is wrong is
// an *Error.
func (e *Expr) Dimension(of func(name string) (schema.Dimension, bool)) (schema.Dimension, error) {
	if e.IsCondition() {
		return schema.Dimension{}, e.wrong()
	}
	return e.check(of)
}

// Condition checks the dimensions inside a condition. What is wrong is an
// *Error.
func (e *Expr) Condition(of func(name string) (schema.Dimension, bool)) error {
	if !e.IsCondition() {
		return e.wrong()
	}
	_, err := e.check(of)
	return err
}

// check goes over the nodes from the leaves up and gives the root's dimension.
func (e *Expr) check(of func(string) (schema.Dimension, bool)) (schema.Dimension, error) {
	c := checker{nodes: e.nodes, d: make([]schema.Dimension, len(e.nodes))}
	for i := range e.nodes {
		n := &e.nodes[i]
		var err *Error
		if n.op == opName {
			c.d[i], err = parameter(n, e.names[n.index], of)
		} else {
			c.d[i], err = c.node(n)
		}
		if err != nil {
			return schema.Dimension{}, err
		}
	}
	return c.d[len(c.d)-1], nil
}

func parameter(n *node, name string, of func(string) (schema.Dimension, bool)) (schema.Dimension, *Error) {
	d, ok := of(name)
	if !ok {
		return d, &Error{Offset: n.start, Found: "the unknown name " + quantity.Excerpt(name), Expected: "the name of a parameter", Name: name}
	}
	return d, nil
}

// checker holds the dimensions found so far, one a node.
type checker struct {
	nodes []node
	d     []schema.Dimension
}

func (c *checker) node(n *node) (schema.Dimension, *Error) {
	switch n.op {
	case opConst:
		return n.d, nil
	case opNeg:
		return c.d[n.a], nil
	case opMul:
		return bounded(n, quantity.Product, c.d[n.a], c.d[n.b])
	case opDiv:
		return bounded(n, quantity.Quotient, c.d[n.a], c.d[n.b])
	case opPow, opPowConst:
		return c.power(n)
	case opCall:
		return c.call(n)
	case opAnd, opOr, opNot:
		return schema.Dimension{}, nil
	}
	if c.d[n.a] != c.d[n.b] {
		return schema.Dimension{}, c.differ(n)
	}
	return c.d[n.a], nil
}

// differ says that the two sides are of different dimensions.
func (c *checker) differ(n *node) *Error {
	where := ", as on the left of " + n.op.symbol()
	if n.op == opMin || n.op == opMax {
		where = ", as before it in " + n.op.symbol()
	}
	return &Error{Offset: c.nodes[n.b].start, Found: quantity.Describe(c.d[n.b]), Expected: quantity.Describe(c.d[n.a]) + where}
}

func (c *checker) call(n *node) (schema.Dimension, *Error) {
	f := &functions[n.index]
	d, expected := f.dimension(c.d[n.a])
	if expected != "" {
		return d, &Error{Offset: c.nodes[n.a].start, Found: quantity.Describe(c.d[n.a]) + " in " + f.name, Expected: expected}
	}
	return d, nil
}

func (c *checker) power(n *node) (schema.Dimension, *Error) {
	pure := schema.Dimension{}
	base, exponent := c.d[n.a], c.d[n.b]
	if exponent != pure {
		return pure, &Error{Offset: c.nodes[n.b].start, Found: quantity.Describe(exponent) + " as a power", Expected: "a pure number"}
	}
	if base == pure {
		return pure, nil
	}
	if n.op == opPow {
		return pure, &Error{Offset: c.nodes[n.a].start, Found: quantity.Describe(base) + " under a power that varies", Expected: "a pure number"}
	}
	p := c.nodes[n.b].value
	if p != math.Trunc(p) {
		return pure, &Error{Offset: c.nodes[n.b].start, Found: fmt.Sprintf("the power %v of %s", p, quantity.Describe(base)), Expected: "a whole number (sqrt and cbrt take roots)"}
	}
	whole := int(max(-1000, min(1000, p)))
	return bounded(n, func(a, _ schema.Dimension) (schema.Dimension, bool) { return quantity.Power(a, whole) }, base, pure)
}

// bounded combines two dimensions and refuses exponents that are too high.
func bounded(n *node, combine func(a, b schema.Dimension) (schema.Dimension, bool), a, b schema.Dimension) (schema.Dimension, *Error) {
	d, ok := combine(a, b)
	if !ok {
		return d, &Error{Offset: n.at, Found: "too high a power of a unit", Expected: fmt.Sprintf("exponents of at most %d", quantity.MaxExponent)}
	}
	return d, nil
}
