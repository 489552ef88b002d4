package scheduler

import (
	"context"
	"math"
	"time"

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
	samplePairs   = 64
	sampleTime    = time.Second
	secondsPerRow = 15e-6 // encoding a row of a part and joining it
	bytesPerValue = 16    // the same value stands in a part, compressed, and in modes.parquet

	bytesPerTile = 26e3  // a part's columns, their units and descriptions: most of the part of a small tile
	bytesPerRun  = 300e3 // the report
)

// Estimate solves a few pairs of neighbours spread over the grid, for a
// second or until the first pair is done, and scales up: of a tile, one point starts from
// nothing and the others from their neighbour. A point that fails or is left out by keep
// counts as one without modes.
func (p *Plan) Estimate(ctx context.Context, workers int) (Estimate, error) {
	problem, _, err := choose.New(p.Grid.Physics())
	if err != nil {
		return Estimate{}, err
	}
	var all pair
	if _, err := p.try(ctx, problem, 0); err != nil { // warms up
		return Estimate{}, err
	}
	k, begun := 0, time.Now()
	for ; k < samplePairs && (k == 0 || time.Since(begun) < sampleTime); k++ {
		one, err := p.try(ctx, problem, k)
		if err != nil {
			return Estimate{}, err
		}
		all.first, all.next, all.rows = all.first+one.first, all.next+one.next, all.rows+one.rows
	}
	all.first, all.next = all.first/time.Duration(k), all.next/time.Duration(k)
	return p.scale(all, float64(all.rows)/float64(2*k), workers), nil
}

// pair is how long two neighbours take, the first of which starts from nothing, and the modes of both.
type pair struct {
	first, next time.Duration
	rows        int
}

// try solves the k-th pair of the sample. An error is not of a point.
func (p *Plan) try(ctx context.Context, problem solvers.Problem, k int) (one pair, err error) {
	spread := (37*k + samplePairs/2) % samplePairs // from the middle, the first few already far apart
	t := p.Grid.Tile(spread * p.Grid.Tiles() / samplePairs)
	points, err := point.New(t)
	if err != nil {
		return one, err
	}
	local := k * 7919 % t.Points() // a prime, so that samples of one tile differ along every axis
	begun := time.Now()
	near, err := p.solve(ctx, problem, points, local, nil)
	if err != nil {
		return one, err
	}
	one.first = time.Since(begun)
	next, err := p.solve(ctx, problem, points, (local+1)%t.Points(), near)
	one.next, one.rows = time.Since(begun)-one.first, len(near)+len(next)
	return one, err
}

// solve gives a point's modes: none where keep leaves it out, its parameters cannot be evaluated or it fails.
func (p *Plan) solve(ctx context.Context, problem solvers.Problem, points *point.Points, local int, near []solvers.Mode) ([]solvers.Mode, error) {
	keep, bad := points.At(local)
	if !keep || bad != nil {
		return nil, nil
	}
	list, _, err := problem.Modes(ctx, points.Q, p.Grid.Physics().Modes, near)
	if ctx.Err() != nil {
		return nil, ctx.Err()
	}
	if err != nil {
		return nil, nil
	}
	return list, nil
}

// scale takes what a pair costs to the whole grid. Workers take whole tiles.
func (p *Plan) scale(of pair, modes float64, workers int) Estimate {
	n, tiles := float64(p.Grid.Points()), float64(p.Grid.Tiles())
	solving := tiles*of.first.Seconds() + (n-tiles)*of.next.Seconds()
	rows := n * max(modes, 1)
	rounds := math.Ceil(tiles / float64(max(workers, 1)))
	return Estimate{
		PointsPerSecond: n / solving,
		ModesPerPoint:   modes,
		Time:            time.Duration((solving + rows*secondsPerRow) * rounds / tiles * float64(time.Second)),
		DiskBytes:       int64(rows*float64(len(column.Modes(p.Grid.Physics())))*bytesPerValue + tiles*bytesPerTile + bytesPerRun),
	}
}
