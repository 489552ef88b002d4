package section

import (
	"fmt"

	"betaloom/solvers"
)

// differentiate sets DX and DY: the shares are constants, so that lines move
// as the walls and levels between which they stand. Derivatives that overflow are refused.
func (f *frame) differentiate() error {
	f.m.DX, f.m.DY = make([][][]float64, f.params), make([][]float64, f.params)
	moving := 0
	for p := range f.params {
		if f.moves(p) {
			moving++
			if moving*len(f.rows)*len(f.columns) > maxNumbers {
				return tooMany("derivatives")
			}
			f.m.DX[p], f.m.DY[p] = f.motion(p)
			if !bounded(f.m.DY[p]) || !bounded(f.m.DX[p]...) {
				return &solvers.InputError{
					Where: "mesh", Found: fmt.Sprintf("lines that move without bound with base parameter %d", p),
					Expected: "finite derivatives: a section and bounds whose numbers are not so far apart",
				}
			}
		}
	}
	return nil
}

// moves reports whether anything moves with parameter p.
func (f *frame) moves(p int) bool {
	for j := range f.w.plan.levels {
		if f.w.plan.levels[j].at(p) != 0 {
			return true
		}
		for i := range len(f.w.lines) + 2 {
			if f.x(i, j).at(p) != 0 {
				return true
			}
		}
	}
	return false
}

func (f *frame) motion(p int) ([][]float64, []float64) {
	levels := f.w.plan.levels
	dx, dy := make([][]float64, len(f.rows)), make([]float64, len(f.rows))
	for j, r := range f.rows {
		dy[j] = lerp(levels[r.of].at(p), levels[r.of+1].at(p), r.t)
		dx[j] = make([]float64, len(f.columns))
		for i, c := range f.columns {
			low := lerp(f.x(c.of, r.of).at(p), f.x(c.of+1, r.of).at(p), c.t)
			high := lerp(f.x(c.of, r.of+1).at(p), f.x(c.of+1, r.of+1).at(p), c.t)
			dx[j][i] = lerp(low, high, r.t)
		}
	}
	return dx, dy
}

// bounded reports whether all numbers are finite.
func bounded(lists ...[]float64) bool {
	rest := 0.0
	for _, list := range lists {
		for _, v := range list {
			rest += v - v
		}
	}
	return rest == 0
}
