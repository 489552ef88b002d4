package fieldmap

import (
	"encoding/csv"
	"fmt"
	"io"
	"strconv"

	"betaloom/solvers"
)

// WriteTable writes a field as CSV, one row a place, x varying fastest: x_m, y_m, material, then the real and
// imaginary parts of E in V/m and of H in A/m.
func WriteTable(w io.Writer, f *solvers.Field) error {
	c := csv.NewWriter(w)
	row := []string{"x_m", "y_m", "material"}
	for _, v := range []struct{ name, unit string }{{"e", "v_per_m"}, {"h", "a_per_m"}} {
		for _, axis := range "xyz" {
			for _, part := range []string{"re", "im"} {
				row = append(row, fmt.Sprintf("%s%c_%s_%s", v.name, axis, part, v.unit))
			}
		}
	}
	c.Write(row)
	number := func(v float64) string { return strconv.FormatFloat(v+0, 'g', -1, 64) } // no -0
	for j, y := range f.Y {
		for i, x := range f.X {
			at := j*len(f.X) + i
			row = append(row[:0], number(x), number(y), f.Materials[f.Material[at]])
			for _, v := range [][3][]complex128{f.E, f.H} {
				for _, component := range v {
					row = append(row, number(real(component[at])), number(imag(component[at])))
				}
			}
			c.Write(row)
		}
	}
	c.Flush()
	if err := c.Error(); err != nil {
		return fmt.Errorf("field table: %w", err)
	}
	return nil
}
