// Package channel solves guides whose section varies along both axes: full-vector modes of a mesh of
// quadrilaterals (section.Mesh) with diagonal permittivities, real or complex, at one frequency.
//
// Words: a Topology is what meshes of the same cells, media, orders and walls share: numbering and order of
// elimination. A Pencil is the problem on one such mesh at one frequency, a Pair one of its modes, a Factor the
// factored matrix at one L. N = L/k^2 = neff^2. Inner unknowns belong to one cell alone, those of the skeleton to cells'
// edges and corners.
//
// # Equation
//
// With e = beta E_t, e_z = -j E_z and the time factor exp(j(wt - bz)), L = beta^2,
//
//	F x = (A + L B) x = 0,  A = [S - k^2 M_eps, 0; 0, 0],  B = [M, G; G', K - k^2 N_eps]
//
// S curl-curl, M mass, G the coupling to the gradient of e_z, K stiffness and N_eps mass of e_z (Lee, Sun and
// Cendes, IEEE Trans. MTT 39 (1991) 1262-1271; Jin, The Finite Element Method in Electromagnetics). Both matrices
// are symmetric, also with loss. The elements are an exact sequence on quadrilaterals: e_x in L(x) H(y), e_y in H(x) L(y),
// e_z in H(x) H(y), H integrated Legendre polynomials and L their derivatives, with an order for each column and
// row; e is carried to bent cells by the covariant map. As many eigenvalues as there are unknowns of e_z are then L = 0
// and no modes; there are no other false ones.
//
// In a straight cell the functions fall into four classes by parity that do not see each other, so that condensing
// a cell costs a sixteenth of a general one. Bent cells are sums of products of one-dimensional integrals. Above the cells the fronts
// follow a nested dissection of the grid; both use package ldl.
//
// # Assumptions
//
// Media are homogeneous in a cell and not magnetic. Horizontal lines are straight and level. An electric wall sets the tangential
// E to zero, a magnetic one the tangential H; metal cells have electric walls around them.
//
// Without loss and with positive permittivities the number of modes above L is the number of negative eigenvalues of F(L) less
// the number of unknowns of e_z (proof "inertia"): at L to infinity these are all there are, and each mode takes one
// away as L rises past it. A mode whose power flows backwards adds one instead; guides of positive permittivity can have some
// near a cut-off, below any dielectric's index.
//
// # Unknown
//
// N, by Arnoldi's method on F(shift)^-1 B from a start vector that is always the same, or from a neighbour's vectors; then inverse
// iteration on modes that lie close together at once, from a shift just below them, and the pencil projected on their vectors. What the
// inertia counts and was not found is looked for where the count says it is, with the modes that are known deflated.
// The same question has the same bits.
//
// # Accuracy
//
// TestStripTable measures the error of neff on a strip of 0.50 um x 0.22 um, index 3.4777 in 1.4444, at 1.55 um, a
// quarter of the section with walls 3 um and more away, and fails where this table is not what it finds (order: of the
// largest cells, less in thin ones; cells shrink by 0.15 toward the corner; unknowns: those of quasi-TE):
//
//	layers  order  unknowns  quasi-TE  quasi-TM
//	1  4  1408  +2e-05  +1e-04
//	2  5  3400  +1e-06  +6e-06
//	3  6  6816  +1e-07  +4e-07
//	3  7  9976  +6e-08  +1e-07
//	4  8  17176  +4e-09  +9e-09
//	5  10  36080  +1e-10  +3e-10
//
// (67,200 unknowns: below 2e-11, the reference's own digits.) On one core a point with its count takes about 1.1, 3, 6.4, 9 and 21 ms for the first
// five sizes of quasi-TE from a neighbour's vector, three times that from nothing, and each of its two factorisations 0.3, 0.8,
// 1.8, 2.6 and 6 ms (BenchmarkStrip). For the fields without corners of metal guides and films the error is
// exponentially small in the order. The residual of a Pair bounds what the iteration left: the error of N from that is about its square.
//
// Differentiate gives what L owes to the frequency, to third order, and to every parameter: the derivatives of the discrete
// eigenvalue, exact to the accuracy of the vector's own derivative (1e-11). Tails estimates the error of L by the highest polynomials.
//
// # When it fails
//
// An *solvers.InputError names the line, order or medium that is wrong. A *solvers.ConvergenceError comes with the modes that were
// found. With loss there is no proof but the count of the real parts: a mode whose loss is as large as its N, or
// a metal (Re eps < 0), can hide one. Cells that shrink beyond about ten times by 0.15 lose the small ones to rounding. An end of
// a cell less than a fortieth of the other makes its integrals inexact.
package channel
