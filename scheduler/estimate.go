package scheduler

import (
	"context"
	"time"

	"betaloom/scheduler/grid"
	"betaloom/schema/column"
	"betaloom/schema/point"
	"betaloom/solvers"
	"betaloom/solvers/choose"
)

// Estimate is what a run will roughly take.
type Estimate struct {
	PointsPerSecond float64 // solved by one core
	ModesPerPoint   float64
	Time            time.Duration // with the workers given, joining included
	DiskBytes       int64         // of parts, tables and surfaces
}

// What the estimate rests on besides the sample.
const (
	samplePoints  = 64
	sampleTime    = 250 * time.Millisecond
	secondsPerRow = 15e-6 // encoding a row of a part and joining it
	bytesPerValue = 16    // the same value stands in a part, compressed, and in modes.parquet
)

// Estimate solves a few points spread over the grid, for a quarter of a
// second at most, and scales up. A point that fails or is left out by keep
// counts as one without modes.
func (p *Plan) Estimate(ctx context.Context, workers int) (Estimate, error) {
	problem, _, err := choose.New(p.Grid.Physics())
	if err != nil {
		return Estimate{}, err
	}
	points, rows := 0, 0
	begun := time.Now()
	for k := -1; k < samplePoints && time.Since(begun) < sampleTime; k++ {
		if k == 0 {
			begun = time.Now() // the first one warms up
		}
		n, err := p.try(ctx, problem, max(k, 0))
		if err != nil {
			return Estimate{}, err
		}
		if k >= 0 {
			points++
			rows += n
		}
	}
	return p.scale(points, rows, time.Since(begun), workers), nil
}

// try solves the k-th sample point and counts its modes. An error is not of
// the point.
func (p *Plan) try(ctx context.Context, problem solvers.Problem, k int) (modes int, err error) {
	q, ok, err := sample(p.Grid, k)
	if err != nil || !ok {
		return 0, err
	}
	list, _, err := problem.Modes(ctx, q, p.Grid.Physics().Modes, nil)
	if ctx.Err() != nil {
		return 0, ctx.Err()
	}
	if err != nil {
		return 0, nil
	}
	return len(list), nil
}

func (p *Plan) scale(points, rows int, took time.Duration, workers int) Estimate {
	points = max(points, 1)
	n := float64(p.Grid.Points())
	e := Estimate{
		PointsPerSecond: float64(points) / took.Seconds(),
		ModesPerPoint:   float64(rows) / float64(points),
	}
	allRows := n * max(e.ModesPerPoint, 1)
	seconds := (n/e.PointsPerSecond + allRows*secondsPerRow) / float64(max(workers, 1))
	e.Time = time.Duration(seconds * float64(time.Second))
	e.DiskBytes = int64(allRows * float64(len(column.Modes(p.Grid.Physics()))) * bytesPerValue)
	return e
}

// sample gives the k-th of the points to try; ok is false where keep leaves it
// out or its parameters cannot be evaluated.
func sample(g *grid.Grid, k int) (q solvers.Q, ok bool, err error) {
	t := g.Tile(k * g.Tiles() / samplePoints)
	points, err := point.New(t)
	if err != nil {
		return nil, false, err
	}
	keep, bad := points.At(k * 7919 % t.Points()) // a prime, so that samples of one tile differ along every axis
	return points.Q, keep && bad == nil, nil
}
