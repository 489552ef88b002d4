package sweep

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"betaloom/schema"
)

// roundTo is how many digits of an axis' greatest value are kept. It makes
// values independent of where the axis ends: 1.305 um is one float64,
// whether the axis runs to 1.7 um or to 1.8 um.
const roundTo = 14

// length is how many values an axis has that is given by its values or its
// ends; ok is false where they are too many.
func (p *parameter) length() (n int, ok bool) {
	switch {
	case len(p.values) > 0:
		return len(p.values), true
	case p.count > 0:
		return p.count, true
	}
	// A step that reaches the end to within rounding reaches it.
	const near = 1e-9
	steps := math.Floor((p.to.v-p.from.v)/p.step.v + near)
	if !(steps < MaxAxis) {
		return 0, false
	}
	return 1 + max(0, int(steps)), true
}

// tooFine reports whether neighbours differ by less than rounding keeps.
func (p *parameter) tooFine(n int) bool {
	const finest = 1e-12
	return math.Abs(p.to.v-p.from.v)/float64(n-1) < finest*max(math.Abs(p.from.v), math.Abs(p.to.v))
}

// expand gives an axis' values.
func (p *parameter) expand() []float64 {
	n, _ := p.length()
	v := make([]float64, n)
	if len(p.values) > 0 {
		for i, l := range p.values {
			v[i] = l.v
		}
		return v
	}
	step := p.step.v
	if p.count > 1 {
		step = (p.to.v - p.from.v) / float64(n-1)
	}
	places := roundTo - 1 - int(math.Floor(math.Log10(max(math.Abs(p.from.v), math.Abs(p.to.v)))))
	for i := range v {
		v[i] = rounded(p.from.v+float64(i)*step, places)
	}
	v[0] = p.from.v
	if last := n - 1; p.count > 1 || math.Abs(v[last]-p.to.v) < 1e-9*math.Abs(step) {
		v[last] = p.to.v
	}
	return v
}

// rounded rounds to a number of decimal places; a value that needs none, or
// more than a float64 has, stays.
func rounded(v float64, places int) float64 {
	if places < 0 || places > 330 {
		return v
	}
	r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'f', places, 64), 64)
	if err != nil {
		return v
	}
	return r + 0 // no negative zero
}

// checkGrid checks the number of points before any is built.
func (c *checker) checkGrid() bool {
	total, text := 1.0, []string{}
	for _, name := range c.order {
		q := c.parameters[name]
		if q.v.kind != schema.Axis || q.broken || q.column {
			continue
		}
		n, ok := q.v.length()
		if !ok {
			return false
		}
		total *= float64(n)
		text = append(text, fmt.Sprintf("%d of %s", n, name))
	}
	if total <= MaxPoints {
		return true
	}
	if len(text) > 8 {
		text = append(text[:8], "...")
	}
	c.fault("parameters", fmt.Sprintf("a grid of %.3g points: %s", total, strings.Join(text, " x ")), fmt.Sprintf("at most %.0g", float64(MaxPoints)))
	return false
}

// expand builds the points.
func (c *checker) expand(s *Sweep) {
	for _, name := range c.order {
		switch q := c.parameters[name]; {
		case q.column:
			s.Columns = append(s.Columns, name)
		case q.v.kind == schema.Axis:
			s.Axes = append(s.Axes, schema.AxisBlock{Parameter: name, Values: q.v.expand()})
		}
	}
	s.Rows = c.raw.points.rows
}

// rounded15 hides what the last bits of a sum hold, for a message.
func rounded15(v float64) float64 {
	r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 15, 64), 64)
	if err != nil {
		return v
	}
	return r
}

// ends gives an axis' least and greatest value.
func (p *parameter) ends() (lo, hi float64) {
	if len(p.values) == 0 {
		return min(p.from.v, p.to.v), max(p.from.v, p.to.v)
	}
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, l := range p.values {
		lo, hi = min(lo, l.v), max(hi, l.v)
	}
	return lo, hi
}
