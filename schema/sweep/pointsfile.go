package sweep

import (
	"fmt"
	"strings"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// points is a points file as read.
type points struct {
	given   bool
	broken  bool // its columns are not known
	columns []schema.Parameter
	marks   []Diagnostic // where each column's name stands, to be filled in
	rows    [][]float64  // SI units
}

// pointsFile is the form of the name of a points file, which is read at
// once.
type pointsFile struct{}

func (f pointsFile) read(r *reader, at place) (points, bool) {
	p := points{given: true, broken: true}
	name, ok := r.scalar(at, f.expects())
	if !ok {
		return p, false
	}
	s, _, ok := r.sheet(at.path, name, MaxPointsFile)
	if !ok {
		return p, false
	}
	units, ok := s.pointsHeader(&p)
	if !ok {
		return p, false
	}
	p.broken = false
	s.pointsRows(&p, units)
	return p, s.faults == 0
}

func (pointsFile) expects() string { return "the name of a CSV file, relative to the sweep file" }
func (pointsFile) describe() fragment {
	return fragment{"type": "string", "minLength": 1}
}

const headerRule = "the name of a parameter and its unit, such as width [um] or width_um; of a pure number the name alone"

func (s *sheet) pointsHeader(p *points) ([]scale, bool) {
	head, ok := s.next()
	if !ok || len(head) > MaxColumns {
		s.faultFile(count(len(head), "column"), fmt.Sprintf("a header of 1 to %d parameters", MaxColumns))
		return nil, false
	}
	units := make([]scale, len(head))
	seen := map[string]bool{}
	for i, text := range head {
		line, column := s.csv.FieldPos(i)
		p.marks = append(p.marks, Diagnostic{File: s.name, Line: line, Column: column})
		name, unit, err := splitHeader(strings.TrimSpace(text))
		p.columns = append(p.columns, schema.Parameter{Name: name, Kind: schema.Axis, Dimension: unit.Dimension})
		units[i] = newScale(unit)
		switch {
		case err != nil || !parameterPattern.MatchString(name):
			s.fault(i, "the header "+quote(text), headerRule)
		case seen[name]:
			s.fault(i, "the column "+name+" again", "each parameter once")
		}
		seen[name] = true
	}
	return units, s.faults == 0
}

// splitHeader takes "width [um]" or "width_um" apart. Without brackets the
// last word is a unit if it is one of columnUnit's, as in the tables' columns.
func splitHeader(text string) (name string, unit quantity.Unit, err error) {
	name, rest, found := strings.Cut(text, "[")
	if !found {
		return splitColumn(name)
	}
	inside, after, closed := strings.Cut(rest, "]")
	if !closed || after != "" {
		return "", unit, fmt.Errorf("no unit in brackets")
	}
	unit, err = quantity.ParseUnit(strings.TrimSpace(inside))
	return strings.TrimSpace(name), unit, err
}

func splitColumn(text string) (name string, unit quantity.Unit, err error) {
	at := strings.LastIndexByte(text, '_')
	if at <= 0 {
		return text, unit, nil
	}
	if text[at+1:] == "hz" { // as the tables write it
		text = text[:at] + "_Hz"
	}
	if !columnUnit(text[at+1:]) {
		return text, unit, nil
	}
	unit, err = quantity.ParseUnit(text[at+1:])
	return text[:at], unit, err
}

// columnUnit reports whether a column's name may end in the unit. Units that
// are words or letters a parameter's own name may end in are not among them.
func columnUnit(word string) bool {
	switch word {
	case "nm", "um", "mm", "m", "Hz", "kHz", "MHz", "GHz", "THz", "deg", "K", "degC":
		return true
	}
	return false
}

func (s *sheet) pointsRows(p *points, units []scale) {
	var flat []float64
	width, n := len(units), 0
	for row, ok := s.next(); ok; row, ok = s.next() {
		if n++; n > MaxRows {
			s.fault(0, fmt.Sprintf("more than %d rows", MaxRows), "a points file within that")
			return
		}
		if len(row) != width {
			s.fault(0, count(len(row), "field"), fmt.Sprintf("%d, as in the header", width))
			continue
		}
		for i, text := range row {
			v, ok := s.cell(i, strings.TrimSpace(text), units[i])
			if name := p.columns[i].Name; ok && !positiveHere(name, v) {
				s.fault(i, "the "+name+" "+quote(text), "one above zero")
			}
			flat = append(flat, v)
		}
	}
	if n == 0 && s.faults == 0 {
		s.faultFile("no row", "at least one point")
	}
	if s.faults == 0 {
		p.rows = make([][]float64, n)
		for i := range p.rows {
			p.rows[i] = flat[i*width : (i+1)*width : (i+1)*width]
		}
	}
}

// positiveHere reports whether a value may be that of the parameter: a
// wavelength and a frequency are above zero.
func positiveHere(name string, v float64) bool {
	return v > 0 || name != schema.Wavelength && name != schema.Frequency
}
