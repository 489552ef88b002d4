package collate

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/part"
)

// Summary is what a Run has joined.
type Summary struct {
	Points       map[string]int    `json:"points"`   // by state
	Rows         int               `json:"rows"`     // of modes.parquet
	Families     map[string]int    `json:"families"` // rows of each
	Guided       map[int]int       `json:"guided_count"`
	Errors       map[string]Spread `json:"errors"` // by column; a column without a value is left out
	OverAccuracy int               `json:"rows_over_accuracy"`
	Partial      bool              `json:"partial"`
	MissingTiles int               `json:"missing_tiles"`
	AsideTiles   int               `json:"aside_tiles"`
	Bytes        map[string]int64  `json:"bytes"` // by file
}

// Spread is what the values of an error column are like. Worst is exact;
// Median is within 1 %.
type Spread struct {
	Rows   int     `json:"rows"`
	Median float64 `json:"median"`
	Worst  float64 `json:"worst"`
}

// errorColumns are the bounds of modes.parquet.
var errorColumns = [...]string{"neff_err", "ng_err", "gvd_err_ps2_per_km", "beta3_err_ps3_per_km", "kappa_err"}

// tally counts rows as they are written.
type tally struct {
	s                   Summary
	state, guided, mode int // columns of points, of points, of modes
	family, flag        int // of modes
	errors              [len(errorColumns)]int
	sketches            [len(errorColumns)]sketch
}

func newTally(p *schema.Physics, inv *inventory) *tally {
	points, modes := column.Index(column.Points(p)), column.Index(column.Modes(p))
	t := &tally{
		state: points["state"], guided: points["guided_count"],
		family: modes["family"], flag: modes["flag"], mode: modes["mode"],
		s: Summary{
			Points: map[string]int{}, Families: map[string]int{}, Guided: map[int]int{}, Errors: map[string]Spread{}, Bytes: map[string]int64{},
			Partial: len(inv.missing) > 0, MissingTiles: len(inv.missing), AsideTiles: len(inv.aside),
		},
	}
	for _, state := range []string{part.Solved, part.NoMode, part.Failed, part.Excluded} {
		t.s.Points[state] = 0
	}
	for i, name := range errorColumns {
		t.errors[i] = modes[name]
	}
	return t
}

func (t *tally) points(b *column.Batch) error {
	for row := range b.Rows {
		t.s.Points[b.Text(t.state, row)]++
		if n := b.Vectors[t.guided].Ints[row]; n != column.MissingInt {
			t.s.Guided[int(n)]++
		}
	}
	return nil
}

// modes counts rows of modes.parquet; each must have its family.
func (t *tally) modes(b *column.Batch) error {
	for row := range b.Rows {
		family := b.Text(t.family, row)
		if family == "" {
			return fmt.Errorf("point %d, mode %d: found no family: following is not available for this equation",
				b.Vectors[0].Ints[row], b.Vectors[t.mode].Ints[row])
		}
		t.s.Families[family]++
		if code := b.Vectors[t.flag].Codes[row]; code != 0 && hasFlag(b.Texts.Text(code), part.Accuracy) {
			t.s.OverAccuracy++
		}
	}
	t.s.Rows += b.Rows
	for i, c := range t.errors {
		t.sketches[i].add(b.Vectors[c].Floats)
	}
	return nil
}

func hasFlag(flags, flag string) bool {
	for f := range strings.SplitSeq(flags, ";") {
		if f == flag {
			return true
		}
	}
	return false
}

// sizes notes the sizes of the files.
func (t *tally) sizes(dir string) error {
	for _, name := range []string{PointsFile, ModesFile, SurfacesFile} {
		info, err := os.Stat(filepath.Join(dir, name))
		if errors.Is(err, fs.ErrNotExist) {
			continue
		}
		if err != nil {
			return err
		}
		t.s.Bytes[name] = info.Size()
	}
	return nil
}

func (t *tally) result() Summary {
	for i, name := range errorColumns {
		if k := &t.sketches[i]; k.rows > 0 {
			t.s.Errors[name] = Spread{Rows: k.rows, Median: k.median(), Worst: k.worst}
		}
	}
	return t.s
}
