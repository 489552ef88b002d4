package scheduler

import (
	"context"
	"errors"
	"fmt"

	"betaloom/scheduler/collate"
	"betaloom/scheduler/report"
	"betaloom/schema/queue"
	"betaloom/schema/store"
	"betaloom/schema/sweep"
)

// Options say what is run and where.
type Options struct {
	Sweep   *sweep.Sweep
	File    string // where the sweep was read from, for messages
	Dir     string // the run folder
	Workers int    // tiles solved at the same time; 0: 1
	Retry   bool   // try again what was set aside
	Version string // of the program, for run.json; the tables are joined anew when it changes

	// Worker runs a worker with so many slots until ctx ends, and returns nil
	// then. It may be nil with a URL: then the workers are elsewhere.
	Worker func(ctx context.Context, q queue.Taker, s store.Store, slots int) error

	URL   string        // of the queue server; empty: one inside the process
	Queue queue.Options // zero: its defaults

	Progress func(Progress)                                                       // hears several times a second how far the run is; may be nil
	Collate  func(ctx context.Context, in collate.Input) (collate.Summary, error) // nil: collate.Run
	Report   func(ctx context.Context, dir string) error                          // nil: report.Write

	// Hook, where set, is called with the name of each of the Points that the
	// run passes, and by the store with "before-rename". Tests end the process
	// there.
	Hook func(point string)
}

// The points that Hook hears of.
const (
	PointPublished = "published-some" // a job is on its way to the queue
	PointCollating = "collating"      // a part is being read to join it
)

// Validate fills in the defaults and rejects what cannot be.
func (o *Options) Validate() error {
	if o.Sweep == nil || o.Dir == "" {
		return errors.New("run: found no sweep or no folder, expected both")
	}
	if o.Worker == nil && o.URL == "" {
		return errors.New("run: found neither a worker nor the URL of a queue that has some, expected one of them")
	}
	if o.Workers < 0 {
		return fmt.Errorf("run: found %d workers, expected at least 1", o.Workers)
	}
	o.Workers = max(o.Workers, 1)
	if o.Progress == nil {
		o.Progress = func(Progress) {}
	}
	if o.Collate == nil {
		o.Collate = collate.Run
	}
	if o.Report == nil {
		o.Report = report.Write
	}
	if o.Hook == nil {
		o.Hook = func(string) {}
	}
	return o.Queue.Validate()
}
