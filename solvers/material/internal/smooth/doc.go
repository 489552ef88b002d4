// Package smooth fits a smooth function with derivatives to samples: the
// penalised spline for the table of a material.
//
// The fit f is a spline of the seventh degree (of degree rows - 1 below
// eight rows) that minimises
//
//	sum (y - f(x))^2 + rows s integral f''''(x)^2 dx,
//
// x running from 0 to 1. How many coefficients it has and how strong the
// penalty s is follows from the samples:
//
//   - Samples written with so many decimals, or as floating-point numbers,
//     carry a known rounding. The smoothest fit that leaves no more than that
//     is taken, if there is one.
//   - Otherwise generalised cross validation decides (Craven and Wahba,
//     Numer. Math. 31, 377 (1979)), a degree of freedom counting 1.4 times
//     where there are rows enough, against the rare but gross undersmoothing
//     of the plain form (Kim and Gu, J. R. Stat. Soc. B 66, 337 (2004)).
//   - Up to four rows are passed through exactly.
//
// The least-squares problems are solved by rotations on banded rows, so that
// samples of a smooth function are followed to rounding, and work and
// storage grow in proportion to the rows. gonum has neither banded
// rotations nor penalised splines.
package smooth
