// Package solvers defines what every solver of guided modes takes and gives:
// the point, the problem, the mode with its derivatives and error bounds, and
// the three kinds of error. The concrete solvers are packages below it;
// only choose imports them.
//
// Time factor exp(j(wt - bz)): an effective index neff - j kappa with
// kappa > 0 is a wave that decays along +z. All values are in SI units.
package solvers
