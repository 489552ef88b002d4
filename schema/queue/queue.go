package queue

import (
	"context"
	"errors"
	"fmt"
	"time"

	"github.com/nats-io/nats.go"
	"github.com/nats-io/nats.go/jetstream"
)

// Taker hands out jobs.
type Taker interface {
	// Take waits for the next delivery. The queue then counts on an answer
	// within AckWait, and delivers the job again where none comes. Take returns
	// ctx's error when ctx ends, ErrGone when the queue is not there any more;
	// after any other error it may be called again.
	Take(ctx context.Context) (Delivery, error)

	// AckWait is how long the queue waits for a sign of life from the worker
	// that holds a delivery.
	AckWait() time.Duration
}

// Delivery is one handing out of a job. Exactly one of Confirm, Retry,
// GiveBack and Refuse ends it. Where one of them fails, the queue may or may
// not have heard it: it may deliver the job again, which must be harmless.
type Delivery interface {
	// Message is the raw message, for records of what was refused.
	Message() []byte

	// Job decodes the message; a *RefuseError where it is no job of this run.
	Job() (*Job, error)

	// Attempt counts the deliveries of this job, this one included. Last
	// says that the queue would not deliver it again.
	Attempt() int
	Last() bool

	// Working tells the queue that the job is being worked on: AckWait begins
	// anew.
	Working() error

	// Confirm says that the job is done for good. When it returns nil the
	// queue has removed the job.
	Confirm(ctx context.Context) error

	// Retry says that the job failed here: the queue delivers it again, to
	// any worker, after the delay. After the Last attempt the queue holds it
	// back instead and counts it as stuck.
	Retry(ctx context.Context, delay time.Duration) error

	// GiveBack says that this worker stops: the queue delivers the job to
	// another at once. Unlike Retry it does so after the last attempt too.
	GiveBack(ctx context.Context) error

	// Refuse says that the job shall never be delivered again; the queue
	// removes it.
	Refuse(ctx context.Context, reason string) error
}

// ErrGone says that the queue was deleted or its connection closed for good.
var ErrGone = errors.New("the queue is gone")

// Options are the settings of a queue. They are fixed when it is created.
type Options struct {
	AckWait     time.Duration // 0: 30 s
	MaxDeliver  int           // attempts; 0: 5
	MaxMessages int64         // that wait at one time, more wait in Publish; 0: 100,000
}

// Validate fills in the defaults and rejects what cannot be.
func (o *Options) Validate() error {
	if o.AckWait < 0 || o.MaxDeliver < 0 || o.MaxMessages < 0 {
		return fmt.Errorf("queue: found %+v, expected no negative option", *o)
	}
	if o.AckWait == 0 {
		o.AckWait = 30 * time.Second
	}
	if o.MaxDeliver == 0 {
		o.MaxDeliver = 5
	}
	if o.MaxMessages == 0 {
		o.MaxMessages = 100_000
	}
	return nil
}

// Queue is the queue of one run on a server. It is a Taker for any number of
// goroutines.
type Queue struct {
	nc       *nats.Conn
	js       jetstream.JetStream
	stream   jetstream.Stream
	consumer jetstream.Consumer
	run      string
	options  Options
}

// workers is the name of the one consumer that all workers share.
const workers = "workers"

func streamName(run string) string { return "betaloom-" + run }

// Subject is where the jobs of a run are published.
func Subject(run string) string { return "betaloom." + run + ".tiles" }

// requestTime bounds one request to the server.
const requestTime = 20 * time.Second

// Create makes the queue of a run, or opens it where it is there already.
func Create(ctx context.Context, nc *nats.Conn, run string, o Options) (*Queue, error) {
	if err := o.Validate(); err != nil {
		return nil, err
	}
	js, err := open(nc, run)
	if err != nil {
		return nil, err
	}
	stream, err := js.CreateOrUpdateStream(ctx, jetstream.StreamConfig{
		Name:        streamName(run),
		Description: "tiles of a betaloom run",
		Subjects:    []string{Subject(run)},
		Retention:   jetstream.WorkQueuePolicy,
		Discard:     jetstream.DiscardNew,
		MaxMsgs:     o.MaxMessages,
		Storage:     jetstream.FileStorage,
		Compression: jetstream.S2Compression, // all jobs of a run share their physics
	})
	if err != nil {
		return nil, fmt.Errorf("queue of run %s: %w", run, err)
	}
	consumer, err := stream.CreateOrUpdateConsumer(ctx, jetstream.ConsumerConfig{
		Durable:       workers,
		AckPolicy:     jetstream.AckExplicitPolicy,
		AckWait:       o.AckWait,
		MaxDeliver:    o.MaxDeliver,
		MaxAckPending: -1, // each worker takes no more than its slots hold
	})
	if err != nil {
		return nil, fmt.Errorf("queue of run %s: %w", run, err)
	}
	return &Queue{nc: nc, js: js, stream: stream, consumer: consumer, run: run, options: o}, nil
}

// Attach opens the queue of a run that another process has created.
func Attach(ctx context.Context, nc *nats.Conn, run string) (*Queue, error) {
	js, err := open(nc, run)
	if err != nil {
		return nil, err
	}
	stream, err := js.Stream(ctx, streamName(run))
	if err != nil {
		return nil, fmt.Errorf("queue of run %s: %w", run, gone(err))
	}
	consumer, err := stream.Consumer(ctx, workers)
	if err != nil {
		return nil, fmt.Errorf("queue of run %s: %w", run, gone(err))
	}
	c := consumer.CachedInfo().Config
	o := Options{AckWait: c.AckWait, MaxDeliver: c.MaxDeliver, MaxMessages: stream.CachedInfo().Config.MaxMsgs}
	return &Queue{nc: nc, js: js, stream: stream, consumer: consumer, run: run, options: o}, nil
}

func open(nc *nats.Conn, run string) (jetstream.JetStream, error) {
	if err := checkRun(run); err != nil {
		return nil, err
	}
	js, err := jetstream.New(nc, jetstream.WithDefaultTimeout(requestTime), jetstream.WithPublishAsyncTimeout(requestTime))
	if err != nil {
		return nil, fmt.Errorf("queue of run %s: %w", run, err)
	}
	return js, nil
}

// checkRun keeps what has a meaning in a subject out of it.
func checkRun(run string) error {
	if run == "" || len(run) > 64 {
		return fmt.Errorf("queue: found a run id of %d bytes, expected 1 to 64", len(run))
	}
	for _, c := range run {
		if c >= 'a' && c <= 'z' || c >= '0' && c <= '9' || c == '-' {
			continue
		}
		return fmt.Errorf("queue: run id %q: found %q, expected lower-case letters, digits and hyphens", run, c)
	}
	return nil
}

// Run is the id of the queue's run.
func (q *Queue) Run() string { return q.run }

// State is what a queue holds.
type State struct {
	Jobs    int // not confirmed or refused yet
	InHand  int // of them, delivered and not answered yet, or waiting for the delay of a Retry
	Waiting int // not delivered yet
	Stuck   int // delivered as often as allowed, and held back; known when none is waiting
}

// State asks the server what the queue holds. The server counts while workers
// go on: a job that has just been answered may be counted still.
func (q *Queue) State(ctx context.Context) (State, error) {
	c, err := q.consumer.Info(ctx)
	if err != nil {
		return State{}, fmt.Errorf("queue of run %s: %w", q.run, gone(err))
	}
	s, err := q.stream.Info(ctx)
	if err != nil {
		return State{}, fmt.Errorf("queue of run %s: %w", q.run, gone(err))
	}
	st := State{Jobs: int(s.State.Msgs), InHand: c.NumAckPending}
	rest := max(0, st.Jobs-st.InHand)
	// The server's own count of waiting jobs lags behind what it has stored;
	// sequence numbers do not.
	if c.Delivered.Stream < s.State.LastSeq {
		st.Waiting = rest
	} else {
		st.Stuck = rest
	}
	return st, nil
}

// Delete removes the queue with all its jobs. Workers that wait in Take get
// ErrGone.
func (q *Queue) Delete(ctx context.Context) error {
	err := q.js.DeleteStream(ctx, streamName(q.run))
	if err != nil && !errors.Is(err, jetstream.ErrStreamNotFound) {
		return fmt.Errorf("queue of run %s: %w", q.run, err)
	}
	return nil
}

// gone turns the ways in which a queue can be missing into ErrGone.
func gone(err error) error {
	for _, is := range []error{
		jetstream.ErrStreamNotFound, jetstream.ErrConsumerNotFound, jetstream.ErrConsumerDeleted, nats.ErrConnectionClosed,
	} {
		if errors.Is(err, is) {
			return fmt.Errorf("%w: %w", ErrGone, err)
		}
	}
	return err
}
