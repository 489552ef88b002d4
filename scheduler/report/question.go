package report

import (
	"fmt"
	"strings"

	"betaloom/schema"
)

// question is the sweep in one paragraph.
func (d *Data) question() string {
	var moving, held []string
	for _, p := range d.Physics.Parameters {
		if p.Kind != schema.Axis {
			continue
		}
		n := len(d.valuesOf(p.Name))
		switch {
		case len(d.Columns) > 0:
			moving = append(moving, p.Name+" ("+d.extent(p)+")")
		case n > 1:
			moving = append(moving, fmt.Sprintf("%s (%s, %s values)", p.Name, d.extent(p), count(n)))
		default:
			held = append(held, p.Name+" at "+d.extent(p))
		}
	}
	text := "Which modes does this guide carry, and how do their effective index, group index and group-velocity dispersion "
	switch {
	case len(moving) == 0:
		text += "stand at one point?"
	case len(d.Columns) > 0:
		text += "vary over the points of a file, with " + listed(moving) + "?"
	default:
		text += "vary with " + listed(moving) + "?"
	}
	if len(held) > 0 {
		text += " Held: " + listed(held) + "."
	}
	return text + " " + d.guide()
}

// guide names the materials of a stack from the bottom up.
func (d *Data) guide() string {
	l := d.Physics.Section.Layers
	switch {
	case l != nil && len(l.Layers) > 0:
		var names []string
		for _, layer := range l.Layers {
			names = append(names, layer.Material)
		}
		return fmt.Sprintf("The section is a stack of %s, from the bottom up: %s.", several(len(names), "layer"), strings.Join(names, ", "))
	case d.Physics.Section.Circular != nil:
		return fmt.Sprintf("The section is a round guide of %s.", several(len(d.Physics.Section.Circular.Layers), "layer"))
	}
	return "The section is a metal pipe."
}

// listed joins words as a sentence does.
func listed(words []string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " and " + words[len(words)-1]
}

// brief is the answer at a glance.
func (d *Data) brief() []Fact {
	facts := []Fact{{"Points", d.pointsText()}}
	var names []string
	for _, f := range d.Families {
		names = append(names, f.Name)
	}
	if len(names) == 0 {
		names = []string{"none"}
	}
	facts = append(facts, Fact{"Modes found", listed(shortened(names))})
	if s := d.zeroBrief(); s != "" {
		facts = append(facts, Fact{"Zero GVD", s})
	}
	for _, r := range d.Reached {
		if r.Asked > 0 {
			verdict := fmt.Sprintf("reached in all %s rows", count(r.Rows))
			if r.Above+r.Unbound > 0 {
				verdict = fmt.Sprintf("missed in %s of %s rows", count(r.Above+r.Unbound), count(r.Rows+r.Unbound))
			}
			facts = append(facts, Fact{"Accuracy of " + strings.Replace(r.Column, "_err", "", 1), "asked " + unit{r.Unit, 1}.with(short(r.Asked, 3)) + ", " + verdict})
		}
	}
	return facts
}

func (d *Data) pointsText() string {
	parts := []string{}
	for _, s := range []struct{ state, text string }{{"solved", "solved"}, {"no-mode", "without a guided mode"}, {"failed", "failed"}, {"excluded", "left out by keep"}} {
		if n := d.States[s.state]; n > 0 {
			parts = append(parts, count(n)+" "+s.text)
		}
	}
	if n := d.missing(); n > 0 {
		parts = append(parts, count(n)+" not there yet")
	}
	if len(parts) == 1 {
		all := ", all"
		if d.Points == 1 {
			all = ","
		}
		return count(d.Points) + all + strings.TrimPrefix(parts[0], count(d.Points))
	}
	return count(d.Points) + ": " + listed(parts)
}

// missing counts the points that no table holds yet.
func (d *Data) missing() int {
	n := d.Points
	for _, k := range d.States {
		n -= k
	}
	return max(0, n)
}

func (d *Data) zeroBrief() string {
	var names []string
	for _, f := range d.Families {
		if f.changesSign() {
			names = append(names, f.Name)
		}
	}
	if len(names) == 0 {
		return ""
	}
	return "crossed by " + listed(shortened(names))
}

// shortened names twelve and counts the others.
func shortened(names []string) []string {
	if n := len(names); n > 12 {
		return append(names[:12:12], fmt.Sprintf("%d more", n-12))
	}
	return names
}
