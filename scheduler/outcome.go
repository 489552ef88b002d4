package scheduler

import (
	"betaloom/scheduler/collate"
	"betaloom/schema/store"
)

// Outcome is how a run ended, when the program itself did not fail.
type Outcome struct {
	Record      *Record
	Interrupted bool             // it can be started again
	UpToDate    bool             // there was nothing to do
	Aside       []store.SetAside // the tiles that could not be solved, in the grid's order
	Summary     *collate.Summary // of the tables; nil where Interrupted
}
