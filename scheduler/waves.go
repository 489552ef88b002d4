package scheduler

import (
	"fmt"
	"math"
	"strconv"

	"betaloom/scheduler/grid"
	"betaloom/schema"
	"betaloom/schema/quantity"
	"betaloom/solvers/material"
)

// waves are the vacuum wavelengths of a grid, in m, and where they come from.
type waves struct {
	parameter string // wavelength or frequency
	dimension schema.Dimension
	path      string // in the sweep file
	values    []float64
}

// wavelengths lists the wavelengths of a grid; none where they are derived
// from other parameters.
func wavelengths(g *grid.Grid) waves {
	for _, q := range g.Physics().Parameters {
		if q.Kind == schema.Derived || q.Name != schema.Wavelength && q.Name != schema.Frequency {
			continue
		}
		w := waves{parameter: q.Name, dimension: q.Dimension, path: "parameters." + q.Name}
		if q.Kind == schema.Fixed {
			w.add(q.Value)
			return w
		}
		for _, a := range g.Axes() {
			if a.Parameter == q.Name {
				w.add(a.Values...)
			}
		}
		if !g.IsBox() {
			w.path = "points"
			w.addRows(g)
		}
		return w
	}
	return waves{}
}

func (w *waves) addRows(g *grid.Grid) {
	var row []float64
	for i := range g.Tiles() {
		t := g.Tile(i)
		for c, name := range t.Varying() {
			if name != w.parameter {
				continue
			}
			for k := range t.Points() {
				row = t.Values(k, row)
				w.add(row[c])
			}
		}
	}
}

func (w *waves) add(values ...float64) {
	for _, v := range values {
		if omega, ok := grid.AngularFrequency(w.parameter, v); ok {
			w.values = append(w.values, 2*math.Pi*schema.LightSpeed/omega)
		}
	}
}

// rounding is what a wavelength may pass a material's range by: it went
// through a frequency and back.
const rounding = 1e-12

// outside counts the wavelengths outside a material's range, and names the
// range in the sweep's terms.
func (w *waves) outside(m *material.Material) (n int, known string) {
	lo, hi := m.Range()
	for _, v := range w.values {
		if v < lo*(1-rounding) || v > hi*(1+rounding) {
			n++
		}
	}
	return n, "wavelengths from " + w.show(lo) + " to " + w.show(hi)
}

// show writes a wavelength for people, in ten digits at most.
func (w *waves) show(metres float64) string {
	if short, err := strconv.ParseFloat(strconv.FormatFloat(metres, 'g', 10, 64), 64); err == nil {
		metres = short
	}
	return quantity.Format(metres, schema.Dimension{Length: 1})
}

// text says which wavelengths the sweep has.
func (w *waves) text() string {
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, v := range w.values {
		lo, hi = min(lo, v), max(hi, v)
	}
	if lo == hi {
		return "a wavelength of " + w.show(lo)
	}
	return fmt.Sprintf("wavelengths from %s to %s", w.show(lo), w.show(hi))
}
