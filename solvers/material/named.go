package material

import (
	"slices"
	"strings"
)

// Listing describes a built-in material.
type Listing struct {
	Name        string
	Source      string     // where its numbers were published
	Formula     string     // L is the wavelength in um
	RangeM      [2]float64 // wavelengths in m; 0 and +Inf for any
	Temperature string     // of the measurement; empty where it has no meaning or was not given
	Note        string
}

// entry is a built-in material. Its range is in um, as published.
type entry struct {
	name, source string
	formula      formula
	rangeUm      [2]float64
	temperature  string
	note         string
}

func (e entry) band() band { return band{e.rangeUm[0] / metre, e.rangeUm[1] / metre} }

// Named lists the built-in materials by name.
func Named() []Listing {
	var all []Listing
	for _, e := range catalogue() {
		b := e.band()
		all = append(all, Listing{
			Name: e.name, Source: e.source, Formula: e.formula.text(),
			RangeM: [2]float64{b.lo, b.hi}, Temperature: e.temperature, Note: e.note,
		})
	}
	slices.SortFunc(all, func(a, b Listing) int { return strings.Compare(a.Name, b.Name) })
	return all
}

// lookUp finds a built-in material.
func lookUp(name string) (entry, *fault) {
	var alike []string
	for _, e := range catalogue() {
		if e.name == name {
			return e, nil
		}
		if strings.HasPrefix(e.name, name) || strings.HasPrefix(name, e.name) {
			alike = append(alike, e.name)
		}
	}
	expected := "a built-in material (the command 'betaloom materials' lists them)"
	if len(alike) > 0 {
		expected += "; " + strings.Join(alike, ", ") + "?"
	}
	return entry{}, &fault{"named " + name, expected}
}
