package report

import (
	"bytes"
	"encoding/base64"
	"fmt"
	"html/template"
	"image"
	"image/color"
	"image/png"
	"math"
	"sort"

	"betaloom/scheduler/palette"
)

// ramp turns values into shades: below, between and above its stops.
type ramp struct {
	Values []float64 // rising: where 0, ..., 1 of Colour lies, evenly
	Colour func(t float64) color.RGBA
}

// t is where v lies on the ramp, 0 to 1.
func (r ramp) t(v float64) float64 {
	n := len(r.Values) - 1
	i := min(max(sort.SearchFloat64s(r.Values, v)-1, 0), n-1)
	f := (v - r.Values[i]) / (r.Values[i+1] - r.Values[i])
	return min(1, max(0, (float64(i)+f)/float64(n)))
}

// palette is transparent, then the ramp's shades.
func (r ramp) palette() color.Palette {
	p := color.Palette{color.RGBA{}}
	for i := range palette.Shades {
		p = append(p, r.Colour(float64(i)/(palette.Shades-1)))
	}
	return p
}

func (r ramp) shade(v float64) uint8 {
	if math.IsNaN(v) {
		return 0
	}
	return uint8(1 + int(r.t(v)*(palette.Shades-1)+0.5))
}

// paint draws a field over width x height pixels, linear between its nodes;
// a pixel whose nearest node is missing is transparent.
func (r ramp) paint(f *field, x, y span, width, height int) (template.URL, error) {
	img := image.NewPaletted(image.Rect(0, 0, width, height), r.palette())
	columns := places(f.X, x, width)
	rows := places(f.Y, y, height)
	for py := range height {
		for px := range width {
			v := f.between(columns[px], rows[height-1-py])
			img.Pix[py*img.Stride+px] = r.shade(v)
		}
	}
	return pngURL(img)
}

// spot is a place between two nodes.
type spot struct {
	i int
	t float64
}

// places finds the nodes around the middle of each of n pixels.
func places(nodes []float64, s span, n int) []spot {
	out := make([]spot, n)
	for p := range out {
		v := s.Lo + (float64(p)+0.5)/float64(n)*s.width()
		i := min(max(sort.SearchFloat64s(nodes, v)-1, 0), max(0, len(nodes)-2))
		out[p] = spot{i: i}
		if len(nodes) > 1 {
			out[p].t = min(1, max(0, (v-nodes[i])/(nodes[i+1]-nodes[i])))
		}
	}
	return out
}

func (f *field) between(x, y spot) float64 {
	i, j := x.i, y.i
	i1, j1 := min(i+1, len(f.X)-1), min(j+1, len(f.Y)-1)
	nearest := f.at(pick(i, i1, x.t), pick(j, j1, y.t))
	if math.IsNaN(nearest) {
		return nearest
	}
	v := (1-y.t)*((1-x.t)*f.at(i, j)+x.t*f.at(i1, j)) + y.t*((1-x.t)*f.at(i, j1)+x.t*f.at(i1, j1))
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return nearest
	}
	return v
}

func pick(a, b int, t float64) int {
	if t < 0.5 {
		return a
	}
	return b
}

// paintCells draws one colour a node's cell, by an index into the palette.
func paintCells(f *field, x, y span, width, height int, p color.Palette, index func(v float64) uint8) (template.URL, error) {
	img := image.NewPaletted(image.Rect(0, 0, width, height), p)
	columns := places(f.X, x, width)
	rows := places(f.Y, y, height)
	for py := range height {
		r := rows[height-1-py]
		j := pick(r.i, min(r.i+1, len(f.Y)-1), r.t)
		for px := range width {
			c := columns[px]
			i := pick(c.i, min(c.i+1, len(f.X)-1), c.t)
			img.Pix[py*img.Stride+px] = index(f.at(i, j))
		}
	}
	return pngURL(img)
}

// pngURL packs an image into the page itself.
func pngURL(img image.Image) (template.URL, error) {
	var b bytes.Buffer
	enc := png.Encoder{}
	if err := enc.Encode(&b, img); err != nil {
		return "", fmt.Errorf("picture: %w", err)
	}
	return template.URL("data:image/png;base64," + base64.StdEncoding.EncodeToString(b.Bytes())), nil
}

// bar is the colour bar of a ramp, with the levels that have a line.
func (r ramp) bar(title string, width float64, levels []float64, texts []string) (*frame, error) {
	img := image.NewPaletted(image.Rect(0, 0, palette.Shades, 1), r.palette())
	for i := range palette.Shades {
		img.Pix[i] = uint8(1 + i)
	}
	src, err := pngURL(img)
	if err != nil {
		return nil, err
	}
	f := &frame{Width: width, Height: 56, Title: []string{title}, Plot: rect{14, 22, width - 28, 12}, Inner: inner{Image: src},
		Describe: "colour bar of " + title}
	last := math.Inf(-1)
	for i, v := range levels {
		at := f.Plot.X + r.t(v)*f.Plot.W
		if at-last < float64(6+6*len([]rune(texts[i]))) {
			continue
		}
		f.XTicks, last = append(f.XTicks, tick{At: at, Text: texts[i]}), at
	}
	return f, nil
}
