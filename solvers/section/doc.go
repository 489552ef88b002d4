// Package section turns layers with strips, at one point of a sweep, into the geometry that a channel solver
// needs: an Outline, and from it a Mesh of quadrilaterals that moves with the parameters.
//
// Words: a layer has a bottom and a top; a strip stands in it from bottom to top, between two walls; what is beside the
// strips is the layer's fill. A level is an interface between layers. A corner is where media join other than along one
// straight interface. A line is a vertical line of the mesh; between two lines, or two levels, lies a stretch, which is cut into cells.
// The number of a length is a Length: its value and its derivatives in the base parameters. Everything is in metres and radians.
//
// # Outline
//
// y is zero at the lowest interface, or on the ground. The centre of a strip is the middle of its width where that is meant
// (top, middle or foot); from there each wall runs at its angle from the horizontal, below 90 deg outward to the
// foot. An angle within four roundings of 90 deg is taken for it.
//
// Two places are one within 64 roundings of the section's size. So a layer without thickness, a strip without width and a
// gap without width are not there, a partial etch as two layers has one wall where the two are flush, and mirror planes
// (MirrorX, MirrorY) are found wherever they lie. What cannot be four-sided cells is refused with an
// *solvers.InputError: walls that meet or cross inside a layer, gaps that close at one end only,
// strips that overlap or stand beyond the side walls, and conductors of no thickness. So is a section whose numbers are
// so far apart that a cell's width has fewer than three digits left, or that a derivative overflows. A bound that is lost
// in the rounding of the place it counts from is refused by its name.
//
// Media are the dielectrics in use. Materials with the same permittivity in every derivative are one; those that
// agree in value only are not, and no mirror plane joins them, since a parameter could move one alone.
//
// # Mesh
//
// Lines carry the walls; where a line has none it runs straight on, or straight to the next wall it carries (walls of
// layers that do not touch share a line that leans no more than 45 degrees between them). Where it would
// come too near to others it gives way: lines keep the distance of their walls, or what room there is. All
// cells are trapezoids with horizontal edges, hence convex. In 10,000 random sections none tapers more than 10 times more than
// the strip or gap in its section that tapers most, in 99 % of them none more than 2.5 times: the others have walls of two layers that end
// within a few nanometres of each other at one level and lead apart from it. Lines are numbered over the whole
// height, so that a stack of strips of different widths has the cells of all their corners in every row.
//
// Stretches are first cut into cells no wider than Size, beyond the outermost walls with Growth; then the cell at a corner is cut by Ratio
// until it is about Size Ratio^CornerLayers, so that all corners end in cells of one width and thin layers and gaps are
// not cut for nothing. Interfaces and walls without a corner are not graded. Orders fall with the width.
//
// Everything but the numbers of cells and layers is a continuous function of the section's numbers. DX and
// DY are its derivatives, kinks aside (there they belong to one side); Split names the parameters that
// would change the topology, for which they mean nothing. Computational walls move with the outermost wall ends.
//
// # Halves and quarters
//
// With HalfX the mesh is what lies right of the mirror plane, with HalfY above. For modes whose Ex is even
// across the vertical plane it is an electric wall; for those whose Ex is even across the horizontal plane that is a magnetic
// one. Walls then move as the even part of their motion in the whole section, so that dL/dp of the half is exactly that
// of the whole, also for a parameter that breaks the symmetry.
//
// # Cost
//
// A tilted strip with five parameters takes 40 us from the resolver to the mesh with its derivatives. A mesh has at most 8 million numbers,
// derivatives included.
package section
