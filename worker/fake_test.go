package worker_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"sync"
	"testing"
	"time"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/part"
	"betaloom/schema/queue"
	"betaloom/schema/store"
	"betaloom/solvers"
)

const run = "0197a1b2-0000-7000-8000-000000000001"

// deadline bounds what takes moments on any machine.
const deadline = time.Minute

// physics has a parameter of each kind; what the fake problem answers
// depends on the height alone.
func physics() schema.Physics {
	length, height := schema.Dimension{Length: 1}, schema.Number{Parameter: "height"}
	return schema.Physics{
		Format:    schema.FormatPhysics,
		Materials: map[string]schema.Material{"film": {Index: &schema.Number{Value: 2}}, "oxide": {Index: &schema.Number{Value: 1.45}}},
		Parameters: []schema.Parameter{
			{Name: "half", Kind: schema.Derived, Dimension: length, Expr: "gap / 2"}, // before what it refers to
			{Name: "gap", Kind: schema.Derived, Dimension: length, Expr: "sqrt(height * 1 um)"},
			{Name: "wavelength", Kind: schema.Axis, Dimension: length},
			{Name: "height", Kind: schema.Axis, Dimension: length},
			{Name: "wall", Kind: schema.Fixed, Dimension: schema.Dimension{Angle: 1}, Value: 1.5},
		},
		Section: schema.Section{Layers: &schema.Layers{Layers: []schema.Layer{
			{Material: "oxide"}, {Name: "core", Material: "film", Thickness: &height}, {Material: "oxide"}}}},
		Equation: "auto", Modes: 2, Accuracy: schema.Accuracy{Neff: 1e-6},
		Keep: "height < 9 um",
	}
}

// Heights that the fake problem does not solve.
const (
	noMode      = 1e-6
	badInput    = 2e-6
	unconverged = 3e-6
	fails       = 4e-6
	panics      = 5e-6
	miscounts   = 6e-6
	left        = 10e-6 // excluded by keep
	underivable = -1e-6 // gap is the root of a negative number
	thick       = 7e-6  // a bound above what is asked
	plain       = 0.5e-6
)

func box(wavelengths, heights []float64) *schema.Tile {
	return &schema.Tile{Physics: physics(), Axes: []schema.AxisBlock{
		{Parameter: "wavelength", Values: wavelengths}, {Parameter: "height", Values: heights},
	}}
}

// problem answers with numbers that depend on the point and, in their last
// digits, on where it was started from, as those of an iteration do.
type problem struct {
	solve func(q solvers.Q)
	modes [2]solvers.Mode
}

func fakeProblem(p *schema.Physics) (solvers.Problem, []string, error) {
	return &problem{solve: func(solvers.Q) {}}, []string{"it is a fake"}, nil
}

func (p *problem) Modes(ctx context.Context, q solvers.Q, want int, near []solvers.Mode) ([]solvers.Mode, solvers.Count, error) {
	p.solve(q)
	switch height := q[1]; height {
	case noMode:
		return nil, solvers.Count{Reason: "the film is too thin"}, nil
	case badInput:
		return nil, solvers.Count{}, &solvers.InputError{Where: "layer core", Found: "2 um", Expected: "less"}
	case unconverged:
		return nil, solvers.Count{}, fmt.Errorf("slab: %w", &solvers.ConvergenceError{Where: "mode 1", Err: errors.New("ten steps")})
	case fails:
		return nil, solvers.Count{}, errors.New("the library is out of luck")
	case panics:
		panic("index out of range")
	case miscounts:
		return nil, solvers.Count{N: 3}, nil
	}
	for i := range want {
		p.modes[i] = mode(q, i, near)
	}
	return p.modes[:want], solvers.Count{N: 5, Proof: "by decree"}, nil
}

func mode(q solvers.Q, i int, near []solvers.Mode) solvers.Mode {
	none := math.NaN()
	m := solvers.Mode{
		Family: fmt.Sprintf("TE%d", i), Type: "TE", Neff: 2 - float64(i)/8 + math.Sin(q[0]*1e-15+q[1]*1e6)/100, Kappa: 0,
		Ng: 2, GVD: 1e-25, Beta3: none, NeffErr: 1e-9, KappaErr: 0, NgErr: 1e-8, GVDErr: 1e-30, Beta3Err: none,
		DNeff: []float64{1e5, 2}, DNg: []float64{3e5, 4}, ExShare: 1, Aeff: none, Weff: 1e-6, Confinement: []float64{0.5},
		Z: complex(none, none), Cutoff: none, CPerM: none, LPerM: none, Flags: []string{"near-cutoff"},
	}
	if len(near) > i {
		m.Neff += near[i].Neff * 1e-12
		m.DNeff[0] += near[i].DNeff[0] * 1e-12
	}
	if q[1] == thick {
		m.NeffErr = 1e-3
	}
	return m
}

// delivery records how it was answered.
type delivery struct {
	message []byte
	attempt int
	last    bool

	mu      sync.Mutex
	answers []string
	beats   chan struct{} // hears of each sign of life; may be nil
	failing error         // of every answer
}

func (d *delivery) Message() []byte          { return d.message }
func (d *delivery) Job() (*queue.Job, error) { return queue.Decode(d.message, run) }
func (d *delivery) Attempt() int             { return max(d.attempt, 1) }
func (d *delivery) Last() bool               { return d.last }

func (d *delivery) Working() error {
	select {
	case d.beats <- struct{}{}:
	default:
	}
	return d.failing
}

func (d *delivery) answer(ctx context.Context, what string) error {
	d.mu.Lock()
	defer d.mu.Unlock()
	if err := ctx.Err(); err != nil {
		return err
	}
	d.answers = append(d.answers, what)
	return d.failing
}

func (d *delivery) Confirm(ctx context.Context) error  { return d.answer(ctx, "confirm") }
func (d *delivery) GiveBack(ctx context.Context) error { return d.answer(ctx, "give back") }
func (d *delivery) Retry(ctx context.Context, delay time.Duration) error {
	return d.answer(ctx, "retry after "+delay.String())
}
func (d *delivery) Refuse(ctx context.Context, reason string) error {
	return d.answer(ctx, "refuse: "+reason)
}

// hand hands out deliveries in order, then waits for the end, or ends the
// worker when all are answered.
type hand struct {
	deliveries chan *delivery
	ackWait    time.Duration
	done       context.CancelFunc
}

func (h *hand) AckWait() time.Duration { return max(h.ackWait, time.Second) }

func (h *hand) Take(ctx context.Context) (queue.Delivery, error) {
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	select {
	case d := <-h.deliveries:
		return d, nil
	default:
		h.done()
		return nil, context.Canceled
	}
}

func message(t testing.TB, ti *schema.Tile) []byte {
	t.Helper()
	j, err := queue.NewJob(run, 0, ti)
	if err != nil {
		t.Fatal(err)
	}
	b, err := j.Encode()
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func name(t testing.TB, ti *schema.Tile) string {
	t.Helper()
	n, err := ti.Name()
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func folder(t testing.TB) *store.FolderStore {
	t.Helper()
	s, err := store.Folder(t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// rows reads the part of a tile.
func rows(t *testing.T, s store.Store, ti *schema.Tile) *column.Batch {
	t.Helper()
	b, err := s.Get(t.Context(), store.Part(name(t, ti)))
	if err != nil {
		t.Fatal(err)
	}
	batch := column.NewBatch(column.Part(&ti.Physics), nil, 0)
	if err := part.Read(&ti.Physics, name(t, ti), ti.Points(), b, batch); err != nil {
		t.Fatal(err)
	}
	return batch
}
