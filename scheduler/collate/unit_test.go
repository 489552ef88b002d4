package collate

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"betaloom/schema"

	"betaloom/scheduler/grid"
)

// The order of the runs is compared with the grid's own numbering of each
// tile's points.
func TestRunsFollowTheGrid(t *testing.T) {
	for _, lengths := range [][]int{{1}, {5000}, {3, 7}, {100, 100}, {3, 2000}, {2000, 3}, {17, 33, 20}, {20, 1, 40, 9}, {1, 1, 1}, {}} {
		t.Run(fmt.Sprint(lengths), func(t *testing.T) {
			var axes []schema.AxisBlock
			for i, n := range lengths {
				axes = append(axes, schema.AxisBlock{Parameter: fmt.Sprint("p", i), Values: make([]float64, n)})
			}
			g, err := grid.New(schema.Physics{}, axes, nil, nil)
			if err != nil {
				t.Fatal(err)
			}
			next := 0
			for _, band := range g.Bands() {
				err := runs(g, band, func(r run) error {
					if r.tile < band.Tile || r.tile >= band.Tile+band.Tiles {
						return fmt.Errorf("found tile %d outside its band", r.tile)
					}
					block := g.Block(r.tile)
					for i := range r.n {
						if r.point != next-i || g.Point(block, r.local+i) != next {
							return fmt.Errorf("found %+v, expected the point %d", r, next)
						}
						next++
					}
					return nil
				})
				if err != nil {
					t.Fatal(err)
				}
			}
			if next != g.Points() {
				t.Errorf("found %d points, expected %d", next, g.Points())
			}
		})
	}
}

func TestSketch(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for _, n := range []int{1, 2, 3, 1000, 30001} {
		t.Run(fmt.Sprint(n), func(t *testing.T) {
			var s sketch
			values := make([]float64, n)
			for i := range values {
				values[i] = math.Exp(-30 * r.Float64())
			}
			s.add(values)
			s.add([]float64{math.NaN(), math.Inf(1)})
			slices.Sort(values)
			want := values[(n-1)/2]
			if got := s.median(); math.Abs(got-want) > 0.008*want { // half a bin: 1/128
				t.Errorf("found the median %g, expected %g", got, want)
			}
			if s.worst != values[n-1] || s.rows != n {
				t.Errorf("found %g of %d rows, expected %g of %d", s.worst, s.rows, values[n-1], n)
			}
		})
	}
	t.Run("zeros", func(t *testing.T) {
		var s sketch
		s.add(make([]float64, 5))
		if s.median() != 0 || s.worst != 0 {
			t.Errorf("found %g and %g, expected 0", s.median(), s.worst)
		}
	})
}
