package part

import (
	"bytes"
	"fmt"

	"github.com/apache/arrow/go/v17/arrow"

	"betaloom/schema"
	"betaloom/schema/column"
)

// Decode reads a part as an Arrow record of column.Schema(column.Part(p), nil)
// and proves it whole, as Read does.
func Decode(p *schema.Physics, tile string, points int, b []byte) (arrow.Record, error) {
	batch := column.NewBatch(column.Part(p), nil, 0)
	if err := Read(p, tile, points, b, batch); err != nil {
		return nil, err
	}
	return batch.Record(column.Schema(batch.Columns, nil))
}

// Read sets into, a batch of column.Part(p), to the rows of a part, and proves
// that they are those of this tile: its columns, its name and every one of
// its points.
func Read(p *schema.Physics, tile string, points int, b []byte, into *column.Batch) error {
	if err := read(p, tile, points, b, into); err != nil {
		return fmt.Errorf("part %s: %w", tile, err)
	}
	return nil
}

func read(p *schema.Physics, tile string, points int, b []byte, into *column.Batch) error {
	f, err := column.Open(bytes.NewReader(b), int64(len(b)))
	if err != nil {
		return err
	}
	defer f.Close()
	if err := checkHead(f, p, tile, points, into.Columns); err != nil {
		return err
	}
	all := make([]int, len(f.Columns))
	for i := range all {
		all[i] = i
	}
	scan, err := f.Scan(all)
	if err != nil {
		return err
	}
	n, err := scan.Next(into, f.Rows)
	if err != nil {
		return err
	}
	if n != f.Rows {
		return fmt.Errorf("found %d rows in the first row group, expected all %d", n, f.Rows)
	}
	return checkRows(into, points)
}

// checkHead compares what the file says of itself with what it should be.
func checkHead(f *column.File, p *schema.Physics, tile string, points int, want []column.Column) error {
	if found := f.Meta[metaTile]; found != tile {
		return fmt.Errorf("found the part of tile %.80q, expected that of %q", found, tile)
	}
	if most := points * max(1, column.MostModes(p)); f.Rows < points || f.Rows > most {
		return fmt.Errorf("found %d rows, expected %d to %d", f.Rows, points, most)
	}
	if len(f.Columns) != len(want) {
		return fmt.Errorf("found %d columns, expected %d", len(f.Columns), len(want))
	}
	for i, c := range f.Columns {
		if c != want[i] {
			return fmt.Errorf("column %d: found %.80q in %.40q, expected %q in %q", i, c.Name, c.Unit, want[i].Name, want[i].Unit)
		}
	}
	return nil
}

// checkRows proves that each point has its rows, in order.
func checkRows(b *column.Batch, points int) error {
	at := column.Index(b.Columns)
	local, mode := b.Vectors[at["local"]].Ints, b.Vectors[at["mode"]].Ints
	states := b.Vectors[at["state"]].Codes
	want, nextMode := int64(0), int64(0)
	for row := range b.Rows {
		if nextMode == 0 || local[row] != want-1 {
			if local[row] != want {
				return fmt.Errorf("row %d: found the point %d, expected %d", row, local[row], want)
			}
			want, nextMode = want+1, 0
		}
		state := b.Texts.Text(states[row])
		if err := checkMode(state, mode[row], nextMode); err != nil {
			return fmt.Errorf("row %d: %w", row, err)
		}
		nextMode++
		if state != Solved {
			nextMode = 0
		}
	}
	if want != int64(points) {
		return fmt.Errorf("found %d points, expected %d", want, points)
	}
	return nil
}

// checkMode compares a row's mode with the next one and with its state.
func checkMode(state string, mode, next int64) error {
	switch state {
	case Solved:
		if mode != next {
			return fmt.Errorf("found the mode %d, expected %d", mode, next)
		}
	case NoMode, Failed, Excluded:
		if mode != column.MissingInt || next != 0 {
			return fmt.Errorf("found a mode of a point in state %s, expected none", state)
		}
	default:
		return fmt.Errorf("found the state %.80q, expected one of a point", state)
	}
	return nil
}
