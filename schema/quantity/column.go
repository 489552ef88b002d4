package quantity

import (
	"math"
	"strconv"
	"strings"

	"betaloom/schema"
)

// ColumnUnit says how a column of this dimension is named and kept: the
// suffix of its name ("m", "hz", "deg", "K", "per_K", "S_per_m"; empty for a
// pure number), its unit as ParseUnit reads it, and what a value in SI units
// is multiplied with to be in that unit. It is 1 but for angles, which
// columns have in degrees.
func ColumnUnit(d schema.Dimension) (suffix, unit string, scale float64) {
	return siUnit(d)
}

// siUnit writes a dimension with the named units of the SI where that is
// short, in base units otherwise.
func siUnit(d schema.Dimension) (suffix, unit string, scale float64) {
	scale = 1
	for range max(d.Angle, -d.Angle) {
		scale *= 180 / math.Pi
	}
	if d.Angle < 0 {
		scale = 1 / scale
	}
	factors := factorise(d)
	return suffixOf(factors), unitOf(factors), scale
}

// power is a unit name with its exponent.
type power struct {
	unit string
	e    int
}

func factorise(d schema.Dimension) []power {
	if d == frequency {
		return []power{{"Hz", 1}}
	}
	if d.Mass != 0 {
		for _, e := range []int{1, -1} {
			for _, n := range electrical {
				rest, ok := combine(d, n.d, -e)
				if ok && rest.Mass == 0 && rest.Time == 0 && rest.Current == 0 {
					return append([]power{{n.unit, e}}, base(rest)...)
				}
			}
		}
	}
	return base(d)
}

// electrical lists the named units that factorise tries, in order.
var electrical = []struct {
	unit string
	d    schema.Dimension
}{{"S", siemens}, {"ohm", ohm}, {"F", farad}, {"H", henry}, {"V", volt}, {"W", watt}}

func base(d schema.Dimension) []power {
	var factors []power
	e := exponents(d)
	for i, unit := range []string{"kg", "m", "s", "A", "K", "deg"} {
		if e[i] != 0 {
			factors = append(factors, power{unit, e[i]})
		}
	}
	return factors
}

func unitOf(factors []power) string {
	var above, below []string
	for _, f := range factors {
		text := f.unit
		if n := max(f.e, -f.e); n > 1 {
			text += "^" + strconv.Itoa(n)
		}
		if f.e > 0 {
			above = append(above, text)
		} else {
			below = append(below, text)
		}
	}
	if len(above) == 0 && len(below) > 0 {
		above = []string{"1"}
	}
	return strings.Join(append([]string{strings.Join(above, "*")}, below...), "/")
}

func suffixOf(factors []power) string {
	var above, below []string
	for _, f := range factors {
		text := f.unit
		switch text {
		case "Hz", "F", "H":
			text = strings.ToLower(text) // as in frequency_hz and c_f_per_m
		}
		if n := max(f.e, -f.e); n > 1 {
			text += strconv.Itoa(n)
		}
		if f.e > 0 {
			above = append(above, text)
		} else {
			below = append(below, "per_"+text)
		}
	}
	return strings.Join(append(above, below...), "_")
}
