package sweep

import (
	"fmt"
	"slices"
	"strings"

	"betaloom/schema"
	"betaloom/schema/quantity"
)

// tableForm is the form of a material's table: the name of a CSV file, which
// is read at once.
type tableForm struct{}

// table is a table as read, kept so that a file is read once.
type table struct {
	t  *schema.Table
	ok bool
}

func (f tableForm) read(r *reader, at place) (*schema.Table, bool) {
	name, ok := r.scalar(at, f.expects())
	if !ok {
		return nil, false
	}
	known := r.tables[name]
	if known == nil {
		t, ok := r.table(at.path, name)
		known = &table{t, ok}
		r.tables[name] = known
	}
	return known.t, known.ok
}

func (tableForm) expects() string { return "the name of a CSV file, relative to the sweep file" }
func (tableForm) describe() fragment {
	return fragment{"type": "string", "minLength": 1}
}

// table reads a table: wavelength_um,n[,k] with the wavelength rising.
func (r *reader) table(path, name string) (*schema.Table, bool) {
	s, size, ok := r.sheet(path, name, MaxTable)
	if !ok {
		return nil, false
	}
	if r.tableBytes += size; r.tableBytes > MaxTables {
		r.fault(path, fmt.Sprintf("tables of more than %d bytes in all", MaxTables), "tables within that")
		return nil, false
	}
	head, _ := s.next() // an empty file has no header, which is told next
	columns := header(head)
	if columns != "wavelength_um,n" && columns != "wavelength_um,n,k" {
		s.faultFile("the header "+quote(columns), "wavelength_um,n or wavelength_um,n,k")
		return nil, false
	}
	t := &schema.Table{File: name}
	width := len(head)
	um, err := quantity.ParseUnit("um")
	if err != nil {
		s.faultFile(err.Error(), "the unit um")
		return nil, false
	}
	units := []scale{newScale(um), {tens: true}, {tens: true}}[:width]
	for row, ok := s.next(); ok; row, ok = s.next() {
		s.tableRow(t, row, units)
	}
	if n := len(t.WavelengthM); n < minTable && s.faults == 0 {
		s.faultFile(count(n, "row"), fmt.Sprintf("at least %d for a smooth fit", minTable))
	}
	return t, s.faults == 0
}

func header(row []string) string {
	names := slices.Clone(row)
	for i := range names {
		names[i] = strings.TrimSpace(names[i])
	}
	return strings.Join(names, ",")
}

func (s *sheet) tableRow(t *schema.Table, row []string, units []scale) {
	width := len(units)
	if len(row) != width {
		s.fault(0, count(len(row), "field"), fmt.Sprintf("%d, as in the header", width))
		return
	}
	var v [3]float64
	for i, cell := range row {
		x, ok := s.cell(i, strings.TrimSpace(cell), units[i])
		if !ok {
			return
		}
		v[i] = x
	}
	n := len(t.WavelengthM)
	switch {
	case !(v[0] > 0):
		s.fault(0, "the wavelength "+quote(row[0]), "one above zero")
	case n > 0 && v[0] <= t.WavelengthM[n-1]:
		s.fault(0, "the wavelength "+quote(row[0])+", which is not above the one before it", "rising wavelengths")
	case !(v[1] > 0):
		s.fault(1, "the index "+quote(row[1]), "one above zero")
	default:
		t.WavelengthM, t.N = append(t.WavelengthM, v[0]), append(t.N, v[1])
		if width == 3 {
			t.K = append(t.K, v[2])
		}
	}
}

// cell reads a bare number in a unit.
func (s *sheet) cell(field int, text string, unit scale) (float64, bool) {
	v, err := unit.value(text)
	if err == nil {
		return v, true
	}
	s.fault(field, quote(text), "a bare decimal number; the unit stands in the header")
	return 0, false
}
