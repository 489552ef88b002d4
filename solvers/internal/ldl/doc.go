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
// Off, P in Perm and C, the Schur complement, in Rest.
//
// Source: Bunch and Kaufman, Math. Comp. 31 (1977) 163-179; fronts: Duff and Reid,
// ACM TOMS 9 (1983) 302-325.
package ldl
