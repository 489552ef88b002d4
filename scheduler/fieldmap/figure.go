package fieldmap

import (
	"bytes"
	"fmt"
	"image/color"
	"io"
	"slices"
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/recorder"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"

	"betaloom/solvers"
)

// Options says what a picture shows.
type Options struct {
	Of     string // one of Quantities; empty: e
	Format string // one of Formats
	Title  string // first line
	Notes  string // smaller, under it, broken after commas where it is too long
}

// Formats are the kinds of picture.
func Formats() []string { return []string{"svg", "png"} }

// Validate says what is out of range, as an *solvers.InputError.
func (o *Options) Validate() error {
	if o.Of != "" && !slices.Contains(Quantities(), o.Of) {
		return &solvers.InputError{Where: "field", Found: "the quantity " + o.Of, Expected: "one of " + strings.Join(Quantities(), ", ")}
	}
	if !slices.Contains(Formats(), o.Format) {
		return &solvers.InputError{Where: "picture", Found: "the format " + o.Format, Expected: "one of " + strings.Join(Formats(), ", ")}
	}
	return nil
}

// Draw writes the picture of a field. The error is an *solvers.InputError for options out of range, or that of writing.
func Draw(w io.Writer, f *solvers.Field, o Options) error {
	if err := o.Validate(); err != nil {
		return err
	}
	if o.Of == "" {
		o.Of = "e"
	}
	q := quantityOf(f, o.Of)
	var parts figure
	if len(f.X) == 1 {
		parts = profile(f, &q)
	} else {
		parts = chart(f, &q)
	}
	head := headOf(o.Title, o.Notes, max(parts.width-2*edge, leastWidth))
	width, height := max(parts.width, leastWidth+2*edge), parts.height+head.height+edge
	return write(w, o.Format, width, height, func(c draw.Canvas) {
		c.FillPolygon(color.White, []vg.Point{c.Min, {X: c.Max.X, Y: c.Min.Y}, c.Max, {X: c.Min.X, Y: c.Max.Y}})
		head.draw(draw.Crop(c, edge, 0, 0, -edge))
		parts.draw(draw.Crop(c, (width-parts.width)/2, (parts.width-width)/2, 0, parts.height-height))
	})
}

// Sizes of the layout.
const (
	edge       = 10 * vg.Length(1) // around the whole picture
	leastWidth = 300 * vg.Length(1)
	dots       = 300 // an inch, of a PNG
)

// figure is something to draw and its size.
type figure struct {
	width, height vg.Length
	draw          func(c draw.Canvas)
}

// write makes the canvas of a format and writes what is painted on it.
func write(w io.Writer, format string, width, height vg.Length, paint func(draw.Canvas)) error {
	var c vg.CanvasWriterTo = vgsvg.New(width, height)
	if format == "png" {
		c = vgimg.PngCanvas{Canvas: vgimg.NewWith(vgimg.UseWH(width, height), vgimg.UseDPI(dots))}
	}
	paint(draw.NewCanvas(c, width, height))
	var b bytes.Buffer
	if _, err := c.WriteTo(&b); err != nil {
		return fmt.Errorf("picture: %w", err)
	}
	out := b.Bytes()
	if format == "svg" {
		out = portable(out)
	}
	if _, err := w.Write(out); err != nil {
		return fmt.Errorf("picture: %w", err)
	}
	return nil
}

// portable names fonts of the same widths that other machines have in the place of the one that was measured, and the true
// type of the images.
func portable(svg []byte) []byte {
	svg = bytes.ReplaceAll(svg, []byte("font-family:Liberation Sans;"), []byte("font-family:Liberation Sans,Arial,Helvetica,sans-serif;"))
	return bytes.ReplaceAll(svg, []byte("data:image/jpg;base64,"), []byte("data:image/png;base64,"))
}

// The inks of lines and text.
var (
	ink   = color.RGBA{R: 0x22, G: 0x26, B: 0x2b, A: 0xff}
	faint = color.RGBA{R: 0x5c, G: 0x63, B: 0x6b, A: 0xff}
)

// newPlot is an empty pair of axes in the pictures' style.
func newPlot() *plot.Plot {
	p := plot.New()
	for _, a := range []*plot.Axis{&p.X, &p.Y} {
		a.Padding, a.Tick.Length, a.Tick.Marker = 0, 3.5, ticks{}
		a.Width, a.Tick.Width = 0, 0.6 // the frame takes the place of the axes' lines
		a.Tick.Color, a.Tick.Label.Color, a.Label.TextStyle.Color = ink, ink, ink
		a.Label.TextStyle.Font, a.Tick.Label.Font = sans(10), sans(9)
		a.Label.Padding = 2
	}
	return p
}

func sans(size vg.Length) font.Font {
	return font.Font{Typeface: "Liberation", Variant: "Sans", Size: size}
}

// margins is what a plot needs around its data: left, right, bottom and top. They depend a little on the size, since
// the labels at the ends overhang.
type margins struct{ left, right, bottom, top vg.Length }

func marginsOf(p *plot.Plot, width, height vg.Length) (m margins) {
	for range 3 {
		c := draw.NewCanvas(&recorder.Canvas{}, width+m.left+m.right, height+m.bottom+m.top)
		d := p.DataCanvas(c)
		m = margins{d.Min.X - c.Min.X, c.Max.X - d.Max.X, d.Min.Y - c.Min.Y, c.Max.Y - d.Max.Y}
	}
	return m
}
