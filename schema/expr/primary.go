package expr

import (
	"math"
	"slices"

	"betaloom/schema/quantity"
)

// primary reads a number, a name, a call or a parenthesis.
func (p *parser) primary() (int, error) {
	t := p.peek()
	switch {
	case t.kind == number:
		return p.literal("", t.offset)
	case t.is("("):
		return p.parenthesis()
	case t.kind == word && !t.is("and") && !t.is("or") && !t.is("not"):
		return p.named()
	}
	return 0, &Error{Offset: t.offset, Found: t.found(), Expected: "a number, a parameter, a function or ("}
}

func (p *parser) parenthesis() (int, error) {
	open := p.peek()
	p.pos++
	a, err := p.or()
	if err != nil {
		return 0, err
	}
	p.nodes[a].start = open.offset
	return a, p.close()
}

// close takes a closing parenthesis.
func (p *parser) close() error {
	if t, ok := p.accept(")"); !ok {
		return &Error{Offset: t.offset, Found: t.found(), Expected: "an operator or )"}
	}
	return nil
}

// named reads what starts with a word: pi, a call or a parameter.
func (p *parser) named() (int, error) {
	t := p.peek()
	p.pos++
	_, isFunction := functionIndex(t.text)
	_, isSeveral := severalOp(t.text)
	switch {
	case p.peek().is("("):
		return p.call(t)
	case isFunction || isSeveral:
		return 0, &Error{Offset: p.peek().offset, Found: p.peek().found(), Expected: "( after the function " + t.text}
	case t.text == "pi":
		return p.add(node{op: opConst, a: -1, b: -1, start: t.offset, at: t.offset, value: math.Pi, constant: true})
	case quantity.IsName(t.text):
		return 0, &Error{Offset: t.offset, Found: "the unit " + t.text + " without a number", Expected: "a number before it, as in 1 " + t.text}
	}
	i := slices.Index(p.names, t.text)
	if i < 0 {
		i = len(p.names)
		p.names = append(p.names, t.text)
	}
	return p.add(node{op: opName, a: -1, b: -1, start: t.offset, at: t.offset, index: i})
}

// call reads the arguments of a function.
func (p *parser) call(t token) (int, error) {
	if i, ok := functionIndex(t.text); ok {
		return p.callOne(t, i)
	}
	if o, ok := severalOp(t.text); ok {
		return p.callSeveral(t, o)
	}
	expected := "a function"
	var known []string
	for _, w := range Reserved() {
		_, unary := functionIndex(w)
		if _, more := severalOp(w); unary || more {
			known = append(known, w)
		}
	}
	if near, ok := quantity.Nearest(t.text, known); ok {
		expected += "; did you mean " + near + "?"
	}
	return 0, &Error{Offset: t.offset, Found: "the unknown function " + quantity.Excerpt(t.text), Expected: expected}
}

func (p *parser) callOne(t token, index int) (int, error) {
	p.pos++
	a, err := p.or()
	if err != nil {
		return 0, err
	}
	if comma, ok := p.accept(","); ok {
		return 0, &Error{Offset: comma.offset, Found: "a second argument of " + t.text, Expected: ") after the first"}
	}
	if err := p.close(); err != nil {
		return 0, err
	}
	if err := p.summand(a); err != nil {
		return 0, err
	}
	return p.add(node{op: opCall, a: a, b: -1, start: t.offset, at: t.offset, index: index})
}

// callSeveral reads min or max as a chain of pairs.
func (p *parser) callSeveral(t token, o op) (int, error) {
	p.pos++
	a, err := p.or()
	if err != nil {
		return 0, err
	}
	if !p.peek().is(",") {
		return 0, &Error{Offset: p.peek().offset, Found: p.peek().found(), Expected: ", and a second argument of " + t.text}
	}
	for {
		if err := p.number(a); err != nil {
			return 0, err
		}
		if _, ok := p.accept(","); !ok {
			return a, p.close()
		}
		b, err := p.or()
		if err != nil {
			return 0, err
		}
		if err := p.number(b); err != nil {
			return 0, err
		}
		if a, err = p.add(node{op: o, a: a, b: b, start: t.offset, at: t.offset}); err != nil {
			return 0, err
		}
	}
}

// literal reads a number and the unit that belongs to it. minus is "-" where
// a sign before it does too.
func (p *parser) literal(minus string, start int) (int, error) {
	text := minus + p.peek().text
	p.pos++
	unit, err := p.unit()
	if err != nil {
		return 0, err
	}
	if t := p.peek(); unit == "" && (t.kind == number || t.kind == word && !t.is("and") && !t.is("or") && !t.is("not")) {
		return 0, &Error{Offset: t.offset, Found: t.found() + " after a number", Expected: "an operator or a unit" + nearUnit(t.text)}
	}
	v, d, err := quantity.Parse(text + unit)
	if q, bad := err.(*quantity.Error); bad {
		return 0, &Error{Offset: start, Found: q.Found, Expected: q.Expected}
	}
	affine := unit == " degC"
	return p.add(node{op: opConst, a: -1, b: -1, start: start, at: start, value: v, constant: true, d: d, affine: affine})
}

func nearUnit(word string) string {
	if near, ok := quantity.Nearest(word, quantity.Names()); ok {
		return "; did you mean " + near + "?"
	}
	return ""
}

// unit collects the text of a unit behind a number, with a space before it:
// names joined with * and /, or such after "1/"; empty where there is none.
func (p *parser) unit() (string, error) {
	text := " "
	switch {
	case p.isUnit(0):
	case p.peek().kind == number && p.peek().text == "1" && p.tokens[p.pos+1].is("/") && p.isUnit(2):
		text += "1/"
		p.pos += 2
	default:
		return "", nil
	}
	for {
		text += p.peek().text
		p.pos++
		e, err := p.unitPower()
		if err != nil {
			return "", err
		}
		text += e
		if t := p.peek(); !t.is("*") && !t.is("/") || !p.isUnit(1) {
			return text, nil
		}
		text += p.peek().text
		p.pos++
	}
}

// isUnit reports whether the token this far ahead is the name of a unit.
func (p *parser) isUnit(ahead int) bool {
	i := min(p.pos+ahead, len(p.tokens)-1)
	return p.tokens[i].kind == word && quantity.IsName(p.tokens[i].text)
}

// unitPower reads the power behind the name of a unit.
func (p *parser) unitPower() (string, error) {
	if _, ok := p.accept("^"); !ok {
		return "", nil
	}
	text := "^"
	if _, ok := p.accept("-"); ok {
		text += "-"
	}
	t := p.peek()
	p.pos++
	if t.kind != number || p.peek().is("^") {
		if t.kind == number {
			t = p.peek()
		}
		return "", &Error{Offset: t.offset, Found: t.found(), Expected: "one whole number: a power behind a unit belongs to the unit; write (2 um)^x for a power of the quantity"}
	}
	return text + t.text, nil
}
