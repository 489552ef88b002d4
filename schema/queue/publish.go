package queue

import (
	"context"
	"errors"
	"fmt"
	"iter"
	"strings"
	"time"

	"github.com/nats-io/nats.go"
	"github.com/nats-io/nats.go/jetstream"
)

// inFlight is how many messages may be on their way to the server.
const inFlight = 128

// roomPoll is how often Publish looks whether a full queue has room again.
const roomPoll = 50 * time.Millisecond

// Publish puts jobs into the queue and counts those that the server has
// stored; it drops one that it has seen moments ago. A full queue makes Publish
// wait. When it returns nil every job is stored. The sequence may end with an
// error, which Publish returns.
func (q *Queue) Publish(ctx context.Context, jobs iter.Seq2[*Job, error]) (stored int, err error) {
	p := publisher{queue: q}
	for job, err := range jobs {
		if err == nil {
			err = p.add(ctx, job)
		}
		if err != nil {
			return p.stored, fmt.Errorf("queue of run %s: publish: %w", q.run, err)
		}
	}
	for len(p.sent) > 0 {
		if err := p.settle(ctx); err != nil {
			return p.stored, fmt.Errorf("queue of run %s: publish: %w", q.run, err)
		}
	}
	return p.stored, nil
}

// publisher sends without waiting for each answer.
type publisher struct {
	queue  *Queue
	sent   []sent // without an answer yet, oldest first
	stored int
}

type sent struct {
	message []byte
	answer  jetstream.PubAckFuture
}

func (p *publisher) add(ctx context.Context, job *Job) error {
	message, err := job.Encode()
	if err != nil {
		return err
	}
	for len(p.sent) >= inFlight {
		if err := p.settle(ctx); err != nil {
			return err
		}
	}
	return p.send(message)
}

func (p *publisher) send(message []byte) error {
	msg := nats.NewMsg(Subject(p.queue.run))
	msg.Data = message
	answer, err := p.queue.js.PublishMsgAsync(msg, jetstream.WithMsgID(ID(message)))
	if err != nil {
		return gone(err)
	}
	p.sent = append(p.sent, sent{message: message, answer: answer})
	return nil
}

// settle waits for the oldest answer; where the queue was full, it sends the
// message again once there is room.
func (p *publisher) settle(ctx context.Context) error {
	oldest := p.sent[0]
	p.sent = p.sent[1:]
	select {
	case <-ctx.Done():
		return ctx.Err()
	case ack := <-oldest.answer.Ok():
		if !ack.Duplicate {
			p.stored++
		}
		return nil
	case err := <-oldest.answer.Err():
		if !full(err) {
			return gone(err)
		}
	}
	if err := p.queue.room(ctx); err != nil {
		return err
	}
	return p.send(oldest.message)
}

// full reports whether the server had no room for a message.
func full(err error) bool {
	var e *jetstream.APIError
	return errors.As(err, &e) && strings.Contains(e.Description, "maximum messages exceeded")
}

// room waits until the queue holds fewer messages than it may.
func (q *Queue) room(ctx context.Context) error {
	tick := time.NewTicker(roomPoll)
	defer tick.Stop()
	for {
		st, err := q.State(ctx)
		if err != nil || int64(st.Jobs) < q.options.MaxMessages {
			return err
		}
		select {
		case <-ctx.Done():
			return ctx.Err()
		case <-tick.C:
		}
	}
}
