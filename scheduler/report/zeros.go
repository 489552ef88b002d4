package report

import (
	"errors"
	"fmt"
	"io/fs"
	"path/filepath"
	"slices"
	"strings"

	"betaloom/scheduler/surface"
)

// zeroFinder finds where the dispersion of a family vanishes along an axis:
// surface.Surfaces.ZeroPoints.
type zeroFinder func(family string, axis int, values []float64) ([]surface.Crossing, error)

// readZeros finds the zeros in the surfaces of a folder, if it has any.
func (d *Data) readZeros(dir string) error {
	if !d.View.IsBox() || d.View.X < 0 || len(d.Families) == 0 {
		return nil
	}
	s, err := surface.Open(filepath.Join(dir, "surfaces.arrow"))
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return fmt.Errorf("surfaces.arrow: %w", err)
	}
	return errors.Join(d.findZeros(s.ZeroPoints), s.Close())
}

// findZeros looks along the axis drawn across, in each panel at some values
// of the axis drawn upward.
func (d *Data) findZeros(find zeroFinder) error {
	v := d.View
	if !v.IsBox() || v.X < 0 {
		return nil
	}
	d.Ups = d.zeroUps()
	for _, fam := range d.Families[:min(len(d.Families), mostDrawn)] {
		if !fam.changesSign() {
			continue
		}
		for p := range v.Panels {
			for _, y := range d.Ups {
				found, err := find(fam.Name, v.X, v.at(p, y))
				if err != nil {
					return fmt.Errorf("zeros of %s: %w", fam.Name, err)
				}
				for _, c := range found {
					d.Zeros = append(d.Zeros, Zero{Family: fam.Name, Panel: p, Y: y, X: c.Value, Err: c.Bound})
				}
			}
		}
	}
	return nil
}

// changesSign reports whether the dispersion does, anywhere in the sweep.
func (f *Family) changesSign() bool { return f.Range[GVD].Lo < 0 && f.Range[GVD].Hi > 0 }

// at gives the axis values of a panel's row; that along X is any.
func (v *View) at(panel, y int) []float64 {
	out := make([]float64, len(v.Axes))
	for a := range v.Axes {
		out[a] = v.Axes[a].Values[0]
	}
	for f, i := range v.Panels[panel].Index {
		out[v.Further[f]] = v.Axes[v.Further[f]].Values[i]
	}
	if v.Y >= 0 {
		out[v.Y] = v.Ys[y]
	}
	return out
}

// zeroUps chooses up to six rows upward, of those in which the dispersion of
// a family changes its sign. A long axis across has fewer: each row costs its length.
func (d *Data) zeroUps() []int {
	v := d.View
	var rows []int
	for y := range v.Ys {
		if len(v.Ys) == 1 || d.crossesInRow(y) {
			rows = append(rows, y)
		}
	}
	work := len(d.Families) * len(v.Panels) * len(v.Axes[v.X].Values)
	var out []int
	for _, k := range spread(len(rows), min(6, max(2, 100_000/max(1, work)))) {
		out = append(out, rows[k])
	}
	return out
}

func (d *Data) crossesInRow(y int) bool {
	v, n := d.View, len(d.View.Xs)
	for _, fam := range d.Families {
		for p := range v.Panels {
			s := spanOf(v.InPanel(fam.Values[GVD], p)[y*n : (y+1)*n])
			if s.Lo < 0 && s.Hi > 0 {
				return true
			}
		}
	}
	return false
}

// zeroTable lists where the dispersion vanishes: a row for each family and
// panel, the values of the axis drawn upward as its columns.
func (p *page) zeroTable(d *Data, a *artist) {
	v := d.View
	if !slices.ContainsFunc(d.Families, (*Family).changesSign) {
		p.NoZero = "The group-velocity dispersion of no family changes its sign anywhere in the sweep."
		return
	}
	if len(d.Zeros) == 0 {
		return
	}
	p.ZeroLead = fmt.Sprintf("Values of %s at which the dispersion vanishes, with as many digits as their bound supports:", v.Axes[v.X].Parameter)
	p.ZeroHead = []string{"family"}
	for _, f := range v.Further {
		p.ZeroHead = append(p.ZeroHead, v.Axes[f].Parameter)
	}
	for _, y := range d.Ups {
		head := "zeros"
		if v.Y >= 0 {
			head = "at " + v.Axes[v.Y].Parameter + " " + a.along(v.Y, v.Ys[y])
		}
		p.ZeroHead = append(p.ZeroHead, head)
	}
	for _, run := range zeroRuns(d.Zeros) {
		p.Zeros = append(p.Zeros, a.zeroRow(run))
	}
}

// zeroRuns groups zeros by family and panel, in whose order they stand.
func zeroRuns(zeros []Zero) [][]Zero {
	var runs [][]Zero
	for i, z := range zeros {
		if i == 0 || z.Family != zeros[i-1].Family || z.Panel != zeros[i-1].Panel {
			runs = append(runs, nil)
		}
		runs[len(runs)-1] = append(runs[len(runs)-1], z)
	}
	return runs
}

func (a *artist) zeroRow(run []Zero) zeroRow {
	v := a.d.View
	row := zeroRow{Cells: []string{run[0].Family}}
	for f, i := range v.Panels[run[0].Panel].Index {
		axis := v.Further[f]
		row.Cells = append(row.Cells, a.along(axis, v.Axes[axis].Values[i]))
	}
	for _, y := range a.d.Ups {
		row.Cells = append(row.Cells, a.zeroCell(run, y))
	}
	return row
}

func (a *artist) zeroCell(run []Zero, y int) string {
	u := a.axisUnit(a.d.View.X)
	text := ""
	for _, z := range run {
		if z.Y != y {
			continue
		}
		if text != "" {
			text += ", "
		}
		text += u.with(rounded(z.X*u.Scale, z.Err*u.Scale, 7))
	}
	if text == "" {
		return "–"
	}
	return text
}

// zeroFigure draws where the dispersion of each family vanishes, over the
// two axes of the maps.
func (a *artist) zeroFigure() *figure {
	v := a.d.View
	fig := &figure{Title: "Lines of zero dispersion", Columns: v.columns()}
	width, height := panelSize(v.columns())
	x, y := a.axisScale(v.X, v.Xs, 0), a.axisScale(v.Y, v.Ys, 0)
	there := map[int]bool{}
	for p := range v.Panels {
		f := newFrame(a.panelTitle(p), width, height, x, y)
		f.Describe = fmt.Sprintf("lines of zero dispersion over %s and %s %s", x.Name, y.Name, strings.Join(f.Title, ", "))
		for i, fam := range a.drawn {
			lines, ok := f.outline(&field{X: v.Xs, Y: v.Ys, V: v.InPanel(fam.Values[GVD], p)}, x, y, 0, a.lines)
			f.crowded = f.crowded || !ok
			if len(lines) == 0 || !ok {
				continue
			}
			there[i] = true
			f.Inner.Paths = append(f.Inner.Paths, path{Data: pathData(lines, false), Class: "line", Series: i})
		}
		fig.Panels = append(fig.Panels, f)
	}
	for i, k := range a.legend("line") {
		if there[i] {
			fig.Legend = append(fig.Legend, k)
		}
	}
	if len(fig.Legend) == 0 {
		return nil
	}
	fig.Caption = "Look for where a line passes what you are bound to: on it the group velocity does not change with frequency to first order. " +
		"Between the grid's points the lines are drawn straight."
	fig.noteCrowded()
	return fig
}
