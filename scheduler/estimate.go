package scheduler

import (
	"context"
	"math"
	"time"

	"betaloom/scheduler/grid"
	"betaloom/schema"
	"betaloom/schema/column"
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
// second at most, and scales up. A point that fails counts as one without
// modes.
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
		q := sample(p.Grid, max(k, 0))
		modes, _, err := problem.Modes(ctx, q, p.Grid.Physics().Modes, nil)
		if ctx.Err() != nil {
			return Estimate{}, ctx.Err()
		}
		if k < 0 {
			continue
		}
		points++
		if err == nil {
			rows += len(modes)
		}
	}
	return p.scale(points, rows, time.Since(begun), workers), nil
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

// sample gives the k-th of the points to try.
func sample(g *grid.Grid, k int) solvers.Q {
	t := g.Tile(k * g.Tiles() / samplePoints)
	values := make(map[string]float64)
	for _, q := range g.Physics().Parameters {
		if q.Kind == schema.Fixed {
			values[q.Name] = q.Value
		}
	}
	local := k * 7919 % t.Points() // a prime, so that samples of one tile differ along every axis
	row := t.Values(local, nil)
	for i, name := range t.Varying() {
		values[name] = row[i]
	}
	return point(g.Physics(), values)
}

func point(p *schema.Physics, values map[string]float64) solvers.Q {
	q := solvers.Q{math.NaN()}
	for name, v := range values {
		if w, ok := grid.AngularFrequency(name, v); ok {
			q[0] = w
		}
	}
	for _, name := range p.Base() {
		q = append(q, values[name])
	}
	return q
}
