package column

import (
	"fmt"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// Type is the type of a column's values.
type Type int

// The types of column. Bytes has SignatureBytes bytes a value.
const (
	Int64 Type = iota
	Int32
	Float64
	String
	Bytes
)

// SignatureBytes is the width of a mode's signature: 16 little-endian float32.
const SignatureBytes = 64

// Column is one column of a table.
type Column struct {
	Name        string `json:"name"`
	Unit        string `json:"unit,omitempty"` // empty for a pure number or a text
	Description string `json:"description"`
	Type        Type   `json:"-"`
}

// Points lists the columns of points.parquet.
func Points(p *schema.Physics) []Column {
	return join([]Column{pointColumn()}, parameters(p), answer())
}

// Modes lists the columns of modes.parquet.
func Modes(p *schema.Physics) []Column {
	return join([]Column{pointColumn()}, parameters(p), mode(p))
}

// Part lists the columns of a part file: what points.parquet and
// modes.parquet need of a tile, and the signature that following modes needs.
func Part(p *schema.Physics) []Column {
	local := Column{"local", "", "index of the point in its tile", Int32}
	signature := Column{"signature", "", "field samples in section coordinates: 16 little-endian float32 of unit norm", Bytes}
	return join([]Column{local}, parameters(p), answer(), mode(p), []Column{signature})
}

// Index finds columns by name.
func Index(columns []Column) map[string]int {
	at := make(map[string]int, len(columns))
	for i, c := range columns {
		at[c.Name] = i
	}
	return at
}

// Check reports a Physics whose tables would have two columns of one name.
func Check(p *schema.Physics) error {
	seen := map[string]bool{"point": true}
	for _, c := range Part(p) {
		if seen[c.Name] {
			return fmt.Errorf("column %s: found it twice in the tables, expected parameter, layer and strip names that tell columns apart", c.Name)
		}
		seen[c.Name] = true
	}
	return nil
}

// Parameter gives the column of a parameter and the scale by which its SI
// value is multiplied for it. Wavelength and frequency have the columns
// wavelength_m and frequency_hz.
func Parameter(q schema.Parameter) (c Column, scale float64) {
	suffix, unit, scale := quantity.ColumnUnit(q.Dimension)
	name := q.Name
	if suffix != "" {
		name += "_" + suffix
	}
	return Column{name, unit, "parameter " + q.Name + " (" + string(q.Kind) + ")", Float64}, scale
}

// Confinements lists the named layers, strips and rings of the section, from
// the bottom up or inside out; the strips of a layer follow it.
func Confinements(p *schema.Physics) []string {
	var layers []schema.Layer
	var names []string
	switch s := p.Section; {
	case s.Layers != nil:
		layers = s.Layers.Layers
	case s.Pipe != nil:
		layers = s.Pipe.FillLayers
	case s.Circular != nil:
		for _, r := range s.Circular.Layers {
			names = appendName(names, r.Name)
		}
	}
	for _, l := range layers {
		names = appendName(names, l.Name)
		for _, s := range l.Strips {
			names = appendName(names, s.Name)
		}
	}
	return names
}

// MostModes is the most rows that a point may have.
func MostModes(p *schema.Physics) int {
	n := max(0, p.Modes)
	if p.Section.Pipe != nil {
		n += max(0, p.Section.Pipe.Evanescent)
	}
	return n
}

func appendName(names []string, name string) []string {
	if name == "" {
		return names
	}
	return append(names, name)
}

func join(lists ...[]Column) []Column {
	var all []Column
	for _, l := range lists {
		all = append(all, l...)
	}
	return all
}
