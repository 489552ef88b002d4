package report

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

func (q Quantity) name() string {
	return [...]string{"effective index", "group index", "group-velocity dispersion"}[q]
}

func (q Quantity) symbol() string { return [...]string{"neff", "ng", "GVD"}[q] }

// unit of the values as the tables have them.
func (q Quantity) unit() unit {
	if q == GVD {
		return unit{"ps²/km", 1}
	}
	return unit{"", 1}
}

// mostDrawn is how many families get pictures.
const mostDrawn = 8

// What contour lines may weigh, in vertices of about ten bytes: those of one
// map, and those of all maps.
const (
	mostVertices = 6000
	pageVertices = 250_000
)

// mapFigure draws one quantity of one family over two axes.
func (a *artist) mapFigure(fam *Family, q Quantity) (*figure, error) {
	v := a.d.View
	values := fam.Values[q]
	c := colours(q, values)
	fig := &figure{Title: fam.Name + ": " + q.name(), Columns: v.columns()}
	if spanOf(values).empty() {
		fig.Caption = "There is no value of it to draw in these panels."
		return fig, nil
	}
	for p := range v.Panels {
		f, err := a.mapPanel(fam, q, p, c)
		if err != nil {
			return nil, err
		}
		fig.Panels = append(fig.Panels, f)
	}
	width := 420.0
	if fig.Columns == 1 {
		width = 300 // it stands beside the picture
	}
	bar, err := c.ramp.bar(scale{Name: q.symbol(), Unit: q.unit()}.label(), width, c.levels, c.texts)
	if err != nil {
		return nil, err
	}
	fig.Bar = bar
	fig.Caption = a.mapCaption(fam, q)
	if s := spanOf(values); q == GVD && s.Lo < 0 && s.Hi > 0 {
		fig.Legend = []key{{Text: "zero GVD", Class: "zero", Series: -1}}
	}
	if slices.ContainsFunc(values, math.IsNaN) {
		fig.Legend = append(fig.Legend, key{Text: "the mode has no value here", Class: "hatch", Series: -1})
	}
	fig.noteCrowded()
	if c.note != "" {
		fig.Notes = append(fig.Notes, c.note)
	}
	return fig, nil
}

// noteCrowded says so where lines were left out.
func (fig *figure) noteCrowded() {
	if slices.ContainsFunc(fig.Panels, func(f *frame) bool { return f.crowded }) {
		fig.Notes = append(fig.Notes, "Lines that would crowd a picture too much are left out.")
	}
}

func (a *artist) mapCaption(fam *Family, q Quantity) string {
	bound := boundRemark(q, fam.Errs[q])
	switch q {
	case Neff:
		return "Look for how fast the colour changes along an axis: where lines crowd, the index is sensitive to that parameter." + bound
	case Ng:
		return "Look for ridges and valleys: along the frequency axis an extremum of the group index is a zero of the dispersion." + bound
	}
	s := spanOf(fam.Values[q])
	if s.Lo < 0 && s.Hi > 0 {
		return "Look for the heavy line where the dispersion vanishes: blue beside it is anomalous (negative GVD), orange is normal." + bound
	}
	if s.Hi <= 0 {
		return "The dispersion is anomalous (negative GVD) wherever it is drawn; look for where it is weakest." + bound
	}
	return "The dispersion is normal (positive GVD) wherever it is drawn; look for where it is weakest." + bound
}

// mapPanel is one map with its contour lines.
func (a *artist) mapPanel(fam *Family, q Quantity, panel int, c colouring) (*frame, error) {
	v := a.d.View
	width, height := panelSize(v.columns())
	x, y := a.axisScale(v.X, v.Xs, 0), a.axisScale(v.Y, v.Ys, 0)
	f := newFrame(a.panelTitle(panel), width, height, x, y)
	f.Ground = "hatched"
	f.Describe = fmt.Sprintf("map of the %s of %s over %s and %s %s", q.name(), fam.Name, x.Name, y.Name, strings.Join(f.Title, ", "))
	grid := &field{X: v.Xs, Y: v.Ys, V: v.InPanel(fam.Values[q], panel)}
	var err error
	f.Inner.Image, err = c.ramp.paint(grid, x.Span, y.Span, int(f.Plot.W*a.fine), int(f.Plot.H*a.fine))
	if err != nil {
		return nil, err
	}
	for i, level := range c.levels {
		lines, ok := f.outline(grid, x, y, level, a.lines-f.vertices)
		if !ok {
			f.crowded = true
			continue
		}
		f.contour(lines, c.texts[i], c.ramp.ink(level, q == GVD && level == 0))
	}
	return f, nil
}
