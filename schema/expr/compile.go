package expr

// instruction is one step of the flat program. index is that of a name or a
// function, or where and and or go on when the left side decides.
type instruction struct {
	op    op
	index int
	value float64 // of a constant; the exponent of opPowConst
	at    int     // byte in the source, for errors
}

// pair reports whether the instruction takes two values off the stack.
func (in *instruction) pair() bool {
	switch in.op {
	case opAdd, opSub, opMul, opDiv, opPow, opMin, opMax:
		return true
	}
	return false
}

// compiler writes the program of a tree, constant subtrees as one number.
type compiler struct {
	nodes       []node
	code        []instruction
	depth, most int // of the stack
}

// emit writes the program of a node. Its recursion is as deep as the tree,
// which MaxNodes bounds.
func (c *compiler) emit(i int) {
	n := &c.nodes[i]
	switch {
	case n.constant:
		c.push(instruction{op: opConst, value: n.value, at: n.at})
	case n.op == opName:
		c.push(instruction{op: opName, index: n.index, at: n.at})
	case n.op == opAnd || n.op == opOr:
		c.emit(n.a)
		jump := len(c.code)
		c.code = append(c.code, instruction{op: n.op, at: n.at})
		c.emit(n.b)
		c.code[jump].index = len(c.code)
	case n.op == opPowConst:
		c.emit(n.a)
		c.code = append(c.code, instruction{op: opPowConst, value: c.nodes[n.b].value, at: n.at})
	default:
		c.operator(n)
	}
}

// operator writes the operands and the operator; what it leaves on the stack
// is one number, or none where it is a truth.
func (c *compiler) operator(n *node) {
	before := c.depth
	c.emit(n.a)
	if n.b >= 0 {
		c.emit(n.b)
	}
	c.code = append(c.code, instruction{op: n.op, index: n.index, at: n.at})
	c.depth = before + 1
	if n.condition() {
		c.depth = before
	}
}

func (c *compiler) push(in instruction) {
	c.code = append(c.code, in)
	c.depth++
	c.most = max(c.most, c.depth)
}
