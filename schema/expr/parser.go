package expr

import (
	"fmt"
	"math"
	"slices"

	"betaloom/schema/quantity"
)

// parser reads tokens by recursive descent, one method a level of
// precedence. Each method gives the index of the node it has read.
type parser struct {
	tokens []token
	pos    int
	depth  int
	nodes  []node
	names  []string
}

func (p *parser) peek() token { return p.tokens[p.pos] }

// accept takes the next token if it is one of these.
func (p *parser) accept(texts ...string) (token, bool) {
	t := p.peek()
	if !slices.ContainsFunc(texts, t.is) {
		return t, false
	}
	p.pos++
	return t, true
}

// whole reads the source to its end.
func (p *parser) whole() (int, error) {
	root, err := p.or()
	if err != nil {
		return 0, err
	}
	if t := p.peek(); t.kind != atEnd {
		return 0, &Error{Offset: t.offset, Found: t.found(), Expected: "an operator or the end"}
	}
	return root, nil
}

// enter counts nesting. Each call is paired with one of leave.
func (p *parser) enter() error {
	if p.depth++; p.depth > MaxDepth {
		return &Error{Offset: p.peek().offset, Found: "deeper nesting", Expected: fmt.Sprintf("at most %d levels", MaxDepth)}
	}
	return nil
}

func (p *parser) leave() { p.depth-- }

func (p *parser) or() (int, error) {
	if err := p.enter(); err != nil {
		return 0, err
	}
	defer p.leave()
	return p.chain(p.and, p.condition, "or")
}

func (p *parser) and() (int, error) {
	return p.chain(p.not, p.condition, "and")
}

func (p *parser) not() (int, error) {
	t, ok := p.accept("not")
	if !ok {
		return p.comparison()
	}
	if err := p.enter(); err != nil {
		return 0, err
	}
	defer p.leave()
	a, err := p.not()
	if err != nil {
		return 0, err
	}
	if err := p.condition(a); err != nil {
		return 0, err
	}
	return p.add(node{op: opNot, a: a, b: -1, start: t.offset, at: t.offset})
}

func (p *parser) comparison() (int, error) {
	a, err := p.sum()
	if err != nil {
		return 0, err
	}
	t, ok := p.accept("<", "<=", ">", ">=", "==", "!=")
	if !ok {
		return a, nil
	}
	b, err := p.sum()
	if err != nil {
		return 0, err
	}
	if next, more := p.accept("<", "<=", ">", ">=", "==", "!="); more {
		return 0, &Error{Offset: next.offset, Found: "a second comparison", Expected: "and between two, as in a < b and b < c"}
	}
	return p.binary(t, a, b, p.number)
}

func (p *parser) sum() (int, error)  { return p.chain(p.term, p.summand, "+", "-") }
func (p *parser) term() (int, error) { return p.chain(p.unary, p.summand, "*", "/") }

// chain reads operands of a level joined, from left to right, by its operators.
func (p *parser) chain(operand func() (int, error), check func(int) error, operators ...string) (int, error) {
	a, err := operand()
	for err == nil {
		t, ok := p.accept(operators...)
		if !ok {
			break
		}
		var b int
		if b, err = operand(); err == nil {
			a, err = p.binary(t, a, b, check)
		}
	}
	return a, err
}

// binary makes the node of an operator after checking both its sides.
func (p *parser) binary(t token, a, b int, check func(int) error) (int, error) {
	for _, side := range []int{a, b} {
		if err := check(side); err != nil {
			return 0, err
		}
	}
	n := node{a: a, b: b, start: p.nodes[a].start, at: t.offset}
	for n.op = opAdd; n.op.symbol() != t.text || n.op == opPowConst; {
		n.op++
	}
	if n.op == opPow && p.nodes[b].constant {
		n.op = opPowConst
	}
	return p.add(n)
}

// unary reads a minus sign and what it belongs to.
func (p *parser) unary() (int, error) {
	t, ok := p.accept("-")
	if !ok {
		return p.power()
	}
	if err := p.enter(); err != nil {
		return 0, err
	}
	defer p.leave()
	if p.peek().kind == number && p.tokens[p.pos+1].text == "degC" {
		return p.literal("-", t.offset) // -5 degC is 268.15 K
	}
	a, err := p.unary()
	if err != nil {
		return 0, err
	}
	if err := p.summand(a); err != nil {
		return 0, err
	}
	return p.add(node{op: opNeg, a: a, b: -1, start: t.offset, at: t.offset})
}

// power reads a power, whose exponent may have a sign and be a power.
func (p *parser) power() (int, error) {
	a, err := p.primary()
	if err != nil {
		return 0, err
	}
	t, ok := p.accept("^")
	if !ok {
		return a, nil
	}
	if err := p.enter(); err != nil {
		return 0, err
	}
	defer p.leave()
	b, err := p.unary()
	if err != nil {
		return 0, err
	}
	return p.binary(t, a, b, p.summand)
}

// number checks that a node is no condition.
func (p *parser) number(i int) error {
	if n := &p.nodes[i]; n.condition() {
		return &Error{Offset: n.start, Found: "a condition", Expected: "a number"}
	}
	return nil
}

// condition checks that a node is one.
func (p *parser) condition(i int) error {
	if n := &p.nodes[i]; !n.condition() {
		return &Error{Offset: n.start, Found: "a number", Expected: "a condition such as a < b"}
	}
	return nil
}

// summand checks that a node may take part in arithmetic.
func (p *parser) summand(i int) error {
	if n := &p.nodes[i]; n.affine {
		return &Error{Offset: n.start, Found: "a temperature in degC within arithmetic", Expected: "kelvin: " + quantity.Format(n.value, n.d)}
	}
	return p.number(i)
}

// add appends a node, and folds it if it is constant.
func (p *parser) add(n node) (int, error) {
	if len(p.nodes) == MaxNodes {
		return 0, &Error{Offset: n.at, Found: "a longer expression", Expected: fmt.Sprintf("at most %d numbers, names and operators", MaxNodes)}
	}
	if err := p.fold(&n); err != nil {
		err.Offset = n.at
		return 0, err
	}
	p.nodes = append(p.nodes, n)
	return len(p.nodes) - 1, nil
}

// fold evaluates a node whose operands are constant.
func (p *parser) fold(n *node) (err *Error) {
	if n.constant || n.op == opName || n.condition() || !p.nodes[n.a].constant || n.b >= 0 && !p.nodes[n.b].constant {
		return nil
	}
	n.constant = true
	a, b := p.nodes[n.a].value, math.NaN()
	if n.b >= 0 {
		b = p.nodes[n.b].value
	}
	n.value, err = apply(floats{}, &instruction{op: n.op, index: n.index, value: b}, a, b, false)
	return err
}
