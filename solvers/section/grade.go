package section

import (
	"fmt"
	"math"
	"slices"

	"betaloom/solvers"
)

// stretch is a length to be cut into cells: a row, or a column between two
// lines.
type stretch struct {
	width            float64
	low, high        bool // a corner at that end
	openLow, openEnd bool // beyond that end there is a computational wall
}

// maxCells bounds the cells that one stretch is cut into.
const maxCells = 1000

// cut gives the places of the cells' ends, as shares of the width from 0 to
// 1. They depend on the width only through the number of cells.
func (o *Options) cut(s stretch) ([]float64, error) {
	cells, err := o.coarse(s)
	if err != nil {
		return nil, err
	}
	places := []float64{0, 1}
	for i, at := 0, 0.0; i+1 < len(cells); i++ {
		at += cells[i]
		places = append(places, at)
	}
	first, last := cells[0], cells[len(cells)-1]
	if len(cells) == 1 && s.low && s.high {
		first, last = 0.5, 0.5
	}
	if s.low {
		for k := range o.layers(first * s.width) {
			places = append(places, first*math.Pow(o.Ratio, float64(k+1)))
		}
	}
	if s.high {
		for k := range o.layers(last * s.width) {
			places = append(places, 1-last*math.Pow(o.Ratio, float64(k+1)))
		}
	}
	slices.Sort(places)
	return places, nil
}

// coarse cuts a stretch into cells no wider than Size, before they are
// graded; toward an open end they grow.
func (o *Options) coarse(s stretch) ([]float64, error) {
	growth := 1.0
	if s.openLow != s.openEnd {
		growth = o.Growth
	}
	var cells []float64
	sum := 0.0
	for need, next := s.width/o.Size*(1-1e-9), 1.0; len(cells) == 0 || sum < need; next *= growth {
		if len(cells) == maxCells {
			return nil, &solvers.InputError{Where: "mesh", Found: fmt.Sprintf("%g m to be cut into cells of %g m", s.width, o.Size), Expected: fmt.Sprintf("at most %d cells", maxCells)}
		}
		cells, sum = append(cells, next), sum+next
	}
	for i := range cells {
		cells[i] /= sum
	}
	if s.openLow {
		slices.Reverse(cells)
	}
	return cells, nil
}

// layers is how often a cell of that width at a corner is cut by Ratio: so
// often that all corners of a mesh end in cells of about one width.
func (o *Options) layers(width float64) int {
	n := math.Round(float64(o.CornerLayers) + math.Log(width/o.Size)/-math.Log(o.Ratio))
	return int(math.Min(math.Max(n, 0), float64(o.CornerLayers)))
}

// order is the polynomial order along the width of a cell.
func (o *Options) order(width float64) int {
	n := math.Round(float64(o.Order) + o.Drop*math.Log(width/o.Size)/-math.Log(o.Ratio))
	return int(math.Min(math.Max(n, float64(o.MinOrder)), float64(o.Order)))
}
