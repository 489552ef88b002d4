package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"betaloom/schema"
)

type parameterRow struct{ Name, Kind, Extent, Values string }

type familyRow struct {
	Name, Type string
	Series     int
	Cells      []string
}

type zeroRow struct{ Cells []string }

type reachedRow struct{ Column, Asked, Worst, Where, Median, Above, Rows string }

type flagRow struct{ Flag, Meaning, Rows string }

type reasonRow struct{ State, Text, Points, First string }

type link struct{ Name, What, Size string }

func (d *Data) parameterRow(p schema.Parameter) parameterRow {
	row := parameterRow{Name: p.Name, Extent: d.extent(p)}
	n := len(d.valuesOf(p.Name))
	switch {
	case p.Kind == schema.Fixed:
		row.Kind = "fixed"
	case p.Kind == schema.Derived:
		row.Kind = "derived"
	case len(d.Columns) > 0:
		row.Kind, row.Values = "from the points file", count(d.Points)
	default:
		row.Kind, row.Values = "axis", count(n)
	}
	return row
}

// results fills in the table of families: values at a single point, ranges
// otherwise.
func (p *page) results(d *Data) {
	p.Columns = []string{"rows", "neff", "ng", "GVD (ps²/km)"}
	lossy := slices.ContainsFunc(d.Families, (*Family).lossy)
	if lossy {
		p.Columns = append(p.Columns, "loss (dB/m)")
	}
	for i, f := range d.Families {
		row := familyRow{Name: f.Name, Type: f.Type, Series: -1, Cells: []string{count(f.Rows)}}
		if i < mostDrawn {
			row.Series = i
		}
		for q := range quantities {
			row.Cells = append(row.Cells, f.rangeText(q))
		}
		if lossy {
			row.Cells = append(row.Cells, f.lossText())
		}
		p.Summary = append(p.Summary, row)
	}
}

// lossy reports whether any row has a loss other than zero.
func (f *Family) lossy() bool { return !f.Loss.empty() && (f.Loss.Lo != 0 || f.Loss.Hi != 0) }

func (f *Family) lossText() string {
	switch {
	case f.Loss.empty():
		return "–"
	case f.Loss.width() == 0:
		return short(f.Loss.Lo, 4)
	}
	return short(f.Loss.Lo, 4) + " to " + short(f.Loss.Hi, 4)
}

// rangeText is lowest to highest over the sweep, or the value with its bound.
func (f *Family) rangeText(q Quantity) string {
	s, worst := f.Range[q], f.Worst[q]
	if s.empty() {
		return "–"
	}
	if s.width() == 0 {
		text := rounded(s.Lo, worst, 12)
		if worst > 0 {
			text += " ± " + short(worst, 2)
		}
		return text
	}
	lo, hi := rounded(s.Lo, worst, 6), rounded(s.Hi, worst, 6)
	return lo + " to " + hi
}

// troubles fills in accuracy, flags and reasons.
func (p *page) troubles(d *Data) {
	for _, r := range d.Reached {
		p.Accuracy = append(p.Accuracy, d.reachedRow(r))
	}
	for _, t := range d.Flags {
		p.Flags = append(p.Flags, flagRow{t.Text, flagMeaning(t.Text), count(t.N)})
	}
	for _, r := range d.Reasons {
		row := reasonRow{State: r.State, Text: r.Text, Points: count(r.N), First: d.firstText(r)}
		if r.State == "failed" {
			p.Reasons = append(p.Reasons, row)
		} else {
			p.Left = append(p.Left, row)
		}
	}
	p.Missing = d.missing()
}

func (d *Data) reachedRow(r Reached) reachedRow {
	u := unit{r.Unit, 1}
	row := reachedRow{Column: r.Column, Asked: "not asked", Worst: "–", Median: "–", Above: "–", Rows: count(r.Rows)}
	if r.Rows > 0 {
		row.Worst, row.Median, row.Where = u.with(short(r.Worst, 2)), u.with(short(r.Median, 2)), "point "+count(r.At)
		if v := d.pointText(r.At); v != "" {
			row.Where += " (" + v + ")"
		}
	}
	if r.Unbound > 0 {
		row.Rows += fmt.Sprintf(", %s without a bound", count(r.Unbound))
	}
	if r.Asked > 0 {
		row.Asked, row.Above = u.with(short(r.Asked, 3)), count(r.Above)
	}
	return row
}

// pointText gives what varies at a point, for people.
func (d *Data) pointText(point int) string {
	names, values := d.Columns, []float64(nil)
	if d.View.IsBox() {
		names, values = nil, d.View.Values(point)
		for _, a := range d.Axes {
			names = append(names, a.Parameter)
		}
	} else {
		values = d.Rows[point]
	}
	var parts []string
	for i, v := range values {
		p, _ := d.Physics.Parameter(names[i])
		parts = append(parts, p.Name+" "+value(v, p.Dimension))
	}
	return strings.Join(parts, ", ")
}

func (d *Data) firstText(r Reason) string {
	var parts []string
	for _, point := range r.First {
		text := count(point)
		if v := d.pointText(point); v != "" {
			text += " (" + v + ")"
		}
		parts = append(parts, text)
	}
	if r.N > len(r.First) {
		parts = append(parts, "…")
	}
	return strings.Join(parts, "; ")
}

// flagMeaning explains the flags of modes.parquet.
func flagMeaning(flag string) string {
	switch flag {
	case "near-cutoff":
		return "close to its cut-off: the field reaches far out"
	case "below-cutoff":
		return "an evanescent mode, asked for"
	case "avoided-crossing":
		return "two modes approach and repel here"
	case "cut":
		return "the family's surface was cut here"
	case "approximate":
		return "from an approximate equation"
	case "accuracy":
		return "the bound is above what was asked"
	}
	return ""
}

// bytesText writes a size for people.
func bytesText(n int64) string {
	for _, u := range []struct {
		text string
		n    float64
	}{{"GB", 1e9}, {"MB", 1e6}, {"kB", 1e3}} {
		if float64(n) >= u.n {
			return short(float64(n)/u.n, 3) + "\u00a0" + u.text
		}
	}
	return fmt.Sprintf("%d\u00a0bytes", n)
}

// seconds writes a duration for people.
func seconds(s float64) string {
	switch {
	case math.IsNaN(s) || s < 0:
		return "–"
	case s < 60:
		return short(s, 3) + "\u00a0s"
	case s < 3600:
		return fmt.Sprintf("%d\u00a0min %d\u00a0s", int(s)/60, int(s)%60)
	}
	return fmt.Sprintf("%d\u00a0h %d\u00a0min", int(s)/3600, int(s)%3600/60)
}
