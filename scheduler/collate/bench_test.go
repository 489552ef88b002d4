package collate

import (
	"context"
	"syscall"
	"testing"
	"time"

	"betaloom/schema/part"
	"betaloom/schema/part/parttest"
	"betaloom/schema/store"
)

// cpu is the processor time that this process has used, in seconds: unlike the
// clock it says the same on a busy machine.
func cpu(b *testing.B) float64 {
	b.Helper()
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		b.Fatal(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano()).Seconds()
}

// BenchmarkJoin joins parts that are there into tables and surfaces.
func BenchmarkJoin(b *testing.B) {
	g := box(b, 48, 64, 48)
	s := newMemory()
	solve(b, g, s, every(g))
	rows, before := 0, cpu(b)
	for b.Loop() {
		got, err := Run(context.Background(), Input{Grid: g, Store: s, Dir: b.TempDir()})
		if err != nil {
			b.Fatal(err)
		}
		rows += got.Rows
	}
	b.ReportMetric(float64(rows)/(cpu(b)-before), "rows/core-s")
}

// answer is a solved tile.
type answer struct {
	name   string
	points []part.Point
	modes  [][]part.Mode
}

// BenchmarkEncodeAndJoin makes the parts as well: all that happens to a row
// after it is solved.
func BenchmarkEncodeAndJoin(b *testing.B) {
	g := box(b, 32, 64, 32)
	var answers []answer
	for i := range g.Tiles() {
		tile := g.Tile(i)
		a := answer{name: nameOf(b, tile)}
		for local := range tile.Points() {
			pt, modes := parttest.Point(tile, local)
			a.points, a.modes = append(a.points, pt), append(a.modes, modes)
		}
		answers = append(answers, a)
	}
	builder := part.NewBuilder(g.Physics())
	rows, before := 0, cpu(b)
	for b.Loop() {
		s := newMemory()
		for _, a := range answers {
			encode(b, builder, s, a)
		}
		got, err := Run(context.Background(), Input{Grid: g, Store: s, Dir: b.TempDir()})
		if err != nil {
			b.Fatal(err)
		}
		rows += got.Rows
	}
	b.ReportMetric(float64(rows)/(cpu(b)-before), "rows/core-s")
}

func encode(b *testing.B, builder *part.Builder, s store.Store, a answer) {
	b.Helper()
	for i := range a.points {
		if err := builder.Add(a.points[i], a.modes[i]); err != nil {
			b.Fatal(err)
		}
	}
	data, err := builder.Encode(a.name)
	if err != nil {
		b.Fatal(err)
	}
	if err := s.Put(context.Background(), store.Part(a.name), data); err != nil {
		b.Fatal(err)
	}
}
