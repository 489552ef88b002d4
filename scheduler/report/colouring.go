package report

import (
	"fmt"
	"slices"

	"betaloom/scheduler/palette"
)

// colouring is how the values of a quantity become colours and lines.
type colouring struct {
	ramp   ramp
	levels []float64
	texts  []string
	note   string
}

// colours chooses the ramp for a family's values in all panels.
func colours(q Quantity, values []float64) colouring {
	s, beyond := sturdy(values)
	c := colouring{}
	if beyond > 0 {
		c.note = fmt.Sprintf("The colours end where a few extreme values begin: %s of the drawn values lie beyond the bar's ends.", percent(beyond))
	}
	if q == GVD && s.Lo < 0 && s.Hi > 0 {
		c.signed(s)
	} else {
		s = s.padded(0)
		c.ramp = ramp{[]float64{s.Lo, s.Hi}, palette.Sequential}
		var decimals int
		c.levels, decimals = s.ticks(8)
		c.texts = labels(c.levels, decimals)
	}
	return c
}

// signed makes zero the middle of the bar. Where one side is much the longer,
// each has its own scale.
func (c *colouring) signed(s span) {
	long, brief := max(s.Hi, -s.Lo), min(s.Hi, -s.Lo)
	if long <= 4*brief {
		s = span{-long, long}
	} else {
		c.note = "Each side of zero has a colour scale of its own. " + c.note
	}
	c.ramp = ramp{[]float64{s.Lo, 0, s.Hi}, palette.Diverging}
	below, _ := span{s.Lo, 0}.ticks(4)
	above, _ := span{0, s.Hi}.ticks(4)
	for _, v := range slices.Concat(below, above) {
		if v != 0 {
			c.levels = append(c.levels, v)
		}
	}
	c.levels = append(c.levels, 0)
	slices.Sort(c.levels)
	for _, v := range c.levels {
		c.texts = append(c.texts, short(v, 4))
	}
}

func percent(share float64) string {
	if share > 0 && share < 0.001 {
		return "less than 0.1 %"
	}
	return short(100*share, 2) + " %"
}
