package guide

import (
	"context"
	"math"
	"runtime"
	"runtime/metrics"
	"testing"

	"betaloom/solvers"
)

// sizes is a guide of one strip whose points are compared and measured.
type sizes struct {
	name, text    string
	want          int
	width, height float64            // um
	angle         float64            // deg
	neff          map[string]float64 // converged values at 1.55 um by name, where they are known
}

// measured are the guides of BenchmarkPoint: the strip of TestStrip with its values, and two of which there are none.
func measured() []sizes {
	exact := map[string]float64{"TE00": 2.447288247925, "TM00": 1.771707850249}
	return []sizes{
		{"strip", strip, 1, 0.5, 0.22, 90, exact},
		{"strip2", strip, 2, 0.5, 0.22, 90, exact},
		{"tilted", strip, 2, 0.5, 0.22, 80, nil},
		{"nitride", nitride, 2, 1.6, 0.8, 88, nil},
	}
}

// point is at 1.55 um, and a little above for odd i.
func (s *sizes) point(i int) solvers.Q {
	return solvers.Q{frequency(1.55 * um * (1 + 0.002*float64(i%2))), s.width * um, s.height * um, s.angle * math.Pi / 180}
}

func (s *sizes) guide(t testing.TB, accuracy string) *Guide {
	return guide(t, at(s.text, "accuracy: {neff: "+accuracy+"}"))
}

// next solves a point from its neighbour's modes.
func (s *sizes) next(t testing.TB, g *Guide, i int, near []solvers.Mode) []solvers.Mode {
	modes, _, err := g.Modes(context.Background(), s.point(i), s.want, near)
	if err != nil || len(modes) != s.want {
		t.Fatal(len(modes), err)
	}
	return modes
}

// BenchmarkPoint is one point of a tile with all columns, from its neighbour's modes: time, points in a second of one core, the
// largest heap with its garbage and what is kept between points (both in MB, over that before), and the largest error of
// neff where it is known and the largest bound, in units of 1e-9.
func BenchmarkPoint(b *testing.B) {
	for _, s := range measured() {
		for _, accuracy := range []string{"1e-4", "1e-5", "1e-6", "1e-7"} {
			b.Run(s.name+"/"+accuracy, func(b *testing.B) {
				runtime.GC()
				before := heap()
				g := s.guide(b, accuracy)
				modes := s.next(b, g, 0, nil)
				modes = s.next(b, g, 1, modes)
				peak := 0.0
				b.ReportAllocs()
				for i := 0; b.Loop(); i++ {
					modes = s.next(b, g, i, modes)
					peak = max(peak, heap())
				}
				ms := b.Elapsed().Seconds() * 1e3 / float64(b.N)
				modes = s.next(b, g, 0, modes)
				runtime.GC()
				kept := heap()
				b.ReportMetric(ms, "ms")
				b.ReportMetric(1e3/ms, "points/s")
				b.ReportMetric((peak-before)/1e6, "peak-MB")
				b.ReportMetric((kept-before)/1e6, "kept-MB")
				s.report(b, modes)
				runtime.KeepAlive(g)
			})
		}
	}
}

// heap is the bytes in use by objects, the dead ones not yet collected included.
func heap() float64 {
	sample := []metrics.Sample{{Name: "/memory/classes/heap/objects:bytes"}}
	metrics.Read(sample)
	return float64(sample[0].Value.Uint64())
}

// report gives the modes' largest bound, and their largest error where it is known.
func (s *sizes) report(b *testing.B, modes []solvers.Mode) {
	e, bound := 0.0, 0.0
	for _, m := range modes {
		bound = max(bound, m.NeffErr)
		if v, ok := s.neff[m.Family]; ok {
			e = max(e, math.Abs(m.Neff-v))
		}
	}
	b.ReportMetric(bound*1e9, "nano-bound")
	b.ReportMetric(float64(modes[0].State.(*start).level), "level")
	if s.neff != nil {
		b.ReportMetric(e*1e9, "nano-error")
	}
}

// A point that begins from its neighbour's modes allocates vectors and what it returns, nothing that grows with the factors: those keep
// their room. The limits are a third above what was measured (Go 1.26), as a guard against what would slow every point.
func TestPointAllocates(t *testing.T) {
	limits := map[string]uint64{"1e-4": 3.2e6, "1e-6": 6e6}
	s := measured()[0]
	for accuracy, limit := range limits {
		t.Run(accuracy, func(t *testing.T) {
			g := s.guide(t, accuracy)
			modes := s.next(t, g, 0, nil)
			for i := range 3 { // by now its level and its topologies are those of all further points
				modes = s.next(t, g, i, modes)
			}
			var before, after runtime.MemStats
			const points = 4
			runtime.ReadMemStats(&before)
			for i := range points {
				modes = s.next(t, g, i, modes)
			}
			runtime.ReadMemStats(&after)
			if each := (after.TotalAlloc - before.TotalAlloc) / points; each > limit {
				t.Errorf("a point allocates %d bytes, limit %d", each, limit)
			}
		})
	}
}
