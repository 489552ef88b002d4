package expr

import (
	"fmt"
	"slices"
)

// The limits on an expression.
const (
	MaxSource = 4096 // bytes
	MaxNodes  = 1000 // numbers, names, operators and functions
	MaxDepth  = 64   // of parentheses, signs and powers in one another
)

// Expr is a parsed expression.
type Expr struct {
	source string
	nodes  []node
	names  []string // in the order of their first use
	code   []instruction
	stack  int // the most values on the stack at once
}

// Parse reads an expression, numeric or a condition. What is wrong is an
// *Error; a constant part outside a function's domain is one already here.
func Parse(src string) (*Expr, error) {
	if len(src) > MaxSource {
		return nil, &Error{Offset: MaxSource, Found: fmt.Sprintf("an expression of %d bytes", len(src)), Expected: fmt.Sprintf("at most %d", MaxSource)}
	}
	tokens, err := scan(src)
	if err != nil {
		return nil, err
	}
	p := parser{tokens: tokens}
	root, err := p.whole()
	if err != nil {
		return nil, err
	}
	e := &Expr{source: src, nodes: p.nodes, names: p.names}
	c := compiler{nodes: p.nodes}
	c.emit(root)
	e.code, e.stack = c.code, c.most
	return e, nil
}

// String is the source.
func (e *Expr) String() string { return e.source }

// Names lists the parameters that the expression refers to, sorted.
func (e *Expr) Names() []string {
	return slices.Sorted(slices.Values(e.names))
}

// IsCondition reports whether the expression is true or false rather than a
// number.
func (e *Expr) IsCondition() bool { return e.root().condition() }

// root is the last node: every other is below it.
func (e *Expr) root() *node { return &e.nodes[len(e.nodes)-1] }
