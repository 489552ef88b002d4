// Package choose picks, from the section alone, the cheapest equation that
// is exact for it, says why, and builds the problem that solves it. It is the
// only package that imports the concrete solvers.
//
// The order of the questions is: how many conductors; open or walled; how
// many fills; along how many directions the section varies; round or not. A
// section whose equation is not solved yet is answered with a
// *solvers.ScopeError that names both.
package choose
