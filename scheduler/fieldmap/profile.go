package fieldmap

import (
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"betaloom/solvers"
)

// Sizes of a curve's data.
const (
	curveWidth  = 330 * vg.Length(1)
	curveHeight = 190 * vg.Length(1)
)

// profile is the curve of a quantity over the height of a section that does not vary along x.
func profile(f *solvers.Field, q *quantity) figure {
	p := newPlot()
	s := &stack{f: f, q: q}
	s.low, s.high = q.span()
	var unit string
	s.factor, unit = prefixed(s.high, q.unit)
	s.scale, p.X.Label.Text = lengths(f)
	p.X.Label.Text = "y (" + p.X.Label.Text + ")"
	p.Y.Label.Text = q.label(unit, f)
	p.Add(s)
	around := marginsOf(p, curveWidth, curveHeight)
	return figure{
		width:  around.left + curveWidth + around.right + 2*edge,
		height: around.bottom + curveHeight + around.top + edge,
		draw: func(c draw.Canvas) {
			p.Draw(around.canvas(c, c.Min.X+edge+around.left, c.Min.Y+edge+around.bottom, curveWidth, curveHeight))
		},
	}
}

// stack is a curve over layers as axes draw it.
type stack struct {
	f         *solvers.Field
	q         *quantity
	low, high float64
	factor    float64 // of values
	scale     float64 // of places
}

// DataRange implements plot.DataRanger; names of materials stand above the curve.
func (s *stack) DataRange() (xmin, xmax, ymin, ymax float64) {
	y := s.f.Y
	return s.scale * y[0], s.scale * y[len(y)-1], 1.05 * s.factor * s.low, 1.12 * s.factor * s.high
}

// Plot implements plot.Plotter.
func (s *stack) Plot(c draw.Canvas, p *plot.Plot) {
	toX, toY := p.Transforms(&c)
	at := func(y float64) vg.Length { return toX(s.scale * y) }
	ends := []vg.Length{c.Min.X}
	for _, e := range s.f.Edges {
		ends = append(ends, at(e.Y[0]))
	}
	s.layers(c, append(ends, c.Max.X), at)
	if s.low < 0 {
		c.StrokeLine2(draw.LineStyle{Color: faint, Width: 0.5}, c.Min.X, toY(0), c.Max.X, toY(0))
	}
	curve := make([]vg.Point, len(s.f.Y))
	for i, y := range s.f.Y {
		curve[i] = vg.Point{X: at(y), Y: toY(s.factor * s.q.values[i])}
	}
	c.StrokeLines(draw.LineStyle{Color: color.RGBA{R: 0x1f, G: 0x4e, B: 0x9c, A: 0xff}, Width: 1.6}, curve)
	frame(c)
}

// layers shades every other layer and names them where there is room.
func (s *stack) layers(c draw.Canvas, ends []vg.Length, at func(float64) vg.Length) {
	style := draw.TextStyle{Color: faint, Font: sans(8.5), Handler: plot.DefaultTextHandler, XAlign: text.XCenter, YAlign: text.YTop}
	next := 0
	for i := 0; i+1 < len(ends); i++ {
		from, to := ends[i], ends[i+1]
		if i%2 == 1 {
			c.FillPolygon(color.RGBA{R: 0xec, G: 0xef, B: 0xf3, A: 0xff}, []vg.Point{{X: from, Y: c.Min.Y}, {X: to, Y: c.Min.Y}, {X: to, Y: c.Max.Y}, {X: from, Y: c.Max.Y}})
		}
		if i > 0 {
			c.StrokeLine2(draw.LineStyle{Color: faint, Width: 0.6}, from, c.Min.Y, from, c.Max.Y)
		}
		for next+1 < len(s.f.Y) && at(s.f.Y[next]) < (from+to)/2 {
			next++
		}
		name := s.f.Materials[s.f.Material[next]]
		if style.Width(name)+4 < to-from {
			c.FillText(style, vg.Point{X: (from + to) / 2, Y: c.Max.Y - 4}, name)
		}
	}
}
