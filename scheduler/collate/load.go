package collate

import (
	"context"
	"runtime"
	"sync"

	"betaloom/schema/column"
	"betaloom/schema/part"
)

// ahead is the most tiles that are read ahead: one takes about 8 MB.
const ahead = 4

// loader reads tiles ahead, on as many goroutines as there are processors but at
// most ahead, and gives them in order.
type loader struct {
	inv     *inventory
	columns []column.Column
	queue   chan chan loaded
	pool    sync.Pool
	done    sync.WaitGroup
}

type loaded struct {
	batch *column.Batch
	err   error
}

// load starts to read every tile of the grid, in order. Cancelling ctx ends it.
func (inv *inventory) load(ctx context.Context) *loader {
	l := &loader{inv: inv, columns: column.Part(inv.grid.Physics()), queue: make(chan chan loaded, min(runtime.GOMAXPROCS(0), ahead)-1)}
	l.done.Add(1)
	go l.start(ctx)
	return l
}

func (l *loader) start(ctx context.Context) {
	defer l.done.Done()
	defer close(l.queue)
	for i := range l.inv.names {
		answer := make(chan loaded, 1)
		select {
		case l.queue <- answer:
		case <-ctx.Done():
			return
		}
		l.done.Add(1)
		go func() {
			defer l.done.Done()
			batch, err := l.read(ctx, i)
			answer <- loaded{batch, err}
		}()
	}
}

// next gives the rows of the next tile; an error that is a *Corrupt concerns
// that tile alone.
func (l *loader) next() (*column.Batch, error) {
	answer, ok := <-l.queue
	if !ok {
		return nil, context.Canceled
	}
	got := <-answer
	return got.batch, got.err
}

// free gives a batch back to be used again.
func (l *loader) free(b *column.Batch) {
	if b != nil {
		b.Reset()
		b.Texts.Truncate(1)
		l.pool.Put(b)
	}
}

func (l *loader) wait() { l.done.Wait() }

func (l *loader) read(ctx context.Context, i int) (*column.Batch, error) {
	b, ok := l.pool.Get().(*column.Batch)
	if !ok {
		b = column.NewBatch(l.columns, nil, 0)
	}
	t := l.inv.tile(i)
	if reason, ok := l.inv.why(i); ok {
		return b, unsolved(t, reason, b)
	}
	data, err := l.inv.get(ctx, i)
	if err != nil {
		return b, err
	}
	if err := part.Read(&t.Physics, l.inv.names[i], t.Points(), data, b); err != nil {
		return b, &Corrupt{Tile: l.inv.names[i], Reason: err.Error()}
	}
	return b, nil
}
