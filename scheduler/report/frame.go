package report

import (
	"html/template"
	"math"
)

// A frame is one picture with its axes, in pixels with y down. Everything in
// Inner is cut off at the plot's edges; its coordinates start at the plot's upper left corner.
type frame struct {
	Width, Height float64
	Plot          rect
	Title         []string // lines
	Describe      string   // for those who cannot see the picture
	XLabel        string
	YLabel        string
	XTicks        []tick
	YTicks        []tick
	Ground        string // class of the plot's ground
	Inner         inner

	vertices int  // of contour lines
	crowded  bool // some were left out
}

// inner is what lies inside the plot, from back to front.
type inner struct {
	Image template.URL
	Crisp bool // the image has few large cells
	Paths []path
	Marks []mark
	Texts []note
}

type rect struct{ X, Y, W, H float64 }

// tick is a mark of an axis: its place along the axis in pixels of the frame.
type tick struct {
	At   float64
	Text string
}

// path is a line or an area; Series is its family's place, -1 for none.
type path struct {
	Data   string
	Class  string
	Series int
}

// mark is a small sign at a point.
type mark struct {
	X, Y   float64
	Class  string
	Series int
}

// note is a text inside the plot.
type note struct {
	X, Y   float64
	Class  string
	Anchor string // start, middle or end
	Text   string
}

// scale is an axis of a picture: values in SI (or as the column has them)
// over an interval, shown in a unit.
type scale struct {
	Name string
	Unit unit
	Span span
}

// label is the axis' name with its unit.
func (s scale) label() string {
	if s.Unit.Text == "" {
		return s.Name
	}
	return s.Name + " (" + s.Unit.Text + ")"
}

// size of a frame's plot and of the margins around it.
const (
	marginLeft   = 64
	marginRight  = 16
	marginBottom = 46
	marginTop    = 12
	marginTitle  = 16 // more on top for each line of a title
)

// newFrame lays out a picture with its ticks.
func newFrame(title []string, width, height float64, x, y scale) *frame {
	top := float64(marginTop + marginTitle*len(title))
	f := &frame{Width: width, Height: height + top - marginTop, Title: title}
	f.Plot = rect{marginLeft, top, width - marginLeft - marginRight, height - marginTop - marginBottom}
	for i, line := range title {
		title[i] = fit(line, f.Plot.W+marginRight, 7.4)
	}
	f.XLabel, f.YLabel = fit(x.label(), f.Plot.W, 7), fit(y.label(), f.Plot.H, 7)
	f.XTicks = f.ticks(x, math.Min(7, f.Plot.W/62), func(t float64) float64 { return f.Plot.X + t*f.Plot.W })
	f.YTicks = f.ticks(y, math.Min(7, f.Plot.H/30), func(t float64) float64 { return f.Plot.Y + (1-t)*f.Plot.H })
	return f
}

func (f *frame) ticks(s scale, n float64, place func(float64) float64) []tick {
	shown := span{s.Span.Lo * s.Unit.Scale, s.Span.Hi * s.Unit.Scale}
	values, decimals := shown.ticks(max(2, int(n)))
	var out []tick
	for i, text := range labels(values, decimals) {
		out = append(out, tick{At: place(shown.at(values[i])), Text: text})
	}
	return out
}

// pixel places a point of the plot in its own coordinates.
func (f *frame) pixel(x, y scale, vx, vy float64) vertex {
	return vertex{X: x.Span.at(vx) * f.Plot.W, Y: (1 - y.Span.at(vy)) * f.Plot.H}
}

// trace turns a row of points into lines, broken where a value is missing.
func (f *frame) trace(x, y scale, xs, ys []float64) [][]vertex {
	var lines [][]vertex
	var line []vertex
	for i := range xs {
		if math.IsNaN(ys[i]) || math.IsInf(ys[i], 0) {
			lines, line = keepLine(lines, line), nil
			continue
		}
		line = append(line, f.pixel(x, y, xs[i], ys[i]))
	}
	return keepLine(lines, line)
}

// keepLine adds a line; a single point becomes a short dash so that it is seen.
func keepLine(lines [][]vertex, line []vertex) [][]vertex {
	switch len(line) {
	case 0:
		return lines
	case 1:
		line = []vertex{{line[0].X - 1, line[0].Y}, {line[0].X + 1, line[0].Y}}
	}
	return append(lines, simplify(line, 0.15))
}

// fit shortens a text to a width, given that of an average letter.
func fit(text string, width, letter float64) string {
	r := []rune(text)
	if n := max(1, int(width/letter)); len(r) > n {
		return string(r[:n-1]) + "…"
	}
	return text
}

// figure is a group of pictures with one heading and one caption.
type figure struct {
	Title   string
	Bar     *frame
	Legend  []key
	Columns int
	Panels  []*frame
	Caption string
	Notes   []string
}

// key is an entry of a legend.
type key struct {
	Text   string
	Class  string // of its sample: line, dot, zero, cross, hatch, grey or swatch
	Series int
	Fill   string // of a swatch
}

// panelSize is the size of a picture in a figure with so many columns; the
// page is 1080 pixels wide.
func panelSize(columns int) (width, height float64) {
	switch columns {
	case 1:
		return 760, 430
	case 2:
		return 530, 340
	}
	return 350, 270
}

// Bottom and the methods below place what stands around the plot.
func (f *frame) Bottom() float64 { return f.Plot.Y + f.Plot.H }
func (f *frame) TitleY(line int) float64 {
	return f.Plot.Y - 7 - marginTitle*float64(len(f.Title)-1-line)
}
func (f *frame) TickEnd() float64   { return f.Bottom() + 4 }
func (f *frame) XText() float64     { return f.Bottom() + 16 }
func (f *frame) XName() float64     { return f.Bottom() + 34 }
func (f *frame) TickStart() float64 { return f.Plot.X - 4 }
func (f *frame) YText() float64     { return f.Plot.X - 7 }
func (f *frame) MiddleX() float64   { return f.Plot.X + f.Plot.W/2 }
func (f *frame) MiddleY() float64   { return f.Plot.Y + f.Plot.H/2 }
