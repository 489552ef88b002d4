package part

import (
	"bytes"
	"fmt"
	"slices"

	"betaloom/schema"
	"betaloom/schema/column"
)

// metaTile is the key of the tile's name in a part's metadata.
const metaTile = "betaloom.tile"

// Builder gathers the rows of a part. It may be used again after Encode.
type Builder struct {
	physics  *schema.Physics
	batch    *column.Batch
	scales   []float64 // of the parameters without wavelength and frequency
	places   []int     // of those in Physics.Parameters
	wave     int       // place of wavelength in Physics.Parameters, or -1
	freq     int       // that of frequency
	bases    []float64 // scales of the base parameters
	confined int
	most     int // modes a point
	points   int
	out      bytes.Buffer
	flags    []string
	row, col int // where the next value goes
}

// NewBuilder makes an empty builder for the tiles of a physics.
func NewBuilder(p *schema.Physics) *Builder {
	b := &Builder{physics: p, batch: column.NewBatch(column.Part(p), nil, 0), wave: -1, freq: -1,
		confined: len(column.Confinements(p)), most: column.MostModes(p)}
	for i, q := range p.Parameters {
		_, scale := column.Parameter(q)
		switch q.Name {
		case schema.Wavelength:
			b.wave = i
			continue
		case schema.Frequency:
			b.freq = i
			continue
		}
		b.scales, b.places = append(b.scales, scale), append(b.places, i)
		if q.Kind != schema.Derived {
			b.bases = append(b.bases, scale)
		}
	}
	return b
}

// Add appends the next point of the tile with its modes, from the highest
// Re neff down.
func (b *Builder) Add(pt Point, modes []Mode) error {
	if err := b.check(&pt, modes); err != nil {
		return fmt.Errorf("part: point %d: %w", b.points, err)
	}
	b.room(b.row + max(1, len(modes)))
	if len(modes) == 0 {
		b.point(&pt)
		b.noMode()
		b.row++
	}
	for i := range modes {
		wavelength, frequency := b.point(&pt)
		b.mode(i, &modes[i], wavelength, frequency)
		b.row++
	}
	b.points++
	return nil
}

// room makes room for rows, many at a time.
func (b *Builder) room(rows int) {
	if rows > b.batch.Rows {
		b.batch.Grow(max(256, 2*rows))
	}
}

func (b *Builder) check(pt *Point, modes []Mode) error {
	if len(pt.Values) != len(b.physics.Parameters) {
		return fmt.Errorf("found %d parameter values, expected %d", len(pt.Values), len(b.physics.Parameters))
	}
	if !slices.Contains([]string{Solved, NoMode, Failed, Excluded}, pt.State) {
		return fmt.Errorf("found the state %q, expected solved, no-mode, failed or excluded", pt.State)
	}
	if (pt.State == Solved) != (len(modes) > 0) || len(modes) > b.most {
		return fmt.Errorf("found %d modes in state %s, expected 1 to %d if solved, else none", len(modes), pt.State, b.most)
	}
	for i := range modes {
		m := &modes[i]
		if len(m.DNeff) != len(b.bases) || len(m.DNg) != len(b.bases) || len(m.Confinement) != b.confined {
			return fmt.Errorf("mode %d: found %d and %d sensitivities and %d confinements, expected %d, %d and %d",
				i, len(m.DNeff), len(m.DNg), len(m.Confinement), len(b.bases), len(b.bases), b.confined)
		}
	}
	return nil
}

// Encode gives the part's bytes and empties the builder.
func (b *Builder) Encode(tile string) ([]byte, error) {
	if b.points == 0 {
		return nil, fmt.Errorf("part %s: found no points, expected at least one", tile)
	}
	defer b.reset()
	b.out.Reset()
	b.batch.Grow(b.row)
	w, err := column.NewWriter(&b.out, b.batch.Columns, column.Options{Meta: map[string]string{metaTile: tile}})
	if err != nil {
		return nil, fmt.Errorf("part %s: %w", tile, err)
	}
	if err := w.Write(b.batch); err != nil {
		return nil, fmt.Errorf("part %s: %w", tile, err)
	}
	if err := w.Close(); err != nil {
		return nil, fmt.Errorf("part %s: %w", tile, err)
	}
	return bytes.Clone(b.out.Bytes()), nil
}

func (b *Builder) reset() {
	b.batch.Reset()
	b.batch.Texts.Truncate(1)
	b.points, b.row = 0, 0
}
