package scheduler

import (
	"context"
	"errors"
	"fmt"
	"sync/atomic"
	"time"

	"betaloom/schema/queue"
)

const (
	watchPoll    = 50 * time.Millisecond // how often the queue is asked
	progressPoll = time.Second           // how often progress.json is written
	patience     = 2 * time.Minute       // for a queue that does not answer
	stuckLooks   = 5                     // that agree before jobs count as stuck
)

// watch follows one round: the jobs go into the queue while the workers
// take them out.
type watch struct {
	*run
	session *session
	meter   *meter
	numbers []int // of the tiles
	round   int

	sent     atomic.Int64
	stored   bool // all of them
	stuckFor int  // looks
	answered time.Time
	written  time.Time
}

// follow returns when the queue has nothing to deliver any more; stuck says
// that it holds jobs all the same.
func (w *watch) follow(ctx context.Context) (stuck bool, err error) {
	ctx, cancel := context.WithCancel(ctx)
	published := make(chan error, 1)
	go func() { published <- w.publish(ctx) }()
	defer func() {
		cancel()
		if !w.stored {
			<-published
		}
	}()
	tick := time.NewTicker(watchPoll)
	defer tick.Stop()
	w.answered = time.Now()
	for {
		select {
		case <-ctx.Done():
			return false, ctx.Err()
		case err := <-w.session.worker:
			w.session.worker <- err // for close
			return false, errors.Join(errors.New("run: the worker has stopped"), err)
		case err := <-published:
			w.stored = true
			if err != nil {
				return false, err
			}
		case <-tick.C:
			if stuck, over, err := w.look(ctx); over || err != nil {
				return stuck, err
			}
		}
	}
}

func (w *watch) publish(ctx context.Context) error {
	jobs := w.tiles.jobs(w.session.queue.Run(), w.round, w.numbers, func() {
		w.sent.Add(1)
		w.Hook(PointPublished)
	})
	_, err := w.session.queue.Publish(ctx, jobs)
	return err
}

// look asks the queue how far the round is.
func (w *watch) look(ctx context.Context) (stuck, over bool, err error) {
	st, err := w.session.queue.State(ctx)
	now := time.Now()
	if err != nil {
		if errors.Is(err, queue.ErrGone) || now.Sub(w.answered) > patience {
			return false, true, fmt.Errorf("run: %w", err)
		}
		return false, false, nil
	}
	w.answered = now
	if err := w.note(now, st); err != nil {
		return false, true, err
	}
	if st.Jobs > 0 && st.Stuck == st.Jobs {
		w.stuckFor++
	} else {
		w.stuckFor = 0
	}
	stuck = w.stuckFor >= stuckLooks
	return stuck, w.stored && (st.Jobs == 0 || stuck), nil
}

// note tells how far the run is, and every second the folder too.
func (w *watch) note(now time.Time, st queue.State) error {
	left := len(w.numbers) - int(w.sent.Load()) + st.Jobs
	p := w.meter.at(now, Solving, w.meter.tiles-min(left, w.meter.tiles), st.InHand)
	w.Progress(p)
	if now.Sub(w.written) < progressPoll {
		return nil
	}
	w.written = now
	return writeJSON(w.folder.path(fileProgress), p, "  ")
}
