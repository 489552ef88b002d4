package fieldmap

import (
	"fmt"
	"image"
	"image/color"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"

	"betaloom/scheduler/palette"
	"betaloom/solvers"
)

// Sizes of a map: the most that its data may take, the bar of its scale.
const (
	mapWidth   = 330 * vg.Length(1)
	mapHeight  = 240 * vg.Length(1)
	barHeight  = 9 * vg.Length(1)
	barLeast   = 170 * vg.Length(1) // its length
	gap        = 8 * vg.Length(1)
	dotsAPoint = 3 // of the image in a map
)

// chart is the map of a quantity over a section.
func chart(f *solvers.Field, q *quantity) figure {
	m := newMap(f, q)
	wide, high := f.X[len(f.X)-1]-f.X[0], f.Y[len(f.Y)-1]-f.Y[0]
	scale := min(mapWidth/vg.Length(wide), mapHeight/vg.Length(high))
	width, height := scale*vg.Length(wide), scale*vg.Length(high)
	axes := newPlot()
	axes.Add(m)
	axes.X.Label.Text, axes.Y.Label.Text = "x ("+m.unit+")", "y ("+m.unit+")"
	bar := m.bar(f)
	around := marginsOf(axes, width, height)
	long := max(width, barLeast)
	below := marginsOf(bar, long, barHeight)
	left := max(around.left, below.left)
	total := left + max(width+around.right, long+below.right)
	out := figure{width: total + 2*edge}
	barTall := below.bottom + barHeight + below.top
	out.height = around.bottom + height + around.top + gap + barTall + edge
	out.draw = func(c draw.Canvas) {
		x, y := c.Min.X+edge+left, c.Min.Y+edge+barTall+gap+around.bottom
		axes.Draw(around.canvas(c, x, y, width, height))
		bar.Draw(below.canvas(c, x, c.Min.Y+edge+below.bottom, long, barHeight))
	}
	return out
}

// canvas is the part of c in which a plot has its data at x, y in a given size.
func (m margins) canvas(c draw.Canvas, x, y, width, height vg.Length) draw.Canvas {
	c.Rectangle = vg.Rectangle{
		Min: vg.Point{X: x - m.left, Y: y - m.bottom},
		Max: vg.Point{X: x + width + m.right, Y: y + height + m.top},
	}
	return c
}

// section is the map of a quantity as axes draw it.
type section struct {
	f         *solvers.Field
	q         *quantity
	low, high float64 // of the colours
	beyond    bool    // values lie beyond them
	colour    func(t float64) color.RGBA
	factor    float64 // of places
	unit      string
}

func newMap(f *solvers.Field, q *quantity) *section {
	m := &section{f: f, q: q}
	m.low, m.high, m.beyond = q.colours()
	m.colour = palette.Fading
	if q.signed {
		m.colour = palette.Diverging
	}
	m.factor, m.unit = lengths(f)
	return m
}

// lengths is the factor and the unit that suit a field's window.
func lengths(f *solvers.Field) (factor float64, unit string) {
	return prefixed(2*max(f.X[len(f.X)-1]-f.X[0], f.Y[len(f.Y)-1]-f.Y[0]), "m")
}

// DataRange implements plot.DataRanger.
func (m *section) DataRange() (xmin, xmax, ymin, ymax float64) {
	x, y := m.f.X, m.f.Y
	return m.factor * x[0], m.factor * x[len(x)-1], m.factor * y[0], m.factor * y[len(y)-1]
}

// Plot implements plot.Plotter.
func (m *section) Plot(c draw.Canvas, p *plot.Plot) {
	size := c.Size()
	c.DrawImage(c.Rectangle, m.image(int(size.X*dotsAPoint), int(size.Y*dotsAPoint)))
	toX, toY := p.Transforms(&c)
	var lines [][]vg.Point
	for _, e := range m.f.Edges {
		lines = append(lines, []vg.Point{
			{X: toX(m.factor * e.X[0]), Y: toY(m.factor * e.Y[0])},
			{X: toX(m.factor * e.X[1]), Y: toY(m.factor * e.Y[1])},
		})
	}
	c.StrokeLines(draw.LineStyle{Color: color.NRGBA{R: 255, G: 255, B: 255, A: 150}, Width: 1.7}, lines...)
	c.StrokeLines(draw.LineStyle{Color: ink, Width: 0.7}, lines...)
	frame(c)
}

// frame closes a plot's axes to a box.
func frame(c draw.Canvas) {
	c.StrokeLines(draw.LineStyle{Color: ink, Width: 0.6}, []vg.Point{
		c.Min, {X: c.Max.X, Y: c.Min.Y}, c.Max, {X: c.Min.X, Y: c.Max.Y}, c.Min,
	})
}

// metalColour is that of conductors.
var metalColour = color.RGBA{R: 0xb4, G: 0xb4, B: 0xb4, A: 0xff}

// image is the quantity in colour, linear between the grid's places.
func (m *section) image(width, height int) image.Image {
	shades := color.Palette{}
	for i := range palette.Shades {
		shades = append(shades, m.colour(float64(i)/(palette.Shades-1)))
	}
	img := image.NewPaletted(image.Rect(0, 0, width, height), append(shades, metalColour))
	nx, ny := len(m.f.X), len(m.f.Y)
	for py := range height {
		j, v := spot(height-1-py, height, ny)
		for px := range width {
			i, u := spot(px, width, nx)
			at := j*nx + i
			if near := at + int(u+0.5) + nx*int(v+0.5); m.f.Metal[m.f.Material[near]] {
				img.SetColorIndex(px, py, palette.Shades)
				continue
			}
			low := (1-u)*m.q.values[at] + u*m.q.values[at+1]
			high := (1-u)*m.q.values[at+nx] + u*m.q.values[at+nx+1]
			t := ((1-v)*low + v*high - m.low) / (m.high - m.low)
			img.SetColorIndex(px, py, uint8(min(max(t, 0), 1)*(palette.Shades-1)+0.5))
		}
	}
	return img
}

// spot is the place below the middle of a dot and how far on it is to the next.
func spot(dot, dots, places int) (i int, t float64) {
	at := (float64(dot) + 0.5) / float64(dots) * float64(places-1)
	i = min(int(at), places-2)
	return i, at - float64(i)
}

// bar is the scale of a map's colours.
func (m *section) bar(f *solvers.Field) *plot.Plot {
	factor, unit := prefixed(m.high, m.q.unit)
	p := newPlot()
	p.HideY()
	p.X.Label.Text = m.q.label(unit, f)
	if m.beyond {
		p.X.Label.Text += fmt.Sprintf(", largest %.3g beyond the scale", factor*m.q.largest())
	}
	p.Add(&scale{m, factor})
	return p
}

// scale is the strip of colours of a bar.
type scale struct {
	m      *section
	factor float64
}

// DataRange implements plot.DataRanger.
func (s *scale) DataRange() (xmin, xmax, ymin, ymax float64) {
	return s.factor * s.m.low, s.factor * s.m.high, 0, 1
}

// Plot implements plot.Plotter.
func (s *scale) Plot(c draw.Canvas, _ *plot.Plot) {
	img := image.NewRGBA(image.Rect(0, 0, palette.Shades, 4))
	for i := range palette.Shades {
		for j := range 4 {
			img.SetRGBA(i, j, s.m.colour(float64(i)/(palette.Shades-1)))
		}
	}
	c.DrawImage(c.Rectangle, img)
	frame(c)
}
