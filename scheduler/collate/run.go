package collate

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"betaloom/schema/column"
	"betaloom/schema/store"

	"betaloom/scheduler/grid"
	"betaloom/scheduler/surface"
)

// The names of the tables in a run folder.
const (
	PointsFile   = "points.parquet"
	ModesFile    = "modes.parquet"
	SurfacesFile = "surfaces.arrow"
)

// MetaPartial is the key in a table's metadata that is "true" where tiles were
// missing.
const MetaPartial = "partial"

// spillFile holds what does not fit in memory of a band.
const spillFile = "collate.spill.tmp"

// Temporaries lists the names that an interrupted Run may leave behind.
func Temporaries() []string {
	return []string{PointsFile + temporary, ModesFile + temporary, spillFile, SurfacesFile + temporary, SurfacesFile + ".rows"}
}

// Input is what a Run needs.
type Input struct {
	Grid    *grid.Grid
	Store   store.Store
	Dir     string // the run folder
	Partial bool   // join although tiles are missing
}

// Run writes the tables. A cancelled context ends it with the context's error; no error leaves
// a new file under a final name, except one that renaming itself met.
func Run(ctx context.Context, in Input) (Summary, error) {
	if err := clean(in.Dir); err != nil {
		return Summary{}, fmt.Errorf("collate: %w", err)
	}
	inv, err := takeInventory(ctx, in)
	if err != nil {
		return Summary{}, fmt.Errorf("collate: %w", err)
	}
	j, err := newJoin(in, inv)
	if err != nil {
		return Summary{}, fmt.Errorf("collate: %w", err)
	}
	defer j.discard()
	if err := j.run(ctx); err != nil {
		return Summary{}, fmt.Errorf("collate: %w", err)
	}
	return j.summary.result(), nil
}

func clean(dir string) error {
	for _, name := range Temporaries() {
		if err := os.Remove(filepath.Join(dir, name)); err != nil && !errors.Is(err, fs.ErrNotExist) {
			return err
		}
	}
	return nil
}

// join is one Run under way.
type join struct {
	in       Input
	inv      *inventory
	points   *table
	modes    *table
	surfaces *surface.Writer // nil for a list of rows
	shelf    *shelf
	summary  *tally
	corrupt  []Corrupt
}

func newJoin(in Input, inv *inventory) (*join, error) {
	p := in.Grid.Physics()
	if err := column.Check(p); err != nil {
		return nil, err
	}
	j := &join{in: in, inv: inv, shelf: newShelf(p, filepath.Join(in.Dir, spillFile), memoryWords), summary: newTally(p, inv)}
	meta := map[string]string{}
	if len(inv.missing) > 0 {
		meta[MetaPartial] = "true"
	}
	var err error
	if j.points, err = createTable(in.Dir, PointsFile, column.Points(p), in.Grid.Points(), j.shelf, meta); err != nil {
		return nil, err
	}
	if j.modes, err = createTable(in.Dir, ModesFile, column.Modes(p), in.Grid.Points()*max(1, column.MostModes(p)), j.shelf, meta); err != nil {
		j.discard()
		return nil, err
	}
	if in.Grid.IsBox() {
		j.surfaces, err = surface.NewWriter(filepath.Join(in.Dir, SurfacesFile), surface.Spec{Axes: in.Grid.Axes(), Physics: p})
		if err != nil {
			j.discard()
			return nil, err
		}
	}
	j.modes.also = j.modeRows
	j.points.also = j.summary.points
	return j, nil
}

// modeRows takes a row group of modes to the surfaces and the summary.
func (j *join) modeRows(b *column.Batch) error {
	if err := j.summary.modes(b); err != nil || j.surfaces == nil {
		return err
	}
	return j.surfaces.AppendBatch(b)
}

func (j *join) run(ctx context.Context) error {
	ctx, stop := context.WithCancel(ctx)
	tiles := j.inv.load(ctx)
	defer tiles.wait()
	defer stop()
	for _, band := range j.in.Grid.Bands() {
		if err := j.band(ctx, band, tiles); err != nil {
			return err
		}
	}
	if len(j.corrupt) > 0 {
		return &CorruptError{Parts: j.corrupt}
	}
	return j.publish()
}

// band shelves the tiles of a band and writes its points. After a corrupt
// part it only looks for further ones.
func (j *join) band(ctx context.Context, band grid.Band, tiles *loader) error {
	j.shelf.reset()
	for i := range band.Tiles {
		batch, err := tiles.next()
		var bad *Corrupt
		switch {
		case errors.As(err, &bad):
			j.corrupt = append(j.corrupt, *bad)
		case err != nil:
			return err
		case len(j.corrupt) == 0:
			if err := j.shelf.put(band.Tile+i, batch); err != nil {
				return err
			}
		}
		tiles.free(batch)
	}
	if len(j.corrupt) > 0 {
		return nil
	}
	return runs(j.in.Grid, band, func(r run) error {
		if err := ctx.Err(); err != nil {
			return err
		}
		return j.write(r)
	})
}

func (j *join) write(r run) error {
	got, err := j.shelf.read(r)
	if err != nil {
		return err
	}
	if err := j.points.append(got, got.first); err != nil {
		return err
	}
	return j.modes.append(got, got.withMode)
}

// publish makes the files durable, then gives them their names.
func (j *join) publish() error {
	for _, t := range []*table{j.points, j.modes} {
		if err := t.finish(); err != nil {
			return err
		}
	}
	if j.surfaces != nil {
		if err := j.surfaces.Close(); err != nil {
			return err
		}
	}
	for _, t := range []*table{j.modes, j.points} {
		if err := t.publish(); err != nil {
			return err
		}
	}
	return j.summary.sizes(j.in.Dir)
}

func (j *join) discard() {
	if j.points != nil {
		j.points.discard()
	}
	if j.modes != nil {
		j.modes.discard()
	}
	if j.surfaces != nil {
		j.surfaces.Discard()
	}
	j.shelf.close()
}
