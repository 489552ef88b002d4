package worker

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"runtime/debug"

	"betaloom/schema"
	"betaloom/schema/part"
	"betaloom/schema/point"
	"betaloom/schema/queue"
	"betaloom/solvers"
)

// PanicError is a panic of a solver or a library while a tile was solved.
type PanicError struct {
	Value any
	Stack []byte
}

func (e *PanicError) Error() string { return fmt.Sprintf("the solver panicked: %v", e.Value) }

// solve gives the part of a job's tile.
func (s *slot) solve(ctx context.Context, job *queue.Job) (encoded []byte, c Counts, err error) {
	defer func() {
		if v := recover(); v != nil {
			s.kept = kept{}
			err = &PanicError{Value: v, Stack: debug.Stack()}
		}
	}()
	physics := &job.Tile.Physics
	problem, err := s.problem(physics)
	if err != nil {
		return nil, Counts{}, err
	}
	points, err := point.New(&job.Tile)
	if err != nil {
		return nil, Counts{}, inputError(err)
	}
	t := tile{physics: physics, problem: problem, points: points, part: part.NewBuilder(physics)}
	for i := range job.Tile.Points() {
		if err := t.point(ctx, i); err != nil {
			return nil, Counts{}, fmt.Errorf("point %d of the tile: %w", i, err)
		}
	}
	encoded, err = t.part.Encode(job.Name)
	return encoded, t.counts, err
}

// kept is the problem of the tile before. The tiles of a run have the same
// physics, and to compile it may mean to fit long tables; the answers of a
// problem do not depend on what it was asked before.
type kept struct {
	physics []byte
	problem solvers.Problem
}

// problem gives the problem of a tile's physics.
func (s *slot) problem(physics *schema.Physics) (solvers.Problem, error) {
	key, err := json.Marshal(physics)
	if err != nil {
		return nil, fmt.Errorf("physics: %w", err)
	}
	if s.kept.problem != nil && bytes.Equal(s.kept.physics, key) {
		return s.kept.problem, nil
	}
	problem, _, err := s.Problem(physics)
	if err != nil {
		return nil, err
	}
	s.kept = kept{key, problem}
	return problem, nil
}

// tile is a tile while it is solved.
type tile struct {
	physics *schema.Physics
	problem solvers.Problem
	points  *point.Points
	part    *part.Builder
	near    memory // the modes of the point before, to start from
	rows    []part.Mode
	counts  Counts
}

// point solves the i-th point and adds it to the part. An error is one of the
// whole tile.
func (t *tile) point(ctx context.Context, i int) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	row, modes, err := t.modes(ctx, i)
	if err != nil && !ofPoint(err) {
		return err
	}
	if err != nil {
		row.State, row.Reason = part.Failed, err.Error()
	}
	t.rows = t.rows[:0]
	if row.State == part.Solved {
		t.near.keep(modes)
		t.rows = convert(t.rows, modes)
	}
	t.count(&row)
	return t.part.Add(row, t.rows)
}

// ofPoint reports whether an error concerns one point and no other.
func ofPoint(err error) bool {
	return is[*solvers.InputError](err) || is[*solvers.ConvergenceError](err)
}

// inputError turns what is wrong with a tile's parameters into the solvers' kind
// of error: trying again gives the same.
func inputError(err error) error {
	var e *point.Error
	if errors.As(err, &e) {
		return &solvers.InputError{Where: e.Where, Found: e.Found, Expected: e.Expected}
	}
	return err
}

// modes solves the i-th point.
func (t *tile) modes(ctx context.Context, i int) (part.Point, []solvers.Mode, error) {
	keep, err := t.points.At(i)
	row := part.Point{Values: t.points.Values, FrequencyHz: t.points.FrequencyHz, Guided: part.Missing}
	if err != nil {
		return row, nil, inputError(err)
	}
	if !keep {
		row.State, row.Reason = part.Excluded, "keep: "+t.physics.Keep
		return row, nil, nil
	}
	modes, count, err := t.problem.Modes(ctx, t.points.Q, t.physics.Modes, t.near.modes)
	if err != nil {
		return row, nil, err
	}
	row.Guided, row.State = count.N, part.Solved
	if len(modes) == 0 {
		if count.N != 0 {
			return row, nil, errors.New("the solver counted guided modes and gave none")
		}
		row.State, row.Reason = part.NoMode, count.Reason
	}
	return row, modes, nil
}

func (t *tile) count(row *part.Point) {
	t.counts.Points++
	switch row.State {
	case part.Solved:
		t.counts.Solved++
	case part.NoMode:
		t.counts.NoMode++
	case part.Failed:
		t.counts.Failed++
	case part.Excluded:
		t.counts.Excluded++
	}
	t.counts.Modes += len(t.rows)
}
