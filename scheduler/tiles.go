package scheduler

import (
	"context"
	"fmt"
	"iter"

	"betaloom/scheduler/grid"
	"betaloom/schema/queue"
	"betaloom/schema/store"
)

// tiles are the tiles of a grid and what the store has of them.
type tiles struct {
	grid  *grid.Grid
	store store.Store
	names []string // of every tile, in the grid's order
}

func newTiles(ctx context.Context, g *grid.Grid, s store.Store) (*tiles, error) {
	t := &tiles{grid: g, store: s, names: make([]string, g.Tiles())}
	for i := range t.names {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		name, err := g.Tile(i).Name()
		if err != nil {
			return nil, fmt.Errorf("tile %d: %w", i, err)
		}
		t.names[i] = name
	}
	return t, nil
}

// have is what the store has: the tiles with a part, and those set aside.
type have struct {
	parts, aside map[string]bool
}

func (t *tiles) have(ctx context.Context) (h have, err error) {
	if h.parts, err = store.Tiles(ctx, t.store, "parts/"); err != nil {
		return h, err
	}
	h.aside, err = store.Tiles(ctx, t.store, "aside/")
	return h, err
}

// missing lists the tiles, by their number, with neither a part nor a record
// that they were set aside.
func (t *tiles) missing(h have) []int {
	var list []int
	for i, name := range t.names {
		if !h.parts[name] && !h.aside[name] {
			list = append(list, i)
		}
	}
	return list
}

// aside reads the records of the grid's tiles that were set aside and have no part.
func (t *tiles) aside(ctx context.Context, h have) ([]store.SetAside, error) {
	var list []store.SetAside
	for _, name := range t.names {
		if !h.aside[name] || h.parts[name] {
			continue
		}
		a, err := store.GetAside(ctx, t.store, name)
		if err != nil {
			return nil, err
		}
		list = append(list, a)
	}
	return list, nil
}

// jobs gives the jobs of the tiles with these numbers.
func (t *tiles) jobs(run string, round int, numbers []int, published func()) iter.Seq2[*queue.Job, error] {
	return func(yield func(*queue.Job, error) bool) {
		for _, i := range numbers {
			job, err := queue.NewJob(run, round, t.grid.Tile(i))
			if !yield(job, err) || err != nil {
				return
			}
			published()
		}
	}
}

// forgetAside deletes the records of the grid's tiles that were set aside, so
// that they are missing.
func (t *tiles) forgetAside(ctx context.Context) error {
	h, err := t.have(ctx)
	if err != nil {
		return err
	}
	for _, name := range t.names {
		if !h.aside[name] {
			continue
		}
		if err := t.store.Delete(ctx, store.Aside(name)); err != nil {
			return err
		}
	}
	return nil
}
