// Package point evaluates the parameters of a tile's points: which values
// they have, whether keep leaves the point out, at which frequency it is.
//
// A parameter is fixed, varies with the point, or is derived by an
// expression; a derived one may stand before those it refers to. All values are in
// SI units, angles in radians.
//
// What it promises: the worker that solves a point, the collator that writes
// one which nobody has solved, and the estimate of a run see the same bits.
// A value that cannot be evaluated is NaN and an *Error, and leaves the
// others as they are.
package point
