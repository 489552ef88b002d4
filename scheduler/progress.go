package scheduler

import (
	"time"
)

// Phase is what a run is doing.
type Phase string

// The phases of a run, in their order.
const (
	Preparing Phase = "preparing"
	Solving   Phase = "solving"
	Collating Phase = "collating"
	Reporting Phase = "reporting"
)

// Progress is how far a run has come. While solving, points are counted as
// the tiles' share of all points.
type Progress struct {
	Phase      Phase     `json:"phase"`
	At         time.Time `json:"at"`
	Tiles      int       `json:"tiles"`
	TilesDone  int       `json:"tiles_done"` // with a part or set aside
	InHand     int       `json:"tiles_in_hand"`
	Points     int       `json:"points"`
	PointsDone int       `json:"points_done"`
	Rate       float64   `json:"points_per_second"` // of this start; 0 where not known yet
	Left       float64   `json:"seconds_left"`      // of solving; 0 where not known yet
}

// meter turns counts of tiles into Progress.
type meter struct {
	points, tiles int
	begun         time.Time
	before        int // tiles that were done when it began
}

func (m *meter) at(now time.Time, phase Phase, done, inHand int) Progress {
	p := Progress{
		Phase: phase, At: now.UTC(), Tiles: m.tiles, TilesDone: done, InHand: inHand, Points: m.points,
		PointsDone: m.share(done),
	}
	seconds := now.Sub(m.begun).Seconds()
	if fresh := p.PointsDone - m.share(m.before); fresh > 0 && seconds > 0 {
		p.Rate = float64(fresh) / seconds
		p.Left = float64(m.points-p.PointsDone) / p.Rate
	}
	return p
}

// share is the number of points in so many tiles, taken as of one size.
func (m *meter) share(tiles int) int {
	if m.tiles == 0 {
		return 0
	}
	return int(float64(m.points) * float64(tiles) / float64(m.tiles))
}
