package expr

import "betaloom/schema"

// op says what a node, and the instruction made from it, does.
type op uint8

const (
	opConst op = iota
	opName
	opNeg
	opAdd
	opSub
	opMul
	opDiv
	opPow      // both sides vary
	opPowConst // the exponent is a constant
	opCall     // a function of one argument
	opMin
	opMax
	opLess
	opLessEqual
	opGreater
	opGreaterEqual
	opEqual
	opNotEqual
	opAnd
	opOr
	opNot
)

// node is one node of the tree. Nodes stand in a list, children before
// parents, so that one pass over the list visits them from the leaves up.
type node struct {
	op       op
	a, b     int              // children, -1 where absent
	start    int              // byte where its text starts
	at       int              // byte of its operator or name
	value    float64          // of a constant subexpression (a number, or folded)
	constant bool             // value holds
	d        schema.Dimension // of a number
	affine   bool             // a temperature written in degC
	index    int              // of a name in Expr.names, of a function in functions
}

// condition reports whether the node is true or false rather than a number.
func (n *node) condition() bool { return n.op >= opLess }

// symbol is the operator as it is written.
func (o op) symbol() string {
	symbols := [...]string{opNeg: "-", opAdd: "+", opSub: "-", opMul: "*", opDiv: "/", opPow: "^", opPowConst: "^",
		opMin: "min", opMax: "max", opLess: "<", opLessEqual: "<=", opGreater: ">", opGreaterEqual: ">=",
		opEqual: "==", opNotEqual: "!=", opAnd: "and", opOr: "or", opNot: "not"}
	return symbols[o]
}
