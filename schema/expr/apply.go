package expr

import (
	"fmt"
	"math"
)

// apply does one instruction on its operands; b is ignored where it has
// one. The error has no offset yet.
func apply[T any](alg Algebra[T], in *instruction, a, b T, derivatives bool) (T, *Error) {
	switch in.op {
	case opMin:
		if alg.Value(b) < alg.Value(a) {
			return b, nil
		}
		return a, nil
	case opMax:
		if alg.Value(b) > alg.Value(a) {
			return b, nil
		}
		return a, nil
	case opCall:
		f, expected := functions[in.index].at(alg.Value(a))
		return lift(alg, in, a, f, expected, derivatives)
	case opPowConst:
		f, expected := powAt(alg.Value(a), in.value)
		return lift(alg, in, a, f, expected, derivatives)
	case opPow:
		return power(alg, in, a, b, derivatives)
	}
	return arithmetic(alg, in, a, b)
}

func arithmetic[T any](alg Algebra[T], in *instruction, a, b T) (v T, err *Error) {
	switch in.op {
	case opNeg:
		v = alg.Sub(alg.Const(0), a)
	case opAdd:
		v = alg.Add(a, b)
	case opSub:
		v = alg.Sub(a, b)
	case opMul:
		v = alg.Mul(a, b)
	case opDiv:
		if alg.Value(b) == 0 {
			return v, &Error{Found: fmt.Sprintf("%v / 0", alg.Value(a)), Expected: "a divisor other than 0"}
		}
		v = alg.Div(a, b)
	}
	if !finite(alg.Value(v)) {
		found := fmt.Sprintf("%v %s %v", alg.Value(a), in.op.symbol(), alg.Value(b))
		return v, &Error{Found: found + ", which is beyond the range of float64", Expected: "a finite result"}
	}
	return v, nil
}

// power is a^b with both varying: exp(b log a), with the value of math.Pow
// for that of exp, which loses less.
func power[T any](alg Algebra[T], in *instruction, a, b T, derivatives bool) (v T, err *Error) {
	x, y := alg.Value(a), alg.Value(b)
	if x <= 0 {
		return v, &Error{Found: fmt.Sprintf("%v ^ %v", x, y), Expected: "a base above 0 under a power that varies"}
	}
	f, expected := logAt(x)
	log, err := lift(alg, &instruction{op: opPow}, a, f, expected, derivatives)
	if err != nil {
		return v, err
	}
	p := math.Pow(x, y)
	if !finite(p) {
		return v, &Error{Found: fmt.Sprintf("%v ^ %v, which is beyond the range of float64", x, y), Expected: "a finite result"}
	}
	return alg.Unary(alg.Mul(b, log), [4]float64{p, p, p, p}), nil
}

// lift applies a function of one argument after checking its domain, its
// value and, where they are used, its derivatives.
func lift[T any](alg Algebra[T], in *instruction, a T, f [4]float64, expected string, derivatives bool) (v T, err *Error) {
	if expected != "" {
		return v, &Error{Found: in.applied(alg.Value(a)), Expected: expected}
	}
	if !finite(f[0]) {
		return v, &Error{Found: in.applied(alg.Value(a)) + ", which is beyond the range of float64", Expected: "a finite result"}
	}
	if derivatives && !(finite(f[1]) && finite(f[2]) && finite(f[3])) {
		return v, &Error{Found: in.applied(alg.Value(a)) + ", where its derivatives are not finite", Expected: "a point where they are"}
	}
	return alg.Unary(a, f), nil
}

// applied writes the function with its argument for a message.
func (in *instruction) applied(x float64) string {
	switch in.op {
	case opCall:
		return fmt.Sprintf("%s of %v", functions[in.index].name, x)
	case opPowConst:
		return fmt.Sprintf("%v ^ %v", x, in.value)
	}
	return fmt.Sprintf("a power of %v", x)
}

// floats is the algebra of plain numbers.
type floats struct{}

func (floats) Const(v float64) float64               { return v }
func (floats) Value(a float64) float64               { return a }
func (floats) Add(a, b float64) float64              { return a + b }
func (floats) Sub(a, b float64) float64              { return a - b }
func (floats) Mul(a, b float64) float64              { return a * b }
func (floats) Div(a, b float64) float64              { return a / b }
func (floats) Unary(_ float64, f [4]float64) float64 { return f[0] }
