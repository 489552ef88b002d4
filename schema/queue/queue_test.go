package queue_test

import (
	"context"
	"errors"
	"fmt"
	"iter"
	"net"
	"os"
	"strings"
	"testing"
	"time"

	"github.com/nats-io/nats-server/v2/server"
	"github.com/nats-io/nats.go"

	"betaloom/schema/queue"
)

// deadline bounds what the queue does at once on any machine.
const deadline = 30 * time.Second

func within(t *testing.T) context.Context {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), deadline)
	t.Cleanup(cancel)
	return ctx
}

func embedded(t testing.TB) *nats.Conn {
	t.Helper()
	s, err := queue.Embed(t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	nc, err := s.Connect()
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { nc.Close(); s.Close() })
	return nc
}

// external is a server that is reached over the network.
func external(t testing.TB) *nats.Conn {
	t.Helper()
	srv, err := server.NewServer(&server.Options{
		Host: "127.0.0.1", Port: server.RANDOM_PORT, JetStream: true, StoreDir: t.TempDir(), NoSigs: true, NoLog: true,
	})
	if err != nil {
		t.Fatal(err)
	}
	srv.Start()
	if !srv.ReadyForConnections(deadline) {
		t.Fatal("the server did not come up")
	}
	nc, err := queue.Connect(srv.ClientURL())
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { nc.Close(); srv.Shutdown(); srv.WaitForShutdown() })
	return nc
}

func create(t testing.TB, nc *nats.Conn, o queue.Options) *queue.Queue {
	t.Helper()
	q, err := queue.Create(t.Context(), nc, run, o)
	if err != nil {
		t.Fatal(err)
	}
	return q
}

// jobs gives n jobs of different tiles.
func jobs(t testing.TB, n int) iter.Seq2[*queue.Job, error] {
	return func(yield func(*queue.Job, error) bool) {
		for i := range n {
			if !yield(job(t, tile(1e-6+float64(i)*1e-9)), nil) {
				return
			}
		}
	}
}

func publish(t testing.TB, q *queue.Queue, n int) {
	t.Helper()
	stored, err := q.Publish(t.Context(), jobs(t, n))
	if err != nil || stored != n {
		t.Fatalf("stored %d, %v, expected %d", stored, err, n)
	}
}

func take(t *testing.T, q queue.Taker) queue.Delivery {
	t.Helper()
	d, err := q.Take(within(t))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// state waits for a state: the server may still count a job that has just
// been answered.
func state(t *testing.T, q *queue.Queue, want queue.State) {
	t.Helper()
	ctx := within(t)
	again := time.NewTicker(5 * time.Millisecond)
	defer again.Stop()
	for {
		got, err := q.State(ctx)
		if err == nil && got == want {
			return
		}
		select {
		case <-ctx.Done():
			t.Errorf("found %+v, %v, expected %+v", got, err, want)
			return
		case <-again.C:
		}
	}
}

func check(t *testing.T, err error) {
	t.Helper()
	if err != nil {
		t.Fatal(err)
	}
}

// Both servers run the same code: each case runs on each.
func TestQueue(t *testing.T) {
	servers := map[string]func(testing.TB) *nats.Conn{"embedded": embedded, "external": external}
	cases := []struct {
		name string
		run  func(t *testing.T, nc *nats.Conn)
	}{
		{"each job is taken once", eachOnce},
		{"a confirmed job is gone", confirmed},
		{"an unanswered job comes again", unanswered},
		{"a job in hand is kept by signs of life", working},
		{"a failed job comes again after its delay", retried},
		{"a job that failed too often is stuck", stuck},
		{"a job given back comes at once, after the last attempt too", givenBack},
		{"a refused job never comes again", refusedJob},
		{"foreign messages are refused and do not stop the others", foreign},
		{"a job published twice is stored once", publishedTwice},
		{"publishing waits while the queue is full", full},
		{"publishing ends with the context", publishEnds},
		{"a broken sequence ends publishing", broken},
		{"a waiting worker hears that the queue is gone", goneWhileWaiting},
		{"a worker hears that the queue was gone before", goneBefore},
		{"an ended context ends a take", takeEnds},
		{"another process attaches", attach},
	}
	for where, connect := range servers {
		for _, c := range cases {
			t.Run(where+"/"+c.name, func(t *testing.T) { c.run(t, connect(t)) })
		}
	}
}

func eachOnce(t *testing.T, nc *nats.Conn) {
	const n = 300 // more than are in flight at once
	q := create(t, nc, queue.Options{})
	publish(t, q, n)
	seen := make(map[string]bool)
	for range n {
		d := take(t, q)
		j, err := d.Job()
		check(t, err)
		if seen[j.Name] || d.Attempt() != 1 || d.Last() {
			t.Fatalf("tile %s: attempt %d, last %v, seen before %v", j.Name, d.Attempt(), d.Last(), seen[j.Name])
		}
		seen[j.Name] = true
		check(t, d.Confirm(t.Context()))
	}
	state(t, q, queue.State{})
}

func confirmed(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{AckWait: 100 * time.Millisecond})
	publish(t, q, 2)
	first := take(t, q)
	state(t, q, queue.State{Jobs: 2, Waiting: 1, InHand: 1})
	check(t, first.Confirm(t.Context()))
	state(t, q, queue.State{Jobs: 1, Waiting: 1})
	second := take(t, q)
	if string(second.Message()) == string(first.Message()) {
		t.Error("found the confirmed job again")
	}
	check(t, second.Confirm(t.Context()))
	if err := second.Confirm(t.Context()); err == nil {
		t.Error("expected an error of a second answer")
	}
}

func unanswered(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{AckWait: 100 * time.Millisecond})
	publish(t, q, 1)
	first := take(t, q) // and dies
	again := take(t, q)
	if string(again.Message()) != string(first.Message()) || again.Attempt() != 2 {
		t.Errorf("found attempt %d, expected the second at the same job", again.Attempt())
	}
}

func working(t *testing.T, nc *nats.Conn) {
	const wait = time.Second // many times what a busy machine may be late by
	q := create(t, nc, queue.Options{AckWait: wait})
	publish(t, q, 1)
	d := take(t, q)
	ctx, cancel := context.WithTimeout(t.Context(), 5*wait/2)
	defer cancel()
	beat := time.NewTicker(wait / 6)
	defer beat.Stop()
	again := make(chan error, 1)
	go func() {
		_, err := q.Take(ctx)
		again <- err
	}()
	for {
		select {
		case <-beat.C:
			check(t, d.Working())
		case err := <-again:
			if !errors.Is(err, context.DeadlineExceeded) {
				t.Errorf("found %v, expected that the job stays in hand for longer than AckWait", err)
			}
			check(t, d.Confirm(t.Context()))
			return
		}
	}
}

func retried(t *testing.T, nc *nats.Conn) {
	const delay = 200 * time.Millisecond
	q := create(t, nc, queue.Options{})
	publish(t, q, 1)
	d := take(t, q)
	begun := time.Now()
	check(t, d.Retry(t.Context(), delay))
	state(t, q, queue.State{Jobs: 1, InHand: 1})
	again := take(t, q)
	if took := time.Since(begun); took < delay || again.Attempt() != 2 {
		t.Errorf("found attempt %d after %s, expected the second after %s", again.Attempt(), took, delay)
	}
}

func stuck(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{MaxDeliver: 3})
	publish(t, q, 1)
	for i := 1; i <= 3; i++ {
		d := take(t, q)
		if d.Attempt() != i || d.Last() != (i == 3) {
			t.Errorf("found attempt %d, last %v, expected %d of 3", d.Attempt(), d.Last(), i)
		}
		check(t, d.Retry(t.Context(), time.Millisecond))
	}
	ctx, cancel := context.WithCancel(within(t))
	defer cancel()
	more := make(chan error, 1)
	go func() { // the queue looks at the job again when a worker asks for one
		_, err := q.Take(ctx)
		more <- err
	}()
	for {
		st, err := q.State(ctx)
		check(t, err)
		if st == (queue.State{Jobs: 1, Stuck: 1}) {
			break
		}
	}
	cancel()
	if err := <-more; !errors.Is(err, context.Canceled) {
		t.Errorf("found %v, expected that the job is not delivered again", err)
	}
}

func givenBack(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{MaxDeliver: 2})
	publish(t, q, 1)
	for _, attempt := range []int{1, 2, 1} { // the third is that of a new message
		d := take(t, q)
		if d.Attempt() != attempt {
			t.Errorf("found attempt %d, expected %d", d.Attempt(), attempt)
		}
		check(t, d.GiveBack(t.Context()))
	}
	d := take(t, q)
	_, err := d.Job()
	check(t, err)
	check(t, d.Confirm(t.Context()))
	state(t, q, queue.State{})
}

func refusedJob(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{AckWait: 50 * time.Millisecond})
	publish(t, q, 1)
	check(t, take(t, q).Refuse(t.Context(), "not mine"))
	state(t, q, queue.State{})
}

func foreign(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{})
	for _, message := range []string{"", "noise", `{"format":99}`, strings.Repeat("x", 1<<19)} {
		check(t, nc.Publish(queue.Subject(run), []byte(message)))
	}
	check(t, nc.Flush())
	publish(t, q, 1)
	refused := 0
	for {
		d := take(t, q)
		_, err := d.Job()
		var no *queue.RefuseError
		if errors.As(err, &no) {
			refused++
			check(t, d.Refuse(t.Context(), no.Reason))
			continue
		}
		check(t, err)
		check(t, d.Confirm(t.Context()))
		break
	}
	if refused != 4 {
		t.Errorf("refused %d messages, expected 4", refused)
	}
	state(t, q, queue.State{})
}

func publishedTwice(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{})
	publish(t, q, 5)
	if stored, err := q.Publish(t.Context(), jobs(t, 7)); err != nil || stored != 2 {
		t.Errorf("stored %d, %v, expected the two new ones", stored, err)
	}
	state(t, q, queue.State{Jobs: 7, Waiting: 7})
}

func full(t *testing.T, nc *nats.Conn) {
	const n, room = 40, 5
	q := create(t, nc, queue.Options{MaxMessages: room})
	done := make(chan error, 1)
	go func() {
		stored, err := q.Publish(t.Context(), jobs(t, n))
		if err == nil && stored != n {
			err = fmt.Errorf("stored %d, expected %d", stored, n)
		}
		done <- err
	}()
	seen := make(map[string]bool)
	for range n {
		if st, err := q.State(t.Context()); err != nil || st.Jobs > room {
			t.Fatalf("found %+v, %v, expected at most %d jobs", st, err, room)
		}
		d := take(t, q)
		seen[string(d.Message())] = true
		check(t, d.Confirm(t.Context()))
	}
	check(t, <-done)
	if len(seen) != n {
		t.Errorf("took %d different jobs, expected %d", len(seen), n)
	}
}

func publishEnds(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{MaxMessages: 1})
	ctx, cancel := context.WithTimeout(t.Context(), 100*time.Millisecond)
	defer cancel()
	if _, err := q.Publish(ctx, jobs(t, 3)); !errors.Is(err, context.DeadlineExceeded) {
		t.Errorf("found %v, expected the context's error", err)
	}
}

func broken(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{})
	because := errors.New("no such tile")
	_, err := q.Publish(t.Context(), func(yield func(*queue.Job, error) bool) { yield(nil, because) })
	if !errors.Is(err, because) {
		t.Errorf("found %v, expected the sequence's error", err)
	}
}

func goneWhileWaiting(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{})
	heard := make(chan error, 1)
	go func() {
		_, err := q.Take(within(t))
		heard <- err
	}()
	check(t, q.Delete(t.Context()))
	if err := <-heard; !errors.Is(err, queue.ErrGone) {
		t.Errorf("found %v, expected ErrGone", err)
	}
}

func goneBefore(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{})
	for range 2 {
		check(t, q.Delete(t.Context()))
	}
	_, takeErr := q.Take(within(t))
	_, stateErr := q.State(t.Context())
	_, attachErr := queue.Attach(t.Context(), nc, run)
	for call, err := range map[string]error{"take": takeErr, "state": stateErr, "attach": attachErr} {
		if !errors.Is(err, queue.ErrGone) {
			t.Errorf("%s: found %v, expected ErrGone", call, err)
		}
	}
}

func takeEnds(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{})
	ctx, cancel := context.WithCancel(t.Context())
	heard := make(chan error, 1)
	go func() {
		_, err := q.Take(ctx)
		heard <- err
	}()
	cancel()
	if err := <-heard; !errors.Is(err, context.Canceled) {
		t.Errorf("found %v, expected context.Canceled", err)
	}
}

func attach(t *testing.T, nc *nats.Conn) {
	q := create(t, nc, queue.Options{AckWait: 7 * time.Second, MaxDeliver: 1})
	publish(t, q, 1)
	other, err := queue.Attach(t.Context(), nc, run)
	check(t, err)
	if other.AckWait() != 7*time.Second {
		t.Errorf("found AckWait %s, expected that of the creator", other.AckWait())
	}
	d := take(t, other)
	if !d.Last() {
		t.Error("found more attempts than the creator allows")
	}
	check(t, d.Confirm(t.Context()))
	state(t, q, queue.State{})
}

// A broker may be killed and come back on its folder: what was published is
// there, and a worker that waited goes on.
func TestServerComesBack(t *testing.T) {
	dir := t.TempDir()
	port := freePort(t)
	start := func() *server.Server {
		srv, err := server.NewServer(&server.Options{Host: "127.0.0.1", Port: port, JetStream: true, StoreDir: dir, NoSigs: true, NoLog: true})
		check(t, err)
		srv.Start()
		if !srv.ReadyForConnections(deadline) {
			t.Fatal("the server did not come up")
		}
		return srv
	}
	srv := start()
	nc, err := queue.Connect(srv.ClientURL())
	check(t, err)
	defer nc.Close()
	q := create(t, nc, queue.Options{AckWait: 500 * time.Millisecond})
	publish(t, q, 3)
	check(t, take(t, q).Confirm(t.Context()))
	srv.Shutdown()
	srv.WaitForShutdown()
	srv = start()
	defer func() { srv.Shutdown(); srv.WaitForShutdown() }()
	ctx := within(t)
	for done := 0; done < 2; {
		d, err := q.Take(ctx)
		if ctx.Err() != nil || errors.Is(err, queue.ErrGone) {
			t.Fatalf("found %v, expected that the worker goes on", err)
		}
		if err == nil && d.Confirm(ctx) == nil {
			done++
		}
	}
	for {
		if st, err := q.State(ctx); err == nil && st.Jobs == 0 {
			return
		} else if ctx.Err() != nil {
			t.Fatalf("found %+v, %v, expected an empty queue", st, err)
		}
	}
}

func freePort(t *testing.T) int {
	t.Helper()
	l, err := net.Listen("tcp", "127.0.0.1:0")
	check(t, err)
	defer l.Close()
	return l.Addr().(*net.TCPAddr).Port
}

func TestEmbedWithoutFolder(t *testing.T) {
	file := t.TempDir() + "/file"
	check(t, os.WriteFile(file, nil, 0o644))
	s, err := queue.Embed(file)
	if err == nil {
		s.Close()
		t.Fatal("expected an error where the folder is a file")
	}
	if !strings.Contains(err.Error(), "not a directory") {
		t.Errorf("found %v, expected what the server met", err)
	}
}

func TestBadOptions(t *testing.T) {
	nc := embedded(t)
	for name, o := range map[string]queue.Options{
		"wait": {AckWait: -1}, "attempts": {MaxDeliver: -1}, "messages": {MaxMessages: -1},
	} {
		t.Run(name, func(t *testing.T) {
			if _, err := queue.Create(t.Context(), nc, run, o); err == nil {
				t.Error("expected an error")
			}
		})
	}
	for _, id := range []string{"", "a.b", "*", ">", "a b", "A", strings.Repeat("a", 65)} {
		t.Run("run "+id, func(t *testing.T) {
			if _, err := queue.Create(t.Context(), nc, id, queue.Options{}); err == nil {
				t.Error("expected an error")
			}
		})
	}
}
