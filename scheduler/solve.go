package scheduler

import (
	"context"
	"errors"
	"fmt"
	"time"

	"github.com/nats-io/nats.go"

	"betaloom/schema/queue"
	"betaloom/schema/store"
)

// mostRounds bounds how often tiles are published that come back neither
// solved nor set aside.
const mostRounds = 3

// solve has the missing tiles solved. When it returns nil none is missing.
func (r *run) solve(ctx context.Context) error {
	missing, err := r.missing(ctx)
	if err != nil || len(missing) == 0 {
		return err
	}
	begun := time.Now()
	s, err := r.open(ctx)
	if err != nil {
		return err
	}
	m := meter{points: r.plan.Grid.Points(), tiles: len(r.tiles.names), begun: begun, before: len(r.tiles.names) - len(missing)}
	err = r.rounds(ctx, s, &m, missing)
	err = errors.Join(err, s.close(err == nil))
	r.folder.record.SolveSeconds += time.Since(begun).Seconds()
	return err
}

func (r *run) missing(ctx context.Context) ([]int, error) {
	h, err := r.tiles.have(ctx)
	if err != nil {
		return nil, err
	}
	return r.tiles.missing(h), nil
}

// rounds publishes what is missing until nothing is.
func (r *run) rounds(ctx context.Context, s *session, m *meter, missing []int) error {
	for range mostRounds {
		w := watch{run: r, session: s, meter: m, numbers: missing, round: r.round}
		r.round++ // or the server could take the jobs of another round for these
		stuck, err := w.follow(ctx)
		if err != nil {
			return err
		}
		if missing, err = r.missing(ctx); err != nil || len(missing) == 0 {
			return err
		}
		if stuck {
			return r.setAside(ctx, missing)
		}
	}
	return fmt.Errorf("run: %d tiles were published %d times and came back neither solved nor set aside", len(missing), mostRounds)
}

// setAside records tiles that the queue does not deliver any more because
// each delivery went unanswered.
func (r *run) setAside(ctx context.Context, numbers []int) error {
	for _, i := range numbers {
		a := store.SetAside{
			Tile: r.tiles.names[i], Attempts: r.Queue.MaxDeliver,
			Reason: fmt.Sprintf("no worker answered in %d attempts: each was ended or cut off while it solved the tile", r.Queue.MaxDeliver),
		}
		if err := store.PutAside(ctx, r.folder.store, a); err != nil {
			return err
		}
	}
	return nil
}

// session is the queue of a run with the worker of this process.
type session struct {
	server *queue.Server // nil: elsewhere
	nc     *nats.Conn
	queue  *queue.Queue
	worker chan error // hears when the worker has stopped
	stop   context.CancelFunc
}

func (r *run) open(ctx context.Context) (*session, error) {
	s := &session{worker: make(chan error, 1)}
	if err := s.connect(r.URL, r.folder.path(folderQueue)); err != nil {
		s.disconnect()
		return nil, err
	}
	q, err := queue.Create(ctx, s.nc, r.folder.record.ID, r.Queue)
	if err != nil {
		s.disconnect()
		return nil, err
	}
	s.queue = q
	working, stop := context.WithCancel(ctx)
	s.stop = stop
	if r.Worker == nil {
		s.worker = nil
		return s, nil
	}
	go func() { s.worker <- r.Worker(working, q, r.folder.store, r.Workers) }()
	return s, nil
}

func (s *session) connect(url, dir string) (err error) {
	if url != "" {
		s.nc, err = queue.Connect(url)
		return err
	}
	if s.server, err = queue.Embed(dir); err != nil {
		return err
	}
	s.nc, err = s.server.Connect()
	return err
}

// close stops the worker, which gives back what it has in hand, and the queue.
// A queue with nothing left to do is deleted.
func (s *session) close(done bool) (err error) {
	s.stop()
	if s.worker != nil {
		err = <-s.worker
	}
	if done {
		err = errors.Join(err, s.queue.Delete(context.Background()))
	}
	s.disconnect()
	return err
}

func (s *session) disconnect() {
	if s.nc != nil {
		s.nc.Close()
	}
	if s.server != nil {
		s.server.Close()
	}
}
