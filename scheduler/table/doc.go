// Package table writes rows of a run's tables, points.parquet or
// modes.parquet, as text: for people, spreadsheets and scripts.
//
// Columns picks columns and their order. Where keeps the rows for which a condition
// holds, in the expression language of sweep files (package expr)
// over the columns' names: a number stands for the value in the column's unit, so
// units are not written. A text column is compared with == or != and a
// text in quotes: family == "TE0" and ng > 2.1. A row is left out when a
// number that the condition names is missing there; a missing text equals
// no text.
//
// Formats: csv has a line of names, then a line a row (RFC 4180), and an empty field
// for what is missing; jsonl has one JSON object a line, with null for it.
// Numbers are the shortest that read back as the same.
//
// Promises: rows keep their order; memory does not grow with the table; a
// damaged file is an error.
package table
