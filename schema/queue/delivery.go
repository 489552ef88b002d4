package queue

import (
	"context"
	"errors"
	"fmt"
	"time"

	"github.com/nats-io/nats.go"
	"github.com/nats-io/nats.go/jetstream"
)

// AckWait implements Taker.
func (q *Queue) AckWait() time.Duration { return q.options.AckWait }

// Take implements Taker. Each call asks the server for one job, so that no
// job waits in a worker while another is free.
func (q *Queue) Take(ctx context.Context) (Delivery, error) {
	for {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		msg, err := q.consumer.Next(jetstream.FetchContext(endless{ctx}))
		if errors.Is(err, nats.ErrTimeout) {
			continue // none for half a minute
		}
		if err != nil {
			return nil, q.missing(ctx, err)
		}
		return q.delivery(msg)
	}
}

// endless hides a context's deadline, by which a request would end early.
type endless struct{ context.Context }

func (endless) Deadline() (time.Time, bool) { return time.Time{}, false }

// missing says why there is no job. A server that does not know the consumer
// answers as one that is starting does: only asking for it tells them apart.
func (q *Queue) missing(ctx context.Context, err error) error {
	if ctx.Err() != nil {
		return ctx.Err()
	}
	if errors.Is(err, nats.ErrNoResponders) || errors.Is(err, jetstream.ErrNoHeartbeat) {
		if _, asked := q.consumer.Info(ctx); asked != nil {
			err = asked
		}
	}
	return fmt.Errorf("queue of run %s: take: %w", q.run, gone(err))
}

func (q *Queue) delivery(msg jetstream.Msg) (Delivery, error) {
	meta, err := msg.Metadata()
	if err != nil {
		return nil, fmt.Errorf("queue of run %s: take: %w", q.run, err)
	}
	return &delivery{queue: q, msg: msg, attempt: int(meta.NumDelivered)}, nil
}

type delivery struct {
	queue   *Queue
	msg     jetstream.Msg
	attempt int
}

func (d *delivery) Message() []byte    { return d.msg.Data() }
func (d *delivery) Job() (*Job, error) { return Decode(d.msg.Data(), d.queue.run) }
func (d *delivery) Attempt() int       { return d.attempt }
func (d *delivery) Last() bool         { return d.attempt >= d.queue.options.MaxDeliver }

func (d *delivery) Working() error {
	return d.wrap("working", d.msg.InProgress())
}

func (d *delivery) Confirm(ctx context.Context) error {
	ctx, cancel := context.WithTimeout(ctx, requestTime)
	defer cancel()
	return d.wrap("confirm", d.msg.DoubleAck(ctx))
}

func (d *delivery) Retry(ctx context.Context, delay time.Duration) error {
	return d.sent(ctx, "retry", d.msg.NakWithDelay(delay))
}

func (d *delivery) GiveBack(ctx context.Context) error {
	if !d.Last() {
		return d.sent(ctx, "give back", d.msg.Nak())
	}
	// The queue has no delivery left for this message: it goes in anew. The
	// id is left out, or the server could take it for the old one and drop it.
	ack, err := d.queue.js.Publish(ctx, Subject(d.queue.run), d.msg.Data())
	if err != nil || ack.Duplicate {
		return d.wrap("give back", errors.Join(err, d.msg.Nak()))
	}
	return d.Refuse(ctx, "given back and published anew")
}

func (d *delivery) Refuse(ctx context.Context, reason string) error {
	return d.sent(ctx, "refuse", d.msg.TermWithReason(reason))
}

// sent waits until the server has read an answer that it does not answer
// itself.
func (d *delivery) sent(ctx context.Context, what string, err error) error {
	if err == nil {
		var cancel context.CancelFunc
		ctx, cancel = context.WithTimeout(ctx, requestTime)
		defer cancel()
		err = d.queue.nc.FlushWithContext(ctx)
	}
	return d.wrap(what, err)
}

func (d *delivery) wrap(what string, err error) error {
	if err == nil {
		return nil
	}
	return fmt.Errorf("queue of run %s: %s: %w", d.queue.run, what, gone(err))
}
