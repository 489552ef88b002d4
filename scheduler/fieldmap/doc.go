// Package fieldmap draws the fields of one mode and writes them as a table.
//
// Words: a quantity is what is drawn of a field: the size of E or H, one of their components, or the axial power flow. Of a
// component the part in phase with the transverse E is drawn along x and y, and the part in quadrature along z: without
// loss that is all there is.
//
// A section that varies along both axes becomes a map with the lines where materials meet, x and y to one scale; one that varies along y
// alone a curve over its layers. Pictures are SVG, with text as text, or PNG of 300 dots an inch, in one layout;
// the same field gives the same bytes. Colours are those of package palette: zero is light, so that
// lines and print stay readable.
package fieldmap
