// Package part makes and reads part files: the table of a solved tile.
//
// A part has one row for each mode of each point, sorted by the point's index
// in the tile (local) and then by mode; a point without a mode has one row
// whose mode is null. Its columns are those of column.Part. It is a
// Parquet file with one row group and the tile's name in its key-value
// metadata.
//
// A Builder takes points in local order and gives the bytes; Read and Decode
// take bytes and prove that they are the whole part of that tile: the
// columns of its Physics, its name, every local point once, states and
// modes that agree.
//
// Promises: equal points give equal bytes, whatever was built before; a part
// tells nothing of times, hosts or runs. Any bytes may be decoded: the answer
// is a table or an error, in memory bounded by the tile's size.
package part
