package scheduler

import (
	"context"
	"errors"
	"io/fs"
	"path/filepath"
	"time"

	"betaloom/schema/store"
)

// Status is where a run stands.
type Status struct {
	Record   *Record          `json:"record"`
	Running  bool             `json:"running"`  // a process works in the folder now
	Progress Progress         `json:"progress"` // tiles and points done are counted from the parts
	Aside    []store.SetAside `json:"aside"`    // the tiles that could not be solved
}

// ReadStatus looks at a run folder, also while another process works in it.
func ReadStatus(ctx context.Context, dir string) (*Status, error) {
	r, err := ReadRecord(dir)
	if err != nil {
		return nil, err
	}
	st := &Status{Record: r}
	if st.Running, err = store.Locked(filepath.Join(dir, fileLock)); err != nil {
		return nil, err
	}
	g, err := ReadGrid(dir)
	if st.Running && errors.Is(err, fs.ErrNotExist) {
		st.Progress.Phase = Preparing
		return st, nil // it is about to be written
	}
	if err != nil {
		return nil, err
	}
	s, err := store.Folder(dir)
	if err != nil {
		return nil, err
	}
	t, err := newTiles(ctx, g, s)
	if err != nil {
		return nil, err
	}
	if st.Running {
		if err := readJSON(filepath.Join(dir, fileProgress), &st.Progress); err != nil && !errors.Is(err, fs.ErrNotExist) {
			return nil, err
		}
	}
	return st, st.count(ctx, t)
}

func (st *Status) count(ctx context.Context, t *tiles) error {
	h, err := t.have(ctx)
	if err != nil {
		return err
	}
	missing := t.missing(h)
	left := 0
	for _, i := range missing {
		left += t.grid.Tile(i).Points()
	}
	p := &st.Progress
	p.Tiles, p.TilesDone = len(t.names), len(t.names)-len(missing)
	p.Points = t.grid.Points()
	p.PointsDone = p.Points - left
	if p.At.IsZero() {
		p.At = time.Now().UTC()
	}
	if p.Rate > 0 {
		p.Left = float64(left) / p.Rate
	}
	st.Aside, err = t.aside(ctx, h)
	return err
}
