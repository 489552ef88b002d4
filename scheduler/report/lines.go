package report

import (
	"fmt"
	"slices"
	"strings"
)

// lineFigure draws one quantity of all families over one axis.
func (a *artist) lineFigure(q Quantity) *figure {
	v := a.d.View
	fig := &figure{Title: q.name(), Columns: v.columns(), Legend: a.legend("line")}
	var all, errs []float64
	for _, fam := range a.drawn {
		all = append(all, fam.Values[q]...)
		errs = append(errs, fam.Errs[q]...)
	}
	s, beyond := sturdy(all)
	if s.empty() {
		fig.Caption, fig.Legend = "There is no value of it to draw.", nil
		return fig
	}
	y := scale{Name: q.symbol(), Unit: q.unit(), Span: s.padded(0.06)}
	for p := range v.Panels {
		fig.Panels = append(fig.Panels, a.linePanel(q, p, y, a.panelTitle(p), fig.Columns, a.drawn...))
	}
	fig.Caption = lineCaption(q, s) + bandRemark(q, errs, y)
	if beyond > 0 {
		fig.Notes = append(fig.Notes, outsideRemark(beyond))
	}
	if q == GVD && s.Lo < 0 && s.Hi > 0 {
		fig.Legend = append(fig.Legend, key{Text: "zero GVD", Class: "cross-zero", Series: -1})
	}
	return fig
}

func (a *artist) legend(class string) []key {
	var keys []key
	for i, fam := range a.drawn {
		keys = append(keys, key{Text: fam.Name, Class: class, Series: i})
	}
	return keys
}

func lineCaption(q Quantity, s span) string {
	switch {
	case q == Neff:
		return "Look for where a line ends: there the mode meets its cut-off; lines that approach each other are modes that may couple."
	case q == Ng:
		return "Look for minima and maxima: over frequency they are the zeros of the dispersion."
	case s.Lo < 0 && s.Hi > 0:
		return "Look for the rings, where a line crosses zero: below, dispersion is anomalous (negative GVD), above it is normal."
	case s.Hi <= 0:
		return "The dispersion is anomalous (negative GVD) all along; look for where it is flattest."
	}
	return "The dispersion is normal (positive GVD) all along; look for where it is flattest."
}

// bandRemark says how wide the error bands are.
func bandRemark(q Quantity, errs []float64, y scale) string {
	s := spanOf(errs)
	if s.empty() {
		return " No bound on the error is known."
	}
	widest := q.unit().with(short(s.Hi, 2))
	if s.Hi < y.Span.width()/1000 {
		return fmt.Sprintf(" The bands of the numerical error, at most ± %s, are thinner than the lines.", widest)
	}
	return fmt.Sprintf(" The shaded bands are bounds on the numerical error, at most ± %s.", widest)
}

// ownScaleFigure draws each family's dispersion alone, for families whose
// values differ much.
func (a *artist) ownScaleFigure() *figure {
	fig := &figure{Title: "group-velocity dispersion, each mode on its own scale", Columns: min(3, len(a.drawn)),
		Caption: "Look for the shape that the common scale above hides."}
	for _, fam := range a.drawn {
		s, beyond := sturdy(fam.Values[GVD])
		if s.empty() {
			continue
		}
		if beyond > 0 && fig.Notes == nil {
			fig.Notes = []string{"Where a few extreme values would flatten a line, they lie outside its picture."}
		}
		y := scale{Name: GVD.symbol(), Unit: GVD.unit(), Span: s.padded(0.06)}
		fig.Panels = append(fig.Panels, a.linePanel(GVD, 0, y, []string{fam.Name}, fig.Columns, fam))
	}
	return fig
}

// linePanel draws a quantity of some families over one axis.
func (a *artist) linePanel(q Quantity, panel int, y scale, title []string, columns int, families ...*Family) *frame {
	v := a.d.View
	width, height := panelSize(columns)
	x := a.axisScale(v.X, v.Xs, 0.01)
	f := newFrame(title, width, height, x, y)
	f.Describe = fmt.Sprintf("lines of the %s over %s %s", q.name(), x.Name, strings.Join(f.Title, ", "))
	if q == GVD && y.Span.Lo < 0 && y.Span.Hi > 0 {
		zero := []vertex{f.pixel(x, y, x.Span.Lo, 0), f.pixel(x, y, x.Span.Hi, 0)}
		f.Inner.Paths = append(f.Inner.Paths, path{Data: pathData([][]vertex{zero}, false), Class: "baseline", Series: -1})
	}
	for _, fam := range families {
		i := a.series[fam.Name]
		values, errs := v.InPanel(fam.Values[q], panel), v.InPanel(fam.Errs[q], panel)
		f.band(x, y, v.Xs, values, errs, i)
		lines := f.trace(x, y, v.Xs, values)
		f.Inner.Paths = append(f.Inner.Paths, path{Data: pathData(lines, false), Class: "line", Series: i})
		if q == GVD {
			a.markZeros(f, fam, panel, x, y)
		}
	}
	return f
}

// band adds the area between value - err and value + err, where it can be seen.
func (f *frame) band(x, y scale, xs, values, errs []float64, series int) {
	up, down := make([]float64, len(values)), make([]float64, len(values))
	seen := false
	for i := range values {
		up[i], down[i] = values[i]+errs[i], values[i]-errs[i]
		seen = seen || errs[i] > y.Span.width()/1000
	}
	if !seen {
		return
	}
	upper, lower := f.trace(x, y, xs, up), f.trace(x, y, xs, down)
	var areas [][]vertex
	for i := range upper {
		slices.Reverse(lower[i])
		areas = append(areas, slices.Concat(upper[i], lower[i]))
	}
	f.Inner.Paths = append(f.Inner.Paths, path{Data: pathData(areas, true), Class: "band", Series: series})
}

// markZeros rings the zeros of a family's dispersion and writes where they are.
func (a *artist) markZeros(f *frame, fam *Family, panel int, x, y scale) {
	for _, z := range a.d.Zeros {
		if z.Panel != panel || z.Family != fam.Name {
			continue
		}
		series := a.series[fam.Name]
		p := f.pixel(x, y, z.X, 0)
		f.Inner.Marks = append(f.Inner.Marks, mark{X: p.X, Y: p.Y, Class: "ring", Series: series})
		n := note{X: p.X, Y: p.Y - 9, Class: "value", Anchor: "middle",
			Text: x.Unit.with(rounded(z.X*x.Unit.Scale, z.Err*x.Unit.Scale, 5))}
		wide := 6.2*float64(len([]rune(n.Text))) + 6
		n.X = min(max(n.X, wide/2), f.Plot.W-wide/2)
		if n.Y < 12 {
			n.Y = p.Y + 18
		}
		if f.clear(n, wide) {
			f.Inner.Texts = append(f.Inner.Texts, n)
		}
	}
}
