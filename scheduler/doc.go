// Package scheduler leads a run through its life: it plans a sweep, publishes
// its tiles, watches them being solved, and has the parts joined into the
// run's tables and report.
//
// Words: a run is a sweep in its folder; a tile is missing when neither its
// part nor a record that it was set aside is in the folder; a round is one
// publication of what is missing; a run is complete when no tile is missing
// and none was set aside.
//
// What it promises: the parts decide. What is missing is found by looking for
// the parts, at the start, after each round and never by counting messages;
// so the process may be killed at any moment and the run be started again in
// its folder, where only what is missing is solved. Every file stands under
// its name whole or not at all. One process at a time works in a folder.
// Parts of tiles outside the grid stay, for the day the sweep's box comes
// back.
//
// Besides the parts, tables and the report a folder holds sweep.yaml, the
// sweep as given; grid.json, the sweep as it was resolved (tables and points
// files included), from which the folder can be worked on without the files
// that the sweep named; run.json, a Record; and, while a process works in it,
// progress.json, a Progress, and queue, the store of the embedded queue.
package scheduler
