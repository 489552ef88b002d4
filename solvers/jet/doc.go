// Package jet is a truncated Taylor arithmetic: the value of a quantity with
// its first three derivatives in the angular frequency w and its first
// derivatives in the base parameters p, d/dp and d2/dwdp.
//
// A Jet is a value: Add, Mul, Div, Sqrt, Unary and the others take jets and
// give a new one, exact to rounding by the rules of differentiation; nothing
// is ever differenced. d/dw is the total derivative: it includes what a
// quantity owes to w through another quantity.
//
// P and WP are nil where a quantity depends on no base parameter. Arithmetic
// on such jets allocates nothing. Jets that meet in an operation have P and
// WP of one length, or nil; other lengths are a mistake of the caller and
// panic like an index out of range. A result shares no storage with its
// operands.
//
// The methods of *Jet work in place and re-use the storage of P and WP: they
// are for loops that must not allocate. A jet that is worked on in place has
// room for both or for neither (Reset, Set).
package jet
