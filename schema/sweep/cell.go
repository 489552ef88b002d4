package sweep

import (
	"math"
	"strconv"
	"strings"

	"betaloom/schema/quantity"
)

// scale is the unit of a column of a CSV file. A unit that is a power of ten
// of the SI unit moves the exponent of a number and costs one rounding, as
// quantity.Unit does at many times the price.
type scale struct {
	quantity.Unit
	tens bool
	by   int // the power of ten
}

func newScale(u quantity.Unit) scale {
	s := scale{Unit: u}
	if u.Scale == 0 { // the unit of pure numbers
		s.tens = true
		return s
	}
	p := math.Round(math.Log10(u.Scale))
	power, err := strconv.ParseFloat("1e"+strconv.Itoa(int(p)), 64)
	s.tens, s.by = err == nil && power == u.Scale && u.Offset == 0, int(p)
	return s
}

// value reads a bare decimal number and gives it in SI units, rounded once.
func (s scale) value(text string) (float64, error) {
	if s.tens && text != "" && quantity.NumberLength(text) == len(text) {
		if v, ok := s.shifted(text); ok {
			return v, nil
		}
	}
	return s.Unit.Value(text) // also where the number is out of range
}

func (s scale) shifted(text string) (v float64, ok bool) {
	e, mantissa := 0, text
	if i := strings.IndexAny(text, "eE"); i >= 0 {
		var err error
		if e, err = strconv.Atoi(text[i+1:]); err != nil {
			return 0, false
		}
		mantissa = text[:i]
	}
	v, err := strconv.ParseFloat(mantissa+"e"+strconv.Itoa(e+s.by), 64)
	isZero := strings.Trim(mantissa, "+-0.") == ""
	return v + 0, err == nil && (v != 0 || isZero) // no negative zero
}
