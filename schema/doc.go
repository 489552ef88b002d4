// Package schema holds the types that cross a process boundary: the resolved
// physics of a sweep, the tile that a worker solves, and their names.
//
// Words: a sweep is a question asked over a box of parameters; a parameter is
// fixed, an axis or derived; a point is one combination of axis values; a
// tile is a box of points solved as one job; a part is the table of a solved
// tile. All numbers are in SI units with angles in radians.
//
// The packages below it own the sweep file (sweep), units (quantity),
// expressions (expr), the parameters of points (point), table columns
// (column), part files (part), the queue (queue) and the store (store). None of them imports anything of ours from
// outside schema.
package schema
