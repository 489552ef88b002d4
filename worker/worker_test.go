package worker_test

import (
	"context"
	"encoding/json"
	"errors"
	"math"
	"slices"
	"strings"
	"sync"
	"testing"
	"time"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/store"
	"betaloom/solvers"
	"betaloom/worker"
)

// work runs a worker over deliveries until all are answered.
func work(t *testing.T, o worker.Options, deliveries ...*delivery) ([]worker.Event, error) {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), deadline)
	defer cancel()
	h := &hand{deliveries: make(chan *delivery, len(deliveries)), done: cancel}
	for _, d := range deliveries {
		h.deliveries <- d
	}
	var mu sync.Mutex
	var events []worker.Event
	o.Queue = h
	o.Events = func(e worker.Event) {
		mu.Lock()
		defer mu.Unlock()
		events = append(events, e)
	}
	if o.Store == nil {
		o.Store = folder(t)
	}
	if o.Problem == nil {
		o.Problem = fakeProblem
	}
	err := worker.Run(ctx, o)
	return events, err
}

func answered(t *testing.T, d *delivery, want ...string) {
	t.Helper()
	if !slices.Equal(d.answers, want) {
		t.Errorf("found the answers %q, expected %q", d.answers, want)
	}
}

func kinds(events []worker.Event) (list []worker.Kind) {
	for _, e := range events {
		list = append(list, e.Kind)
	}
	return list
}

// Every state a point can have, in one tile.
func TestPoints(t *testing.T) {
	ti := box([]float64{1e-6, 2e-6}, []float64{noMode, badInput, unconverged, left, underivable, plain, thick})
	s, d := folder(t), &delivery{message: message(t, ti)}
	events, err := work(t, worker.Options{Store: s}, d)
	if err != nil {
		t.Fatal(err)
	}
	answered(t, d, "confirm")
	want := worker.Counts{Points: 14, Solved: 4, NoMode: 2, Failed: 6, Excluded: 2, Modes: 8}
	if got := events[len(events)-1]; got.Kind != worker.TileFinished || got.Counts != want {
		t.Errorf("found %v with %+v, expected %+v", got.Kind, got.Counts, want)
	}
	b := rows(t, s, ti)
	at := column.Index(b.Columns)
	cases := []struct {
		height                     float64
		state, reason, flag        string
		rows                       int
		guided                     int64
		halfMissing, withFrequency bool
	}{
		{height: noMode, state: "no-mode", reason: "the film is too thin", rows: 1, guided: 0},
		{height: badInput, state: "failed", reason: "layer core: found 2 um, expected less", rows: 1, guided: column.MissingInt},
		{height: unconverged, state: "failed", reason: "slab: mode 1: not converged: ten steps", rows: 1, guided: column.MissingInt},
		{height: left, state: "excluded", reason: "keep: height < 9 um", rows: 1, guided: column.MissingInt},
		{height: underivable, state: "failed", reason: "sqrt", rows: 1, guided: column.MissingInt, halfMissing: true},
		{height: plain, state: "solved", flag: "near-cutoff", rows: 2, guided: 5},
		{height: thick, state: "solved", flag: "near-cutoff;accuracy", rows: 2, guided: 5},
	}
	for row := 0; row < b.Rows; {
		local := int(b.Vectors[at["local"]].Ints[row])
		c := cases[local%len(cases)]
		for range c.rows {
			if got := b.Text(at["state"], row); got != c.state {
				t.Errorf("local %d: found state %q, expected %q", local, got, c.state)
			}
			if got := b.Text(at["reason"], row); !strings.Contains(got, c.reason) || c.reason == "" && got != "" {
				t.Errorf("local %d: found reason %q, expected %q", local, got, c.reason)
			}
			if got := b.Text(at["flag"], row); got != c.flag {
				t.Errorf("local %d: found flag %q, expected %q", local, got, c.flag)
			}
			if got := b.Vectors[at["guided_count"]].Ints[row]; got != c.guided {
				t.Errorf("local %d: found guided_count %d, expected %d", local, got, c.guided)
			}
			half, ok := b.Float(at["half_m"], row)
			if ok == c.halfMissing || ok && math.Abs(half-math.Sqrt(c.height*1e-6)/2) > 1e-21 {
				t.Errorf("local %d: found half %g, %v, expected that of the height %g", local, half, ok, c.height)
			}
			wavelength := []float64{1e-6, 2e-6}[local/len(cases)]
			if f, ok := b.Float(at["frequency_hz"], row); !ok || math.Abs(f*wavelength/schema.LightSpeed-1) > 1e-15 {
				t.Errorf("local %d: found %g Hz, %v at the wavelength %g m", local, f, ok, wavelength)
			}
			row++
		}
	}
}

// What becomes of a delivery, by what goes wrong with its tile.
func TestAnswers(t *testing.T) {
	out := &solvers.ScopeError{Section: "pipe", Equation: "Helmholtz"}
	circle := box([]float64{1e-6}, []float64{plain})
	circle.Physics.Parameters[1].Expr = "half * 2"
	unknown := box([]float64{1e-6}, []float64{plain})
	unknown.Physics.Keep = "width > 1 um"
	untuned := box([]float64{1e-6}, []float64{plain})
	untuned.Physics.Parameters[2].Name, untuned.Axes[0].Parameter = "width", "width"
	cases := []struct {
		name     string
		tile     *schema.Tile
		problem  func(*schema.Physics) (solvers.Problem, []string, error)
		attempt  int
		last     bool
		answer   string
		kind     worker.Kind
		reason   string // of the record of a tile set aside
		unsolved bool
	}{
		{name: "solved", tile: box([]float64{1e-6}, []float64{plain}), answer: "confirm", kind: worker.TileFinished},
		{name: "error", tile: box([]float64{1e-6}, []float64{plain, fails}), answer: "retry after 1s", kind: worker.TileRetried},
		{name: "error again", tile: box([]float64{1e-6}, []float64{fails}), attempt: 3, answer: "retry after 4s", kind: worker.TileRetried},
		{name: "error many times", tile: box([]float64{1e-6}, []float64{fails}), attempt: 99, answer: "retry after 1m0s", kind: worker.TileRetried},
		{name: "error at last", tile: box([]float64{1e-6}, []float64{plain, fails}), attempt: 5, last: true,
			answer: "refuse: point 1 of the tile: the library is out of luck", kind: worker.TileSetAside,
			reason: "point 1 of the tile: the library is out of luck"},
		{name: "panic", tile: box([]float64{1e-6}, []float64{panics}), answer: "retry after 1s", kind: worker.TileRetried},
		{name: "panic at last", tile: box([]float64{1e-6}, []float64{panics}), attempt: 5, last: true,
			answer: "refuse: the solver panicked: index out of range", kind: worker.TileSetAside, reason: "the solver panicked: index out of range"},
		{name: "solver contradicts itself", tile: box([]float64{1e-6}, []float64{miscounts}), answer: "retry after 1s", kind: worker.TileRetried},
		{name: "out of scope", tile: box([]float64{1e-6}, []float64{plain}), answer: "refuse: " + out.Error(), kind: worker.TileSetAside, reason: out.Error(),
			problem: func(*schema.Physics) (solvers.Problem, []string, error) { return nil, nil, out }},
		{name: "problem panics", tile: box([]float64{1e-6}, []float64{plain}), answer: "retry after 1s", kind: worker.TileRetried,
			problem: func(*schema.Physics) (solvers.Problem, []string, error) { panic("nil map") }},
		{name: "expressions in a circle", tile: circle, kind: worker.TileSetAside,
			answer: "refuse: parameters: found expressions that refer to each other in a circle, expected none",
			reason: "parameters: found expressions that refer to each other in a circle, expected none"},
		{name: "unknown name in keep", tile: unknown, kind: worker.TileSetAside,
			answer: "refuse: keep: found the name width, expected a parameter", reason: "keep: found the name width, expected a parameter"},
		{name: "no frequency", tile: untuned, answer: "confirm", kind: worker.TileFinished},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			s := folder(t)
			d := &delivery{message: message(t, c.tile), attempt: c.attempt, last: c.last}
			events, err := work(t, worker.Options{Store: s, Problem: c.problem}, d)
			if err != nil {
				t.Fatal(err)
			}
			answered(t, d, c.answer)
			if got := kinds(events); !slices.Equal(got, []worker.Kind{worker.TileStarted, c.kind}) {
				t.Errorf("found the events %q, expected it to start and %q", got, c.kind)
			}
			stored(t, s, c.tile, c.kind == worker.TileFinished, c.reason, d.Attempt())
		})
	}
}

// stored checks what stands in the store after a tile was answered.
func stored(t *testing.T, s store.Store, ti *schema.Tile, withPart bool, reason string, attempts int) {
	t.Helper()
	var want []string
	if withPart {
		want = append(want, store.Part(name(t, ti)))
	}
	if reason != "" {
		want = append(want, store.Aside(name(t, ti)))
	}
	got, err := s.List(t.Context(), "")
	if err != nil || !slices.Equal(got, want) {
		t.Fatalf("found %q, %v in the store, expected %q", got, err, want)
	}
	if reason == "" {
		return
	}
	b, err := s.Get(t.Context(), store.Aside(name(t, ti)))
	if err != nil {
		t.Fatal(err)
	}
	var a store.SetAside
	if err := json.Unmarshal(b, &a); err != nil || a != (store.SetAside{Tile: name(t, ti), Reason: reason, Attempts: attempts}) {
		t.Errorf("found %+v, %v, expected the reason %q after %d attempts", a, err, reason, attempts)
	}
}

// Foreign messages are recorded, and the next tile is solved.
func TestRefused(t *testing.T) {
	s := folder(t)
	noise := &delivery{message: []byte(strings.Repeat("noise ", 10_000))}
	empty := &delivery{message: nil}
	good := &delivery{message: message(t, box([]float64{1e-6}, []float64{plain}))}
	events, err := work(t, worker.Options{Store: s}, noise, empty, good)
	if err != nil {
		t.Fatal(err)
	}
	for _, d := range []*delivery{noise, empty} {
		if len(d.answers) != 1 || !strings.HasPrefix(d.answers[0], "refuse: job: ") {
			t.Errorf("found %q, expected a refusal", d.answers)
		}
	}
	answered(t, good, "confirm")
	want := []worker.Kind{worker.MessageRefused, worker.MessageRefused, worker.TileStarted, worker.TileFinished}
	if got := kinds(events); !slices.Equal(got, want) {
		t.Errorf("found %q, expected %q", got, want)
	}
	names, err := s.List(t.Context(), "refused/")
	if err != nil || len(names) != 2 {
		t.Fatalf("found %q, %v, expected two records", names, err)
	}
	sizes := map[int]int{60_000: 4096, 0: 0} // bytes of the message, and of what is kept of it
	for _, n := range names {
		b, err := s.Get(t.Context(), n)
		if err != nil {
			t.Fatal(err)
		}
		var r struct {
			Reason string `json:"reason"`
			Bytes  int    `json:"bytes"`
			Begins []byte `json:"begins"`
		}
		if err := json.Unmarshal(b, &r); err != nil || r.Reason == "" || len(r.Begins) != sizes[r.Bytes] {
			t.Errorf("%s: found %d of %d bytes, reason %q, %v", n, len(r.Begins), r.Bytes, r.Reason, err)
		}
	}
}

// A tile whose part is there is confirmed without being solved.
func TestReused(t *testing.T) {
	s := folder(t)
	ti := box([]float64{1e-6}, []float64{plain})
	first, second := &delivery{message: message(t, ti)}, &delivery{message: message(t, ti), attempt: 2}
	made := 0
	events, err := work(t, worker.Options{Store: s, Problem: func(p *schema.Physics) (solvers.Problem, []string, error) {
		made++
		return fakeProblem(p)
	}}, first, second)
	if err != nil {
		t.Fatal(err)
	}
	answered(t, first, "confirm")
	answered(t, second, "confirm")
	if last := events[len(events)-1]; made != 1 || last.Kind != worker.TileReused {
		t.Errorf("solved %d times, last event %q, expected once and a reuse", made, last.Kind)
	}
}

// brokenStore fails in one way.
type brokenStore struct {
	store.Store
	get, put error
}

func (s brokenStore) Get(ctx context.Context, name string) ([]byte, error) {
	if s.get != nil {
		return nil, s.get
	}
	return s.Store.Get(ctx, name)
}

func (s brokenStore) Put(ctx context.Context, name string, data []byte) error {
	if s.put != nil {
		return s.put
	}
	return s.Store.Put(ctx, name, data)
}

// A worker that cannot write is of no use: it gives back what it has and
// stops with the reason.
func TestStoreFails(t *testing.T) {
	full := errors.New("no space left on device")
	good, bad := box([]float64{1e-6}, []float64{plain}), box([]float64{1e-6}, []float64{fails})
	cases := []struct {
		name    string
		store   brokenStore
		message []byte
		last    bool
	}{
		{"reading", brokenStore{get: full}, message(t, good), false},
		{"writing a part", brokenStore{put: full}, message(t, good), true},
		{"recording a tile set aside", brokenStore{put: full}, message(t, bad), true},
		{"recording a refused message", brokenStore{put: full}, []byte("noise"), true},
	}
	for _, c := range cases {
		t.Run(c.name, func(t *testing.T) {
			c.store.Store = folder(t)
			d, next := &delivery{message: c.message, last: c.last}, &delivery{message: message(t, good)}
			_, err := work(t, worker.Options{Store: c.store}, d, next)
			if !errors.Is(err, full) {
				t.Errorf("found %v, expected the store's error", err)
			}
			answered(t, d, "give back")
			answered(t, next)
		})
	}
}

// An answer that the queue did not hear is told and stops nothing.
func TestQueueFails(t *testing.T) {
	deaf := &delivery{message: message(t, box([]float64{1e-6}, []float64{plain})), failing: errors.New("no answer")}
	good := &delivery{message: message(t, box([]float64{2e-6}, []float64{plain}))}
	events, err := work(t, worker.Options{}, deaf, good)
	if err != nil {
		t.Fatal(err)
	}
	want := []worker.Kind{worker.TileStarted, worker.QueueTrouble, worker.TileStarted, worker.TileFinished}
	if got := kinds(events); !slices.Equal(got, want) {
		t.Errorf("found %q, expected %q", got, want)
	}
}

// A worker told to stop gives back the tile in hand at once, and writes
// nothing of it.
func TestStopGivesBack(t *testing.T) {
	s := folder(t)
	ctx, cancel := context.WithCancel(t.Context())
	d := &delivery{message: message(t, box([]float64{1e-6}, []float64{plain, plain * 2})), last: true}
	h := &hand{deliveries: make(chan *delivery, 1), done: cancel}
	h.deliveries <- d
	stopping := func(p *schema.Physics) (solvers.Problem, []string, error) {
		return &problem{solve: func(solvers.Q) { cancel() }}, nil, nil
	}
	if err := worker.Run(ctx, worker.Options{Queue: h, Store: s, Problem: stopping}); err != nil {
		t.Fatal(err)
	}
	answered(t, d, "give back")
	if names, err := s.List(t.Context(), ""); err != nil || len(names) > 0 {
		t.Errorf("found %q, %v, expected nothing in the store", names, err)
	}
}

// A worker told to stop when the last point is solved still stores the part.
func TestStopAfterSolving(t *testing.T) {
	s := folder(t)
	ctx, cancel := context.WithCancel(t.Context())
	ti := box([]float64{1e-6}, []float64{plain})
	d := &delivery{message: message(t, ti)}
	h := &hand{deliveries: make(chan *delivery, 1), done: cancel}
	h.deliveries <- d
	hook := func(point string) {
		if point == worker.PointSolved {
			cancel()
		}
	}
	if err := worker.Run(ctx, worker.Options{Queue: h, Store: s, Problem: fakeProblem, Hook: hook}); err != nil {
		t.Fatal(err)
	}
	answered(t, d, "confirm")
	if b := rows(t, s, ti); b.Rows != 2 {
		t.Errorf("found %d rows, expected 2", b.Rows)
	}
}

// The queue hears of a tile that takes longer than it waits.
func TestHeartbeat(t *testing.T) {
	ctx, cancel := context.WithTimeout(t.Context(), deadline)
	defer cancel()
	d := &delivery{message: message(t, box([]float64{1e-6}, []float64{plain})), beats: make(chan struct{})}
	h := &hand{deliveries: make(chan *delivery, 1), ackWait: time.Second, done: cancel}
	h.deliveries <- d
	slow := func(p *schema.Physics) (solvers.Problem, []string, error) {
		return &problem{solve: func(solvers.Q) {
			for range 2 {
				select {
				case <-d.beats:
				case <-ctx.Done():
				}
			}
		}}, nil, nil
	}
	if err := worker.Run(ctx, worker.Options{Queue: h, Store: folder(t), Problem: slow}); err != nil {
		t.Fatal(err)
	}
	answered(t, d, "confirm") // nothing, where the deadline came before two signs of life
}

// The bytes of a part depend on the tile alone: not on what a slot solved
// before, nor on an attempt that failed in the middle.
func TestPartBytes(t *testing.T) {
	ti := box([]float64{1e-6, 1.1e-6, 1.2e-6}, []float64{plain, noMode, thick, 8e-6})
	other := box([]float64{3e-6, 4e-6}, []float64{plain, 8e-6})
	part := func(before ...*schema.Tile) []byte {
		s := folder(t)
		var ds []*delivery
		for _, b := range append(before, ti) {
			ds = append(ds, &delivery{message: message(t, b)})
		}
		if _, err := work(t, worker.Options{Store: s}, ds...); err != nil {
			t.Fatal(err)
		}
		b, err := s.Get(t.Context(), store.Part(name(t, ti)))
		if err != nil {
			t.Fatal(err)
		}
		return b
	}
	alone := part()
	if len(alone) == 0 {
		t.Fatal("found an empty part")
	}
	if !slices.Equal(part(other), alone) {
		t.Error("found other bytes after another tile")
	}
	if !slices.Equal(part(other, box([]float64{1e-6}, []float64{plain, panics})), alone) {
		t.Error("found other bytes after a panic")
	}
}

func TestBadOptions(t *testing.T) {
	h, s := &hand{done: func() {}}, folder(t)
	for name, o := range map[string]worker.Options{
		"no queue": {Store: s}, "no store": {Queue: h}, "slots": {Queue: h, Store: s, Slots: -1}, "delay": {Queue: h, Store: s, RetryDelay: -1},
	} {
		t.Run(name, func(t *testing.T) {
			if err := worker.Run(t.Context(), o); err == nil {
				t.Error("expected an error")
			}
		})
	}
}

// TestProblemIsKept: a problem is made once for tiles of the same physics, and
// anew for others.
func TestProblemIsKept(t *testing.T) {
	one, two := box([]float64{1.5e-6}, []float64{1e-6}), box([]float64{1.6e-6}, []float64{1e-6})
	other := box([]float64{1.5e-6}, []float64{1e-6})
	other.Physics.Modes++
	made := 0
	o := worker.Options{Store: folder(t), Slots: 1, Problem: func(p *schema.Physics) (solvers.Problem, []string, error) {
		made++
		return fakeProblem(p)
	}}
	if _, err := work(t, o, &delivery{message: message(t, one)}, &delivery{message: message(t, two)}, &delivery{message: message(t, other)}); err != nil {
		t.Fatal(err)
	}
	if made != 2 {
		t.Errorf("%d problems were made, expected 2", made)
	}
}
