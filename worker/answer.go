package worker

import (
	"context"
	"errors"
	"fmt"
	"time"

	"betaloom/schema/queue"
	"betaloom/schema/store"
	"betaloom/solvers"
)

// answerTime bounds the answer to a delivery when the worker stops.
const answerTime = 10 * time.Second

// longestRetry bounds the pause before another attempt.
const longestRetry = time.Minute

// verdict is what is done with a delivery.
type verdict int

const (
	confirm  verdict = iota
	retry            // the queue delivers it again, after a pause
	setAside         // recorded with its reason, never delivered again
	refuse           // no job: recorded, never delivered again
	giveBack         // the worker stops; another takes it
)

// decide is the table of what becomes of a delivery: the one place where it
// is decided to try again or to give up.
func decide(err error, stopping, last bool) verdict {
	switch {
	case err == nil:
		return confirm
	case is[*queue.RefuseError](err):
		return refuse
	case is[*storeError](err): // nothing can be recorded: let another worker try
		return giveBack
	case stopping:
		return giveBack
	case is[*solvers.InputError](err), is[*solvers.ScopeError](err): // trying again gives the same
		return setAside
	case last:
		return setAside
	}
	return retry // panics, and whatever else is not known to be final
}

func is[E error](err error) bool {
	var e E
	return errors.As(err, &e)
}

// storeError marks an error of the store, after which the worker stops.
type storeError struct{ err error }

func (e *storeError) Error() string { return e.err.Error() }
func (e *storeError) Unwrap() error { return e.err }

func storeFailure(err error) error {
	if err == nil {
		return nil
	}
	return &storeError{err: err}
}

// answer ends a delivery. An error is one that the worker cannot go on after.
func (s *slot) answer(ctx context.Context, d queue.Delivery, r result) error {
	stopping := ctx.Err() != nil
	ctx, cancel := context.WithTimeout(context.WithoutCancel(ctx), answerTime)
	defer cancel()
	v := decide(r.err, stopping, d.Last())
	if err := s.record(ctx, v, d, r); err != nil {
		v, r.err = giveBack, err
	}
	err := s.reply(ctx, v, d, r)
	if err != nil {
		s.tell(Event{Kind: QueueTrouble, Tile: r.tile, Err: err})
	} else {
		s.report(v, d, r)
	}
	if is[*storeError](r.err) && !stopping {
		return fmt.Errorf("worker: %w", r.err)
	}
	return nil
}

// record stores what must outlive the delivery before the queue is told.
func (s *slot) record(ctx context.Context, v verdict, d queue.Delivery, r result) error {
	switch v {
	case setAside:
		return storeFailure(store.PutAside(ctx, s.Store, store.SetAside{Tile: r.tile, Reason: r.err.Error(), Attempts: d.Attempt()}))
	case refuse:
		m := d.Message()
		record := refused{Reason: r.err.Error(), Bytes: len(m), Begins: m[:min(len(m), refusedBytes)]}
		return storeFailure(store.PutJSON(ctx, s.Store, store.Refused(queue.ID(m)), record))
	}
	return nil
}

// refusedBytes is how much of a refused message is kept.
const refusedBytes = 4096

// refused is the content of a record of a refused message, as JSON.
type refused struct {
	Reason string `json:"reason"`
	Bytes  int    `json:"bytes"`
	Begins []byte `json:"begins"` // its first bytes, in base64
}

func (s *slot) reply(ctx context.Context, v verdict, d queue.Delivery, r result) error {
	switch v {
	case confirm:
		return d.Confirm(ctx)
	case retry:
		return d.Retry(ctx, s.delay(d.Attempt()))
	case giveBack:
		return d.GiveBack(ctx)
	}
	return d.Refuse(ctx, r.err.Error())
}

// delay is the pause after the n-th attempt.
func (s *slot) delay(n int) time.Duration {
	d := s.RetryDelay
	for range n - 1 {
		d = min(2*d, longestRetry)
	}
	return d
}

func (s *slot) report(v verdict, d queue.Delivery, r result) {
	e := Event{Tile: r.tile, Attempt: d.Attempt(), Took: r.took, Err: r.err, Counts: Counts{Points: r.points}}
	switch v {
	case confirm:
		e.Kind, e.Counts = TileFinished, r.counts
		if r.reused {
			e.Kind, e.Counts = TileReused, Counts{Points: r.points}
		}
	case retry:
		e.Kind = TileRetried
	case setAside:
		e.Kind = TileSetAside
	case giveBack:
		e.Kind = TileGivenBack
	case refuse:
		e.Kind = MessageRefused
	}
	s.tell(e)
}
