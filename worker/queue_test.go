package worker_test

import (
	"context"
	"errors"
	"fmt"
	"iter"
	"slices"
	"sync"
	"testing"
	"time"

	"github.com/nats-io/nats.go"
	"golang.org/x/sys/unix"

	"betaloom/schema"
	"betaloom/schema/queue"
	"betaloom/schema/store"
	"betaloom/solvers"
	"betaloom/worker"
)

// embedded is a queue as a run has it.
func embedded(t testing.TB, o queue.Options) (*queue.Queue, *nats.Conn) {
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
	q, err := queue.Create(t.Context(), nc, run, o)
	if err != nil {
		t.Fatal(err)
	}
	return q, nc
}

func jobs(tiles []*schema.Tile) iter.Seq2[*queue.Job, error] {
	return func(yield func(*queue.Job, error) bool) {
		for _, ti := range tiles {
			if !yield(queue.NewJob(run, 0, ti)) {
				return
			}
		}
	}
}

func publish(t testing.TB, q *queue.Queue, tiles []*schema.Tile) {
	t.Helper()
	if n, err := q.Publish(t.Context(), jobs(tiles)); err != nil || n != len(tiles) {
		t.Fatalf("stored %d, %v, expected %d", n, err, len(tiles))
	}
}

// drain runs workers until the queue holds no job but the stuck ones.
func drain(t testing.TB, q *queue.Queue, stuck int, workers ...worker.Options) {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), deadline)
	defer cancel()
	errs := make([]error, len(workers))
	var all sync.WaitGroup
	for i, o := range workers {
		all.Go(func() { errs[i] = worker.Run(ctx, o) })
	}
	look := time.NewTicker(5 * time.Millisecond)
	defer look.Stop()
	for ; ; <-look.C {
		st, err := q.State(ctx)
		if err != nil {
			t.Fatalf("found %+v, %v, expected an empty queue", st, err)
		}
		if st.Jobs == stuck {
			break
		}
	}
	cancel()
	all.Wait()
	if err := errors.Join(errs...); err != nil {
		t.Fatal(err)
	}
}

func manyTiles(n int) (tiles []*schema.Tile) {
	for i := range n {
		tiles = append(tiles, box([]float64{1e-6 + float64(i)*1e-8, 1.5e-6}, []float64{plain, noMode, thick, 8e-6}))
	}
	return tiles
}

// contents gives what a store holds under a prefix.
func contents(t *testing.T, s store.Store, prefix string) map[string]string {
	t.Helper()
	names, err := s.List(t.Context(), prefix)
	if err != nil {
		t.Fatal(err)
	}
	all := make(map[string]string)
	for _, n := range names {
		b, err := s.Get(t.Context(), n)
		if err != nil {
			t.Fatal(err)
		}
		all[n] = string(b)
	}
	return all
}

func same(t *testing.T, got, want map[string]string) {
	t.Helper()
	if len(got) != len(want) || len(want) == 0 {
		t.Fatalf("found %d files, expected %d and more than none", len(got), len(want))
	}
	for n := range want {
		if got[n] != want[n] {
			t.Errorf("%s: found other bytes", n)
		}
	}
}

// One slot, four slots, and two workers of two write the same parts.
func TestSlotsWriteTheSame(t *testing.T) {
	tiles := manyTiles(24)
	solve := func(slots ...int) map[string]string {
		q, _ := embedded(t, queue.Options{})
		publish(t, q, tiles)
		s := folder(t)
		var workers []worker.Options
		for _, n := range slots {
			workers = append(workers, worker.Options{Queue: q, Store: s, Slots: n, Problem: fakeProblem})
		}
		drain(t, q, 0, workers...)
		return contents(t, s, "")
	}
	one := solve(1)
	if len(one) != len(tiles) {
		t.Fatalf("found %d parts, expected %d", len(one), len(tiles))
	}
	same(t, solve(4), one)
	same(t, solve(2, 2), one)
}

// A worker that dies with a tile in hand leaves it to another.
func TestDeadWorker(t *testing.T) {
	q, _ := embedded(t, queue.Options{AckWait: 200 * time.Millisecond})
	tiles := manyTiles(3)
	publish(t, q, tiles)
	if _, err := q.Take(t.Context()); err != nil { // and dies
		t.Fatal(err)
	}
	s := folder(t)
	drain(t, q, 0, worker.Options{Queue: q, Store: s, Problem: fakeProblem})
	if n := len(contents(t, s, "parts/")); n != 3 {
		t.Errorf("found %d parts, expected 3", n)
	}
}

// Tiles that fail are tried as often as the queue allows, then set aside; the
// others are solved, foreign messages refused.
func TestTroubledRun(t *testing.T) {
	q, nc := embedded(t, queue.Options{MaxDeliver: 3})
	tiles := append(manyTiles(4), box([]float64{1e-6}, []float64{panics}), box([]float64{1e-6}, []float64{fails}))
	if err := errors.Join(nc.Publish(queue.Subject(run), []byte("noise")), nc.Publish(queue.Subject(run), []byte("{}"))); err != nil {
		t.Fatal(err)
	}
	publish(t, q, tiles)
	var mu sync.Mutex
	counts := make(map[worker.Kind]int)
	s := folder(t)
	drain(t, q, 0, worker.Options{Queue: q, Store: s, Slots: 2, Problem: fakeProblem, RetryDelay: time.Millisecond, Events: func(e worker.Event) {
		mu.Lock()
		defer mu.Unlock()
		counts[e.Kind]++
	}})
	want := map[worker.Kind]int{
		worker.TileStarted: 4 + 2*3, worker.TileFinished: 4, worker.TileRetried: 2 * 2, worker.TileSetAside: 2, worker.MessageRefused: 2,
	}
	mu.Lock()
	defer mu.Unlock()
	if fmt.Sprint(counts) != fmt.Sprint(want) {
		t.Errorf("found %v, expected %v", counts, want)
	}
	for prefix, n := range map[string]int{"parts/": 4, "aside/": 2, "refused/": 2} {
		if got := len(contents(t, s, prefix)); got != n {
			t.Errorf("%s: found %d files, expected %d", prefix, got, n)
		}
	}
}

// A worker that is ended between writing and confirming leaves a job that
// the next one confirms without solving it again.
func TestEndedBeforeConfirming(t *testing.T) {
	q, _ := embedded(t, queue.Options{AckWait: 200 * time.Millisecond})
	tiles := manyTiles(1)
	publish(t, q, tiles)
	s := folder(t)
	d, err := q.Take(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	first, err := work(t, worker.Options{Store: s}, &delivery{message: d.Message()}) // confirms to no one
	if err != nil || !slices.Equal(kinds(first), []worker.Kind{worker.TileStarted, worker.TileFinished}) {
		t.Fatalf("found %q, %v, expected a part", kinds(first), err)
	}
	var mu sync.Mutex
	var second []worker.Event
	drain(t, q, 0, worker.Options{Queue: q, Store: s, Problem: fakeProblem, Events: func(e worker.Event) {
		mu.Lock()
		defer mu.Unlock()
		second = append(second, e)
	}})
	mu.Lock()
	defer mu.Unlock()
	if got := kinds(second); !slices.Equal(got, []worker.Kind{worker.TileStarted, worker.TileReused}) {
		t.Errorf("found %q, expected a reuse", got)
	}
}

// The queue may go while a worker waits: it stops and says so.
func TestQueueGone(t *testing.T) {
	q, _ := embedded(t, queue.Options{})
	ended := make(chan error, 1)
	go func() {
		ended <- worker.Run(t.Context(), worker.Options{Queue: q, Store: folder(t), Problem: fakeProblem})
	}()
	if err := q.Delete(t.Context()); err != nil {
		t.Fatal(err)
	}
	if err := <-ended; !errors.Is(err, queue.ErrGone) {
		t.Errorf("found %v, expected ErrGone", err)
	}
}

// idle answers at once, so that what is left is the work around a tile.
type idle struct{ modes []solvers.Mode }

func (p *idle) Modes(context.Context, solvers.Q, int, []solvers.Mode) ([]solvers.Mode, solvers.Count, error) {
	return p.modes, solvers.Count{N: 2}, nil
}

// BenchmarkQueue is the work of the queue around a tile of one point that is
// there already: publish, take, look for the part, confirm.
func BenchmarkQueue(b *testing.B) {
	q, _ := embedded(b, queue.Options{MaxMessages: int64(b.N) + 1})
	s := folder(b)
	tiles := make([]*schema.Tile, b.N)
	for i := range tiles {
		tiles[i] = box([]float64{1e-6 + float64(i)*1e-12}, []float64{plain})
		if err := s.Put(b.Context(), store.Part(name(b, tiles[i])), []byte("part")); err != nil {
			b.Fatal(err)
		}
	}
	b.ResetTimer()
	begun := cpu(b)
	publish(b, q, tiles)
	drain(b, q, 0, worker.Options{Queue: q, Store: s, Problem: fakeProblem})
	b.ReportMetric(float64(cpu(b)-begun)/float64(b.N), "cpu-ns/op")
}

// cpu is the processor time this process has used: on a busy machine it says
// more than the clock.
func cpu(b *testing.B) time.Duration {
	b.Helper()
	var u unix.Rusage
	if err := unix.Getrusage(unix.RUSAGE_SELF, &u); err != nil {
		b.Fatal(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

// BenchmarkPoints is the worker's own work for a full tile, encoding
// included, with a solver that takes no time.
func BenchmarkPoints(b *testing.B) {
	wavelengths, heights := make([]float64, 64), make([]float64, 64)
	for i := range wavelengths {
		wavelengths[i], heights[i] = 1e-6+float64(i)*1e-8, 1e-7+float64(i)*1e-8
	}
	m := message(b, box(wavelengths, heights))
	none := func(p *schema.Physics) (solvers.Problem, []string, error) {
		return &idle{modes: []solvers.Mode{mode(solvers.Q{1, 2}, 0, nil), mode(solvers.Q{1, 2}, 1, nil)}}, nil, nil
	}
	b.ReportAllocs()
	begun := cpu(b)
	defer func() { b.ReportMetric(float64(cpu(b)-begun)/float64(b.N), "cpu-ns/op") }()
	for b.Loop() {
		ctx, cancel := context.WithCancel(b.Context())
		h := &hand{deliveries: make(chan *delivery, 1), done: cancel}
		h.deliveries <- &delivery{message: m}
		if err := worker.Run(ctx, worker.Options{Queue: h, Store: nowhere{}, Problem: none}); err != nil {
			b.Fatal(err)
		}
	}
}

// nowhere keeps nothing.
type nowhere struct{ store.Store }

func (nowhere) Get(context.Context, string) ([]byte, error)       { return nil, store.ErrNotFound }
func (nowhere) Put(ctx context.Context, _ string, _ []byte) error { return ctx.Err() }
