package scheduler

import (
	"context"
	"errors"
	"fmt"
	"time"

	"betaloom/scheduler/collate"
	"betaloom/scheduler/report"
	"betaloom/schema/store"
)

// Run leads the sweep's run in its folder to its end, from wherever it
// stands. When ctx ends it stops the workers, notes that the run was
// interrupted and returns an Outcome that says so. An error is one of the
// input (sweep.Diagnostics, *solvers.ScopeError, *FolderError), of the lock
// (store.ErrLocked) or a failure of the program, which run.json notes too.
func Run(ctx context.Context, o Options) (Outcome, error) {
	if err := o.Validate(); err != nil {
		return Outcome{}, err
	}
	plan, err := NewPlan(o.File, o.Sweep)
	if err != nil {
		return Outcome{}, err
	}
	f, err := openFolder(ctx, &o, plan)
	if ctx.Err() != nil && errors.Is(err, ctx.Err()) {
		return Outcome{Interrupted: true}, nil
	}
	if err != nil {
		return Outcome{}, err
	}
	r := &run{Options: o, plan: plan, folder: f}
	r.out.Record = f.record
	err = r.live(ctx)
	return r.out, r.end(ctx, err)
}

// run is a run while a process leads it.
type run struct {
	Options
	plan   *Plan
	folder *folder
	tiles  *tiles
	round  int // of the next publication
	out    Outcome
}

// end notes how the run ended and gives the error of the program, if any.
func (r *run) end(ctx context.Context, err error) error {
	state := Complete
	switch {
	case err != nil && ctx.Err() != nil:
		r.out.Interrupted = true
		state, err = Interrupted, nil
	case err != nil:
		state = Broken
	case len(r.out.Aside) > 0:
		state = Incomplete
	}
	return errors.Join(err, r.folder.end(state, err))
}

// mostRepairs bounds how often damaged parts are solved anew.
const mostRepairs = 3

// live takes the run from what its folder holds to the report.
func (r *run) live(ctx context.Context) (err error) {
	r.tell(Preparing)
	if r.tiles, err = newTiles(ctx, r.plan.Grid, r.folder.store); err != nil {
		return err
	}
	if r.Retry {
		if err := r.tiles.forgetAside(ctx); err != nil {
			return err
		}
	}
	j := joiner{folder: r.folder, tiles: r.tiles, collate: r.Collate, hook: r.Hook, version: r.Version, begins: func() { r.tell(Collating) }}
	for repairs := 0; ; repairs++ {
		if err := r.solve(ctx); err != nil {
			return err
		}
		err := j.join(ctx, &r.out, false)
		if err == nil {
			return r.report(ctx)
		}
		var damaged *collate.CorruptError
		if !errors.As(err, &damaged) || repairs == mostRepairs {
			return err
		}
		if err := r.drop(ctx, damaged); err != nil {
			return err
		}
	}
}

// drop deletes damaged parts, so that they are missing.
func (r *run) drop(ctx context.Context, damaged *collate.CorruptError) error {
	for _, p := range damaged.Parts {
		if err := r.folder.store.Delete(ctx, store.Part(p.Tile)); err != nil {
			return err
		}
	}
	return nil
}

// report writes the report, unless it was written for these tables.
func (r *run) report(ctx context.Context) error {
	record := r.folder.record
	if r.out.UpToDate && record.Reported == record.Tables.From && exists(r.folder.path(report.Name)) {
		return nil
	}
	r.out.UpToDate = false
	r.tell(Reporting)
	if err := r.folder.save(); err != nil { // the report is made from run.json
		return err
	}
	begun := time.Now()
	if err := r.Report(ctx, r.Dir); err != nil {
		return fmt.Errorf("report: %w", err)
	}
	record.ReportSeconds, record.Reported = time.Since(begun).Seconds(), record.Tables.From
	return nil
}

func (r *run) tell(phase Phase) {
	n := r.plan.Grid
	p := Progress{Phase: phase, At: time.Now().UTC(), Points: n.Points(), Tiles: n.Tiles()}
	if phase == Collating || phase == Reporting {
		p.PointsDone, p.TilesDone = p.Points, p.Tiles
	}
	r.Progress(p)
}
