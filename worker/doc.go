// Package worker solves tiles: it takes a job from the queue, solves the
// tile's points in their order, stores the part and then confirms the job.
//
// Words: a slot is one tile being solved, and a worker has any number of
// them; a tile is reused when its part is in the store already; it is set
// aside when it cannot be solved, and given back when the worker stops while
// it is in hand.
//
// What it promises: a job is confirmed only after its part is durable. The
// bytes of a part depend on the tile and the program alone, whatever else
// the worker solves, however often it is interrupted and whoever else solves
// the same tile. A point that cannot be solved is a row with its reason and
// fails nothing else. What goes wrong with a tile as a whole, panics of a
// solver or a library included, is judged in one place (decide): it is
// tried again elsewhere after a while, or recorded and set aside. No
// message stops a worker; a store that cannot be written does.
package worker
