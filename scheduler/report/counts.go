package report

import (
	"fmt"
	"image/color"
	"maps"
	"math"
	"slices"
	"strings"

	"betaloom/scheduler/palette"
)

// bar of a small bar chart: points by count of modes.
type bar struct {
	Text  string
	N     int
	Share float64 // of the longest, in percent
}

// histogram is the number of points with each count of guided modes.
func (d *Data) histogram() []bar {
	counts := slices.Sorted(maps.Keys(d.Guided))
	most := 1
	for _, n := range d.Guided {
		most = max(most, n)
	}
	var out []bar
	for _, c := range counts {
		text := several(c, "mode")
		if c == 0 {
			text = "no mode"
		}
		out = append(out, bar{Text: text, N: d.Guided[c], Share: 100 * float64(d.Guided[c]) / float64(most)})
	}
	return out
}

// countFigure draws the number of guided modes over the box; nil where there
// is nothing to draw it over.
func (a *artist) countFigure() (*figure, error) {
	v := a.d.View
	if !v.IsBox() || v.X < 0 {
		return nil, nil
	}
	fig := &figure{Title: "How many modes are guided", Columns: v.columns()}
	most := 0
	for _, c := range a.d.Count {
		if !math.IsNaN(c) {
			most = max(most, int(c))
		}
	}
	for p := range v.Panels {
		f, err := a.countPanel(p, most)
		if err != nil {
			return nil, err
		}
		fig.Panels = append(fig.Panels, f)
	}
	fig.Caption = "Look for the border of the single-mode region and for the far side of it, where the first mode is lost."
	if v.Y >= 0 {
		fig.Legend = a.d.countKeys(most)
	}
	if slices.Contains(a.d.Excluded, true) {
		fig.Legend = append(fig.Legend, key{Text: "left out by keep", Class: "grey", Series: -1})
	}
	if len(a.d.Failed) > 0 {
		fig.Legend = append(fig.Legend, key{Text: "failed", Class: "cross", Series: -1})
	}
	return fig, nil
}

// countKeys are the legend's entries: the counts that there are, at most nine of them.
func (d *Data) countKeys(most int) []key {
	var keys []key
	counts := slices.DeleteFunc(slices.Sorted(maps.Keys(d.Guided)), func(n int) bool { return n <= 0 })
	for _, i := range spread(len(counts), 9) {
		keys = append(keys, key{Text: several(counts[i], "mode"), Class: "swatch", Series: -1, Fill: hex(countColour(counts[i], most))})
	}
	if slices.Contains(d.Count, 0) {
		keys = append(keys, key{Text: "no guided mode", Class: "hatch", Series: -1})
	}
	return keys
}

func countColour(n, most int) color.RGBA {
	if most <= 1 {
		return palette.Sequential(0.6)
	}
	return palette.Sequential(0.15 + 0.8*float64(n-1)/float64(most-1))
}

func hex(c color.RGBA) string { return fmt.Sprintf("#%02x%02x%02x", c.R, c.G, c.B) }

func (a *artist) countPanel(panel, most int) (*frame, error) {
	if a.d.View.Y < 0 {
		return a.countSteps(panel, most), nil
	}
	v := a.d.View
	width, height := panelSize(v.columns())
	x, y := a.axisScale(v.X, v.Xs, 0), a.axisScale(v.Y, v.Ys, 0)
	f := newFrame(a.panelTitle(panel), width, height, x, y)
	f.Ground = "hatched"
	f.Describe = fmt.Sprintf("map of the number of guided modes over %s and %s %s", x.Name, y.Name, strings.Join(f.Title, ", "))
	cells := slices.Clone(v.InPanel(a.d.Count, panel))
	n := len(cells)
	for i, out := range a.d.Excluded[panel*n : (panel+1)*n] {
		if out {
			cells[i] = -1
		}
	}
	p := color.Palette{color.RGBA{}, color.RGBA{140, 140, 140, 255}}
	for k := 1; k <= min(most, 250); k++ {
		p = append(p, countColour(k, min(most, 250)))
	}
	var err error
	f.Inner.Image, err = paintCells(&field{X: v.Xs, Y: v.Ys, V: cells}, x.Span, y.Span, int(f.Plot.W*a.fine), int(f.Plot.H*a.fine), p, countIndex)
	if err != nil {
		return nil, err
	}
	f.Inner.Crisp = true
	a.crosses(f, panel, x, y)
	return f, nil
}

// countIndex is the palette's entry for a count: -1 was left out, missing and
// none are transparent.
func countIndex(v float64) uint8 {
	switch {
	case v == -1:
		return 1
	case !(v > 0):
		return 0
	}
	return uint8(1 + min(v, 250))
}

// crosses mark the points that failed.
func (a *artist) crosses(f *frame, panel int, x, y scale) {
	v := a.d.View
	for _, point := range a.d.Failed {
		if v.Panel(point) != panel {
			continue
		}
		values := v.Values(point)
		at := f.Plot.H
		if v.Y >= 0 {
			at = f.pixel(x, y, x.Span.Lo, values[v.Y]).Y
		}
		f.Inner.Marks = append(f.Inner.Marks, mark{X: f.pixel(x, y, values[v.X], y.Span.Lo).X, Y: min(at, f.Plot.H-5), Class: "cross", Series: -1})
	}
}

// countSteps draws the count over one axis.
func (a *artist) countSteps(panel, most int) *frame {
	v := a.d.View
	width, height := panelSize(v.columns())
	x := a.axisScale(v.X, v.Xs, 0.01)
	y := scale{Name: "guided modes", Span: span{0, float64(most) + 1}, Unit: unit{Scale: 1}}
	f := newFrame(a.panelTitle(panel), width, height*0.7, x, y)
	f.YTicks = f.wholeTicks(y, most)
	f.Describe = fmt.Sprintf("steps of the number of guided modes over %s %s", x.Name, strings.Join(f.Title, ", "))
	counts := v.InPanel(a.d.Count, panel)
	var xs, ys []float64
	for i, c := range counts {
		if i > 0 {
			middle := (v.Xs[i-1] + v.Xs[i]) / 2
			xs, ys = append(xs, middle, middle), append(ys, counts[i-1], c)
		}
		xs, ys = append(xs, v.Xs[i]), append(ys, c)
	}
	f.Inner.Paths = append(f.Inner.Paths, path{Data: pathData(f.trace(x, y, xs, ys), false), Class: "line", Series: 0})
	a.crosses(f, panel, x, y)
	return f
}

// wholeTicks marks whole numbers, at most nine of them.
func (f *frame) wholeTicks(y scale, most int) []tick {
	var out []tick
	for _, n := range spread(most+1, 9) {
		out = append(out, tick{At: f.Plot.Y + (1-y.Span.at(float64(n)))*f.Plot.H, Text: count(n)})
	}
	return out
}
