package collate

import (
	"context"
	"os"
	"path/filepath"
	"runtime/metrics"
	"sync/atomic"
	"testing"

	"betaloom/schema/part/parttest"
	"betaloom/schema/store"

	"betaloom/scheduler/grid"
)

// producer is a store whose parts are made when they are asked for, and
// that notes how much memory is in use then.
type producer struct {
	grid  *grid.Grid
	tiles map[string]int
	peak  atomic.Uint64
}

func newProducer(t testing.TB, g *grid.Grid) *producer {
	p := &producer{grid: g, tiles: map[string]int{}}
	for i := range g.Tiles() {
		p.tiles[nameOf(t, g.Tile(i))] = i
	}
	return p
}

func (p *producer) Put(context.Context, string, []byte) error { return nil }

func (p *producer) Delete(context.Context, string) error { return nil }

func (p *producer) List(_ context.Context, prefix string) ([]string, error) {
	var names []string
	if prefix == "parts/" {
		for tile := range p.tiles {
			names = append(names, store.Part(tile))
		}
	}
	return names, nil
}

func (p *producer) Get(_ context.Context, name string) ([]byte, error) {
	live := []metrics.Sample{{Name: "/gc/heap/live:bytes"}}
	metrics.Read(live)
	for now := live[0].Value.Uint64(); ; {
		before := p.peak.Load()
		if now <= before || p.peak.CompareAndSwap(before, now) {
			break
		}
	}
	tile, ok := store.Tile(name)
	i, known := p.tiles[tile]
	if !ok || !known {
		return nil, store.ErrNotFound
	}
	return parttest.Part(p.grid.Tile(i))
}

// A first axis of three points makes the whole grid one band, the worst case.
// Its rows would take 200 MB in memory; the bound is the shelf's 16 MiB, a row group of 50
// columns (52 MB), the tiles in hand and the surfaces' buffers.
func TestMemoryIsBounded(t *testing.T) {
	const bound = 180 << 20
	g := box(t, 3, 500, 200)
	p, dir := newProducer(t, g), t.TempDir()
	sum, err := Run(context.Background(), Input{Grid: g, Store: p, Dir: dir})
	if err != nil {
		t.Fatal(err)
	}
	if raw := sum.Rows * 8 * 46; raw < bound {
		t.Fatalf("the rows take %d MB, too little for the test to say anything", raw>>20)
	}
	if peak := p.peak.Load(); peak == 0 || peak > bound {
		t.Errorf("found %d MB in use, expected at most %d", peak>>20, bound>>20)
	} else {
		t.Logf("%d rows: %d MB in use at most", sum.Rows, peak>>20)
	}
	if _, err := os.Stat(filepath.Join(dir, spillFile)); err == nil {
		t.Error("the spilt rows are still there")
	}
}
