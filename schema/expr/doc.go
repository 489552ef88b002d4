// Package expr is the expression language of a sweep file: derived
// parameters ("0.25 * height + 20 nm"), the profile of a round guide and the
// condition of keep ("width > 2 * height and not (temperature < 20 degC)").
//
// # The language
//
// Numbers are decimal. A unit after a number belongs to it, with its powers
// and with the units that follow behind * and /, so that "x / 5 S/m" divides
// by 5 S/m, "2 um^2" is an area, and "3e-4 1/K" is read as in the rest of
// the file. A unit without a number is an error. degC is an absolute
// temperature: it may stand alone, on a side of a comparison and in min and
// max, and nowhere else.
//
// From the loosest to the tightest: or, and, not, comparisons (< <= > >= ==
// !=), + and -, * and /, unary minus, ^ (from right to left; -2^2 is -4),
// then numbers, parameters, pi, parentheses and functions:
//
//	sqrt cbrt        root of a dimension whose exponents allow it
//	exp log log10    of a pure number; log is the natural one
//	sin cos tan      of an angle, or of a pure number in radians
//	asin acos atan   of a pure number, give an angle
//	sinh cosh tanh   of a pure number
//	abs min max      of any dimension; min and max take two or more
//
// Dimensions are checked before anything is evaluated (Dimension,
// Condition). An angle is not a pure number: divide by 1 rad to make it one.
// Only a whole constant power may be taken of what has a dimension.
//
// # Evaluation
//
// Eval runs an expression over any Algebra, so that with truncated Taylor
// series the derivatives are exact: every function hands its first three
// derivatives to the algebra. x^c takes a negative x where c is a whole
// number; x^y with y no constant needs x > 0. abs, min and max follow
// the branch that is selected (x at x = 0, the first of equals). Where a
// function has no finite derivatives, such as sqrt at 0, Eval is an error and
// Float, which needs none, is not.
//
// # Promises
//
// No text panics, hangs or takes more than bounded memory: its length,
// nesting and number of terms are limited. No evaluation gives NaN or an
// infinity: a domain error, a division by zero and an overflow are errors
// that name the function and the value. Every error is an *Error with the
// byte where it stands. An Expr does not change and serves any number of
// goroutines. Float and True do not allocate unless nesting is deep.
package expr
