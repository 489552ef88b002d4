// Package surface writes, reads and interpolates surfaces.arrow: per family
// of modes, dense arrays of the effective index, its derivatives and their
// error bounds over the axes of a sweep.
//
// # Words
//
// A node is a point of the grid; nodes are numbered in row-major order of the
// axes, the last varying fastest, as the points of the sweep are. A surface is one
// family's values at every node; where the family is absent they are null. The
// window of a point is the small box of nodes that it is interpolated from, its cell the
// innermost part of that: at most two nodes along each axis.
//
// # The file
//
// An Arrow IPC file, buffers LZ4-compressed where that saves a tenth. Columns: family,
// point, then columns of modes.parquet under the same names and in the same
// units. Families stand one after another, sorted by name, each with one row a node; no record batch
// spans two families, and all batches of a family but its last have the same number of
// rows. The schema's metadata holds, under the key "surfaces", the axes, the families with
// their first row, and what a reader needs to interpolate, as JSON (type Meta). The bytes depend
// on the rows and the Spec only.
//
// # Writing
//
// A Writer takes the rows of modes.parquet in one pass, in order of points. It holds 64 kB a
// family; rows wait in a temporary file beside the target and become dense
// at Close, which costs time in proportion to the rows, and a little for each all-null batch.
// The target appears complete and durable, or not at all.
//
// # Reading
//
// Open reads the footer only. Record batches are decoded when they are first asked for and the
// least recently used ones are dropped beyond Options.CacheBytes. A Surfaces serves any number of
// goroutines. A damaged or hostile file is an error from Open or from the call that
// meets the damage; it never panics or takes memory beyond the cache and one batch.
//
// # Interpolation
//
// At collapses the window axis by axis, the frequency axis first, then from the longest
// axis to the shortest. Along frequency neff uses its first three derivatives at four
// nodes (from ng, GVD and beta3), ng its first two, GVD its first, dneff/dp its first (from dng/dp);
// along a parameter neff and ng use dneff/dp and dng/dp. Such interpolants are of Hermite's
// type (Stoer and Bulirsch, Introduction to Numerical Analysis, section 2.1.5); all other quantities use
// Lagrange's through six nodes. Near an absent node the window turns
// one-sided and shrinks; a cell with an absent corner is an error, since
// whether the family is guided there is not known. At a node the node's values come back unchanged.
// Where a derived parameter depends on frequency, ng is no derivative along the
// frequency axis and is not used as one.
//
// # Bounds
//
// Each value carries a bound: the nodes' own bounds through the weights, rounding, and an
// estimate of the interpolation error. The latter compares the interpolant with those on fewer of the
// nearest nodes: their differences give the rate at which a node improves the value, and the rate carries the
// differences on to the interpolant itself, with a safety factor (estimate.go). Sensitivities have no error
// column: their relative error at nodes is taken to be that of ng. The bound is an estimate, held in tests against
// a slab's closed form on grids of many shapes; where the rates say that more nodes hardly help, as across an
// anti-crossing narrower than a cell, it is widened to the range of the nearby nodes, for quantities other than neff and ng
// to ten times their magnitude there. A peak that the grid steps over altogether, so that no node shows any of it, stays
// unseen. Between two nodes without derivatives (a
// quantity other than neff and ng on an axis of two values, or next to
// cut-off) the bound is the difference of the two and a sixth of the value.
//
// Measured on a smooth slab, TE0 over 81 wavelengths, 61 thicknesses and 3 indices: neff to 1e-12 with bounds up to 4e-10,
// forty times the error in the middle; ng to 6e-12, GVD to 1e-3 ps^2/km (from the three indices), beta3 to 2e-6 ps^3/km.
//
// # Lines and slices
//
// ZeroPoints and ZeroLines find where GVD vanishes along one axis or over two;
// Slice reads a column at the nodes.
package surface
