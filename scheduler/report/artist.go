package report

import (
	"betaloom/schema"
)

// artist draws the pictures of one page.
type artist struct {
	d      *Data
	fine   float64 // pixels of an image for each pixel of its plot
	lines  int     // most vertices of a map's contour lines
	drawn  []*Family
	series map[string]int
}

func newArtist(d *Data, fine float64) *artist {
	a := &artist{d: d, fine: fine, drawn: d.Families, series: map[string]int{}}
	if len(a.drawn) > mostDrawn {
		a.drawn = a.drawn[:mostDrawn]
	}
	for i, f := range a.drawn {
		a.series[f.Name] = i
	}
	pictures := int(quantities) * max(1, len(a.drawn)) * max(1, len(d.View.Panels))
	a.lines = min(mostVertices, pageVertices/pictures)
	return a
}

// dimension of a parameter of the sweep.
func (a *artist) dimension(name string) schema.Dimension {
	p, _ := a.d.Physics.Parameter(name)
	return p.Dimension
}

// axisScale is the picture's axis for an axis of the sweep.
func (a *artist) axisScale(axis int, values []float64, share float64) scale {
	name := a.d.View.Axes[axis].Parameter
	return scale{Name: name, Unit: axisUnit(a.dimension(name), values), Span: spanOf(values).padded(share)}
}

// panelTitle says where a panel lies on the further axes, a line for each.
func (a *artist) panelTitle(panel int) []string {
	v := a.d.View
	var lines []string
	for f, i := range v.Panels[panel].Index {
		axis := v.Axes[v.Further[f]]
		u := axisUnit(a.dimension(axis.Parameter), axis.Values)
		lines = append(lines, axis.Parameter+" = "+u.with(short(axis.Values[i]*u.Scale, 5)))
	}
	return lines
}

// columns is the number of panels beside each other.
func (v *View) columns() int {
	most, n, row := 0, 0, -1
	for _, p := range v.Panels {
		if p.Row != row {
			n, row = 0, p.Row
		}
		n++
		most = max(most, n)
	}
	return most
}

// axisUnit is the unit of an axis.
func (a *artist) axisUnit(axis int) unit {
	block := a.d.View.Axes[axis]
	return axisUnit(a.dimension(block.Parameter), block.Values)
}

// along writes a value of an axis.
func (a *artist) along(axis int, x float64) string {
	u := a.axisUnit(axis)
	return u.with(short(x*u.Scale, 6))
}
