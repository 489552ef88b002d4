// Package column says which columns the tables of a sweep have, and writes
// tables of them as Parquet.
//
// Words: a column has a name that carries its unit, a unit, a description and
// a type. Points, Modes and Part list the columns of points.parquet, of
// modes.parquet and of a part file for a Physics; the lists depend on the
// Physics alone and hold every column of the contract, whether or not it has
// a meaning for the equation solved. A Batch is rows in memory, column by
// column; a Writer appends Batches to a Parquet file.
//
// Missing values: in memory a missing float is NaN, a missing integer
// MissingInt, a missing text the code 0 and missing bytes an empty slice; in
// a file each is null. NaN and infinities never reach a file.
//
// Promises: the bytes of a file depend on the columns, the rows and the
// metadata only. Every column is optional (nullable), Zstandard-compressed;
// dictionaries stand on text columns only. Unit and description are in the
// metadata of each Arrow field (keys unit and description), which the file
// carries as ARROW:schema, and once more as JSON under the file's key
// betaloom.columns for readers that know nothing of Arrow.
package column
