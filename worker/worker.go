package worker

import (
	"context"
	"errors"
	"fmt"
	"sync"
	"time"

	"betaloom/schema"
	"betaloom/schema/queue"
	"betaloom/schema/store"
	"betaloom/solvers"
	"betaloom/solvers/choose"
)

// Options say what a worker takes and where it writes.
type Options struct {
	Queue queue.Taker
	Store store.Store
	Slots int // tiles solved at the same time; 0: 1

	// RetryDelay is the pause before the second attempt at a tile; it doubles
	// with each further one, up to a minute. 0: 1 s.
	RetryDelay time.Duration

	// Problem makes the problem of a tile's physics; nil: choose.New. A slot
	// keeps it for the next tile of the same physics.
	Problem func(p *schema.Physics) (solvers.Problem, []string, error)

	// Events, where set, hears what the worker does. It is called by all slots
	// at the same time and holds them up while it runs.
	Events func(Event)

	// Hook, where set, is called with the name of each of the Points that a
	// slot passes. Tests end the process there.
	Hook func(point string)
}

// The points that Hook hears of.
const (
	PointSolved  = "solved"       // a tile is solved, nothing written
	PointWritten = "part-written" // the part is durable, the job not confirmed
)

// Validate fills in the defaults and rejects what cannot be.
func (o *Options) Validate() error {
	if o.Queue == nil || o.Store == nil {
		return errors.New("worker: found no queue or no store, expected both")
	}
	if o.Slots < 0 || o.RetryDelay < 0 {
		return fmt.Errorf("worker: found %d slots and a retry delay of %s, expected none below 0", o.Slots, o.RetryDelay)
	}
	o.Slots = max(o.Slots, 1)
	if o.RetryDelay == 0 {
		o.RetryDelay = time.Second
	}
	if o.Problem == nil {
		o.Problem = choose.New
	}
	if o.Events == nil {
		o.Events = func(Event) {}
	}
	if o.Hook == nil {
		o.Hook = func(string) {}
	}
	return nil
}

// Run takes and solves tiles until ctx ends, gives back what is in hand and
// returns nil. It returns early, with an error, when the queue is gone or the
// store fails.
func Run(ctx context.Context, o Options) error {
	if err := o.Validate(); err != nil {
		return err
	}
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	errs := make([]error, o.Slots)
	var slots sync.WaitGroup
	for i := range o.Slots {
		slots.Go(func() {
			s := slot{Options: o, number: i}
			if errs[i] = s.run(ctx); errs[i] != nil {
				cancel() // the others would fail in the same way
			}
		})
	}
	slots.Wait()
	return errors.Join(errs...)
}

// slot solves one tile after the other.
type slot struct {
	Options
	number int
	kept   kept
}

// takePause is how long a slot waits after the queue could not be reached.
const takePause = time.Second

func (s *slot) run(ctx context.Context) error {
	for {
		d, err := s.Queue.Take(ctx)
		switch {
		case err == nil:
			if err := s.handle(ctx, d); err != nil {
				return err
			}
		case ctx.Err() != nil:
			return nil
		case errors.Is(err, queue.ErrGone):
			return fmt.Errorf("worker: %w", err)
		default:
			s.tell(Event{Kind: QueueTrouble, Err: err})
			pause(ctx, takePause)
		}
	}
}

func pause(ctx context.Context, d time.Duration) {
	t := time.NewTimer(d)
	defer t.Stop()
	select {
	case <-ctx.Done():
	case <-t.C:
	}
}

// handle works on one delivery and answers it.
func (s *slot) handle(ctx context.Context, d queue.Delivery) error {
	begun := time.Now()
	rest := s.heartbeat(d)
	r := s.work(ctx, d)
	rest()
	r.took = time.Since(begun)
	return s.answer(ctx, d, r)
}

// heartbeat tells the queue that a job is in hand until the returned function
// is called.
func (s *slot) heartbeat(d queue.Delivery) (rest func()) {
	done := make(chan struct{})
	var beats sync.WaitGroup
	beats.Go(func() {
		tick := time.NewTicker(s.Queue.AckWait() / 3)
		defer tick.Stop()
		for {
			select {
			case <-done:
				return
			case <-tick.C:
				if err := d.Working(); err != nil {
					s.tell(Event{Kind: QueueTrouble, Err: err})
				}
			}
		}
	})
	return func() {
		close(done)
		beats.Wait()
	}
}

// result is what came of a delivery.
type result struct {
	tile   string // empty where the message is no job
	points int
	counts Counts
	reused bool
	took   time.Duration
	err    error
}

// work solves the tile of a delivery and stores its part.
func (s *slot) work(ctx context.Context, d queue.Delivery) (r result) {
	job, err := d.Job()
	if err != nil {
		return result{err: err}
	}
	r.tile, r.points = job.Name, job.Tile.Points()
	s.tell(Event{Kind: TileStarted, Tile: r.tile, Attempt: d.Attempt(), Counts: Counts{Points: r.points}})
	_, err = s.Store.Get(ctx, store.Part(job.Name))
	if !errors.Is(err, store.ErrNotFound) {
		r.reused, r.err = err == nil, storeFailure(err)
		return r
	}
	var part []byte
	if part, r.counts, r.err = s.solve(ctx, job); r.err != nil {
		return r
	}
	s.Hook(PointSolved)
	if r.err = storeFailure(s.Store.Put(context.WithoutCancel(ctx), store.Part(job.Name), part)); r.err != nil {
		return r
	}
	s.Hook(PointWritten)
	return r
}
