// Package collate joins the parts of a grid into the tables of a run:
// points.parquet, modes.parquet and, for a box, surfaces.arrow.
//
// Words: a tile is solved (its part is in the store), set aside (the store has
// its record under aside/, with a reason) or missing. A band is a run of
// consecutive points and the tiles that hold them, from package grid. The
// shelf keeps the rows of one band until they are written in the order
// of points; a run is a stretch of points that stand together in a tile and in
// the grid.
//
// What becomes of a point: that of a solved tile is as its part says; that of a
// tile set aside is failed with that tile's reason. A missing tile is an error,
// *MissingError, unless Input.Partial is set: then its points are failed with
// the reason PartialReason, and both tables carry partial=true in their
// key-value metadata. Points of such tiles where the sweep's keep is
// false are excluded all the same. A part that is not what it should be is a
// *CorruptError that names all such tiles: delete them and solve them again.
//
// Promises:
//   - points.parquet has each point of the grid once, in order; modes.parquet is
//     sorted by point, then by mode. Row groups hold 131,072 rows.
//   - The bytes depend on the parts alone: not on the order in which they were
//     made, on the number of processors or on what was interrupted before.
//   - Memory is bounded whatever the size of the grid: the rows of a band that
//     do not fit in 16 MiB wait in a temporary file.
//   - A file under its final name is whole and durable: it is written beside,
//     synced and renamed. What a crash leaves has a name of Temporaries and is
//     removed by the next Run.
//
// Two Runs in one folder at a time are the caller's to prevent.
package collate
