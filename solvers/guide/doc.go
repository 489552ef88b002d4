// Package guide solves layers with strips at a point: all guided modes by the full-vector equations, with derivatives
// and with bounds on the errors of every number.
//
// Words: a class is the modes of one symmetry, solved on the half or quarter of the section that its mirror planes leave. A
// level is one fineness of mesh. The census is the number of guided modes of a class.
//
// # Equation
//
// That of package channel on the meshes of package section. A mode is guided if its effective index is above that of
// both half-spaces and of every mode of the stacks far left and right that has its symmetry (package slab). Between
// metal walls on all sides a mode is guided above its cut-off.
//
// # Assumptions
//
// Metals are perfect conductors. Permittivities have positive real parts and principal axes along the section's. In an open section
// modes less than 1e-5 above the lowest guided index are not looked for, between walls those of an index below 1e-3.
//
// # Unknown
//
// At each point the modes of every class are counted on a coarse mesh with walls so far away that every mode fits (proof:
// inertia; with loss that of the real parts, which is none for a mode whose loss is as large as its index). Then they are solved on a coarse mesh, whose walls are moved outward until they do not matter, to see which are
// the highest, and these on finer ones until the bounds are as small as asked. From a neighbour's modes (Mode.State) the
// level, the walls and the vectors are taken over: one coarse and one fine solve are then enough. The same point from the same
// neighbour has the same bits.
//
// Type is quasi-TE where the share of Ex in |Ex|^2 + |Ey|^2 is at least a half, else quasi-TM. Symmetry names the
// parity of Ex across the mirror planes there are: x-even says that Ex is even in x. Family is TE or TM and the number of times
// the dominant field changes sign across and up the section: it names the mode at this point from its field alone and does not follow it
// through crossings; modes of one name are told apart by -2, -3 from the highest index down. Where the field normal to a conductor turns
// round from one of its faces to the other, that is no change of sign of the mode: the fundamental mode of a strip over a ground is TM00.
//
// The confinement in a named layer is the share of its strips, without what fills the layer beside them; in a layer without
// strips that of the whole layer. There is no one impedance of such a mode; Z is not given.
//
// # Accuracy
//
// The bound of neff is what the polynomials above the mesh's orders would contribute, estimated cell by cell from the highest
// ones that are there and the rate at which they fall (a hierarchical estimate: the mesh without its highest orders is the
// second discretisation); the effect of the walls, from the exact derivative in their distance; the square of the residual; and
// rounding. Those of ng, GVD and beta3 follow from the same form of the vector's derivative in frequency.
// The constants in it were set on sections 0 to 560 of TestCampaign (seed 20261201); see its log for how often bounds
// hold and how wide they are.
//
// # When it fails
//
// An *solvers.InputError is one of the section: see package section. A *solvers.ConvergenceError says that modes which were counted were
// not found. A bound above what was asked says that the finest affordable mesh was not enough.
package guide
