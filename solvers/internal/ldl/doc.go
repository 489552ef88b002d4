// Package ldl eliminates the first unknowns of a dense symmetric front, real or
// complex (symmetric, never Hermitian), with the pivoting of Bunch and Kaufman among them.
//
// A front of n unknowns of which s are eliminated is held in two pieces, lower
// triangles in row order: Panel has n rows of s numbers, Rest has n-s rows of
// n-s numbers. The entries above a diagonal are work space. Eliminate leaves
//
//	P F P' = [L11 0; L21 1] diag(D, C) [L11 0; L21 1]'
//
// with L11, the diagonal of D and L21 in Panel, the off-diagonals of 2 x 2 pivots in
// Off, P in Perm and C, the Schur complement, in Rest. Down and Up solve with the
// factors.
//
// Blocks. The leading block is factored a span of columns at a time, with pivots chosen from
// all of it; L21 is solved for and the Schur complement formed in panels of a few columns that
// stay in the first cache. Nearly all of the work is done by package kernel, so that an elimination
// of real numbers gives the same bits with every set of vector instructions.
//
// Sources: Bunch and Kaufman, Math. Comp. 31 (1977) 163-179; fronts: Duff and Reid,
// ACM TOMS 9 (1983) 302-325; blocks: Anderson and Dongarra, Evaluating block algorithm
// variants in LAPACK, LAPACK working note 19 (1990).
package ldl
