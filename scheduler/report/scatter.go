package report

import (
	"fmt"
	"math"
)

// scatterGroups draw each family's quantities against each parameter that
// varies in a points file.
func (a *artist) scatterGroups() []group {
	columns := a.varying()
	if len(columns) == 0 {
		return nil
	}
	slots := a.d.View.Slots()
	take := spread(slots, min(slots, 250_000/(int(quantities)*max(1, len(a.drawn))*len(columns))))
	var out []group
	for i := range a.drawn {
		g := group{Title: a.drawn[i].Name}
		for q := range quantities {
			g.Figures = append(g.Figures, a.scatterFigure(i, q, columns, take))
		}
		out = append(out, g)
	}
	return out
}

func (a *artist) scatterFigure(series int, q Quantity, columns, take []int) *figure {
	fam := a.drawn[series]
	fig := &figure{Title: fam.Name + ": " + q.name(), Columns: min(3, len(columns))}
	s, beyond := sturdy(fam.Values[q])
	if s.empty() {
		fig.Caption = "There is no value of it to draw."
		return fig
	}
	y := scale{Name: q.symbol(), Unit: q.unit(), Span: s.padded(0.06)}
	for _, c := range columns {
		fig.Panels = append(fig.Panels, a.scatter(series, q, c, take, y, fig.Columns))
	}
	fig.Caption = "Each dot is a point of the file. Look for the parameter along which the dots order themselves: it is the one that decides." + boundRemark(q, fam.Errs[q])
	if len(take) < a.d.Points {
		fig.Notes = append(fig.Notes, fmt.Sprintf("Of %s, %s are drawn, evenly through the file.", several(a.d.Points, "point"), count(len(take))))
	}
	if beyond > 0 {
		fig.Notes = append(fig.Notes, outsideRemark(beyond))
	}
	return fig
}

func outsideRemark(beyond float64) string {
	return fmt.Sprintf("A few extreme values, %s of those drawn, lie outside the picture.", percent(beyond))
}

// boundRemark says how large the bounds of what is drawn are.
func boundRemark(q Quantity, errs []float64) string {
	s := spanOf(errs)
	if s.empty() {
		return " No bound on the numerical error is known."
	}
	return fmt.Sprintf(" The bound on the numerical error is at most %s here.", q.unit().with(short(s.Hi, 2)))
}

// varying gives the columns of a points file that are not constant, six at most.
func (a *artist) varying() []int {
	var out []int
	for c := range a.d.Columns {
		s := spanOf(columnOf(a.d.Rows, c))
		if s.width() > 0 && len(out) < 6 {
			out = append(out, c)
		}
	}
	return out
}

func columnOf(rows [][]float64, c int) []float64 {
	out := make([]float64, len(rows))
	for i, r := range rows {
		out[i] = r[c]
	}
	return out
}

func (a *artist) scatter(series int, q Quantity, c int, take []int, y scale, columns int) *frame {
	name, values, fam := a.d.Columns[c], columnOf(a.d.Rows, c), a.drawn[series]
	width, height := panelSize(columns)
	x := scale{Name: name, Unit: axisUnit(a.dimension(name), values), Span: spanOf(values).padded(0.03)}
	f := newFrame(nil, width, height, x, y)
	f.Describe = fmt.Sprintf("dots of the %s of %s over %s", q.name(), fam.Name, name)
	var dots [][]vertex
	for _, s := range take {
		if v := fam.Values[q][s]; !math.IsNaN(v) && !math.IsInf(v, 0) {
			p := f.pixel(x, y, values[a.d.View.every[s]], v)
			dots = append(dots, []vertex{p, p})
		}
	}
	f.Inner.Paths = append(f.Inner.Paths, path{Data: pathData(dots, false), Class: "dots", Series: series})
	return f
}
