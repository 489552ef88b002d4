package worker

import "time"

// Kind says what an Event is about.
type Kind string

// The kinds of event.
const (
	TileStarted    Kind = "tile started"
	TileFinished   Kind = "tile finished"
	TileReused     Kind = "tile reused"    // its part was in the store
	TileRetried    Kind = "tile retried"   // it failed and will be delivered again
	TileSetAside   Kind = "tile set aside" // it failed for good
	TileGivenBack  Kind = "tile given back"
	MessageRefused Kind = "message refused"
	QueueTrouble   Kind = "queue trouble" // a request failed; the worker goes on
)

// Event is something that a worker did. Fields that say nothing about a kind
// are zero.
type Event struct {
	Kind    Kind
	Slot    int
	Tile    string
	Attempt int
	Counts  Counts // all of it for TileFinished, otherwise Points at most
	Took    time.Duration
	Err     error
}

// Counts are the points of a tile by state, and its modes.
type Counts struct {
	Points, Solved, NoMode, Failed, Excluded int
	Modes                                    int
}

func (s *slot) tell(e Event) {
	e.Slot = s.number
	s.Events(e)
}
