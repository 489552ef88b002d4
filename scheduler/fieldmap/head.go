package fieldmap

import (
	"strings"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
)

// headOf is the title and the notes, broken to a width.
func headOf(title, notes string, width vg.Length) figure {
	large := draw.TextStyle{Color: ink, Font: sans(11), Handler: plot.DefaultTextHandler, YAlign: text.YTop}
	small := draw.TextStyle{Color: faint, Font: sans(8.5), Handler: plot.DefaultTextHandler, YAlign: text.YTop}
	lines := []struct {
		style draw.TextStyle
		text  string
		step  vg.Length
	}{}
	add := func(s draw.TextStyle, t string, step vg.Length) {
		for _, line := range broken(s, t, width) {
			lines = append(lines, struct {
				style draw.TextStyle
				text  string
				step  vg.Length
			}{s, line, step})
		}
	}
	add(large, title, 15)
	add(small, notes, 12)
	height := vg.Length(6)
	for _, l := range lines {
		height += l.step
	}
	return figure{width: width, height: height, draw: func(c draw.Canvas) {
		at := vg.Point{X: c.Min.X, Y: c.Max.Y}
		for _, l := range lines {
			c.FillText(l.style, at, l.text)
			at.Y -= l.step
		}
	}}
}

// broken cuts a text after commas into lines no wider than width, if it can.
func broken(s draw.TextStyle, t string, width vg.Length) (lines []string) {
	line := ""
	for _, word := range strings.SplitAfter(t, ", ") {
		if line != "" && s.Width(strings.TrimSpace(line+word)) > width {
			lines, line = append(lines, strings.TrimSpace(line)), ""
		}
		line += word
	}
	if line != "" {
		lines = append(lines, line)
	}
	return lines
}
