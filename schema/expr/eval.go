package expr

import (
	"fmt"
	"math"
)

// Algebra is the arithmetic that an expression is evaluated in: numbers,
// or truncated Taylor series whose coefficients carry derivatives along.
type Algebra[T any] interface {
	Const(v float64) T
	Value(a T) float64 // what comparisons, branches and domains look at
	Add(a, b T) T
	Sub(a, b T) T
	Mul(a, b T) T
	Div(a, b T) T
	// Unary applies a real function given by its value and its first three
	// derivatives at Value(a).
	Unary(a T, f [4]float64) T
}

// Eval evaluates a numeric expression; of gives the value of a parameter. A
// domain error, a value that is not finite, and a point where a function has
// no finite derivatives are an *Error. The derivatives inside T are the
// algebra's to check.
func Eval[T any](e *Expr, alg Algebra[T], of func(name string) T) (T, error) {
	if e.IsCondition() {
		var none T
		return none, e.wrong()
	}
	v, _, err := run(e, alg, of, make([]T, 0, e.stack), true)
	return v, err
}

// Float evaluates a numeric expression over plain numbers.
func (e *Expr) Float(of func(name string) float64) (float64, error) {
	if e.IsCondition() {
		return 0, e.wrong()
	}
	var room [16]float64
	v, _, err := run(e, Algebra[float64](floats{}), of, e.work(room[:0]), false)
	return v, err
}

// True evaluates a condition. What and and or do not need is not evaluated.
func (e *Expr) True(of func(name string) float64) (bool, error) {
	if !e.IsCondition() {
		return false, e.wrong()
	}
	var room [16]float64
	_, is, err := run(e, Algebra[float64](floats{}), of, e.work(room[:0]), false)
	return is, err
}

// work gives the stack: room unless the expression needs more.
func (e *Expr) work(room []float64) []float64 {
	if e.stack > cap(room) {
		return make([]float64, 0, e.stack)
	}
	return room
}

// wrong says that the expression is a condition where a number is due, or
// the reverse.
func (e *Expr) wrong() *Error {
	if e.IsCondition() {
		return &Error{Offset: e.root().start, Found: "a condition", Expected: "a number"}
	}
	return &Error{Offset: e.root().start, Found: "a number", Expected: "a condition such as a < b"}
}

// run executes the program: numbers on a stack, the last truth in a register.
func run[T any](e *Expr, alg Algebra[T], of func(string) T, stack []T, derivatives bool) (v T, is bool, err error) {
	for pc := 0; pc < len(e.code); pc++ {
		in := &e.code[pc]
		top := len(stack) - 1
		switch {
		case in.op == opConst:
			stack = append(stack, alg.Const(in.value))
		case in.op == opName:
			x := of(e.names[in.index])
			if !finite(alg.Value(x)) {
				return v, false, &Error{Offset: in.at, Found: fmt.Sprintf("%s = %v", e.names[in.index], alg.Value(x)), Expected: "a finite value"}
			}
			stack = append(stack, x)
		case in.op < opLess:
			var bad *Error
			if in.pair() {
				stack[top-1], bad = apply(alg, in, stack[top-1], stack[top], derivatives)
				stack = stack[:top]
			} else {
				stack[top], bad = apply(alg, in, stack[top], stack[top], derivatives)
			}
			if bad != nil {
				bad.Offset = in.at
				return v, false, bad
			}
		case in.op <= opNotEqual:
			is = compare(in.op, alg.Value(stack[top-1]), alg.Value(stack[top]))
			stack = stack[:top-1]
		case in.op == opNot:
			is = !is
		case is == (in.op == opOr): // and: jump when false; or: jump when true
			pc = in.index - 1
		}
	}
	if len(stack) > 0 {
		v = stack[0]
	}
	return v, is, nil
}

func compare(o op, a, b float64) bool {
	switch o {
	case opLess:
		return a < b
	case opLessEqual:
		return a <= b
	case opGreater:
		return a > b
	case opGreaterEqual:
		return a >= b
	case opEqual:
		return a == b
	}
	return a != b
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }
