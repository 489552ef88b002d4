// Package sweep reads the sweep file: YAML in, a Sweep out, or else every
// problem of the file in one go, each with its line, column and path.
//
// Words: a key is a name on the left of a colon; a path says where a key
// stands (section.layers[1].thickness); a form says what may stand under a key,
// and is both what reads it and what describes it in the JSON Schema, so that the
// two cannot differ; a number is a quantity such as "0.80 um" or the name of
// a parameter of the same dimension; a diagnostic is one problem.
//
// Reading goes in two steps. The forms (form*.go) turn the YAML tree into the
// types of package schema, strictly: an unknown key, a second key of the same
// name, the wrong kind of value or of unit are problems. Then checks
// (check*.go) look at what only the whole file can tell: names, dimensions,
// cycles, the rules of a section, the size of the grid.
//
// Promises: no input panics, hangs or takes memory out of proportion. A sweep
// file has at most MaxFile bytes, a table MaxTable, a points file MaxPointsFile;
// an axis has at most MaxAxis values and the grid MaxPoints points, which is
// known before any of it is built. Values of an axis that is given by its
// ends are rounded to fourteen digits, so that they do not depend on where
// the axis ends: a longer axis keeps the values it had.
//
// The accepted keys are described for users in REFERENCE.md beside this file.
package sweep
