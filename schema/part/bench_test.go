package part_test

import (
	"testing"

	"betaloom/schema"
	"betaloom/schema/column"
	"betaloom/schema/part"
	"betaloom/schema/part/parttest"
)

// solvedTile is a full tile whose points all have their modes.
func solvedTile() *schema.Tile {
	t := &schema.Tile{Physics: parttest.Physics(), Axes: parttest.Axes(16, 16, 16)}
	for i := range t.Axes[1].Values {
		t.Axes[1].Values[i] = 0.3e-6 + 0.05e-6*float64(i)
	}
	return t
}

func BenchmarkEncodePart(b *testing.B) {
	tile := solvedTile()
	builder := part.NewBuilder(&tile.Physics)
	points := make([]part.Point, tile.Points())
	modes := make([][]part.Mode, tile.Points())
	for i := range points {
		points[i], modes[i] = parttest.Point(tile, i)
	}
	rows, size := 0, 0
	b.ReportAllocs()
	for b.Loop() {
		for i := range points {
			if err := builder.Add(points[i], modes[i]); err != nil {
				b.Fatal(err)
			}
			rows += len(modes[i])
		}
		data, err := builder.Encode("tile")
		if err != nil {
			b.Fatal(err)
		}
		size = len(data)
	}
	b.ReportMetric(float64(rows)/b.Elapsed().Seconds(), "rows/s")
	b.ReportMetric(float64(size)/float64(2*len(points)), "B/row")
}

func BenchmarkReadPart(b *testing.B) {
	tile := solvedTile()
	name, err := tile.Name()
	if err != nil {
		b.Fatal(err)
	}
	data, err := parttest.Part(tile)
	if err != nil {
		b.Fatal(err)
	}
	into := column.NewBatch(column.Part(&tile.Physics), nil, 0)
	rows := 0
	b.ReportAllocs()
	for b.Loop() {
		if err := part.Read(&tile.Physics, name, tile.Points(), data, into); err != nil {
			b.Fatal(err)
		}
		rows += into.Rows
	}
	b.ReportMetric(float64(rows)/b.Elapsed().Seconds(), "rows/s")
}
