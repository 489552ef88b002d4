package quantity

import (
	"math/big"

	"betaloom/schema"
)

// name is one unit name. The factor to SI units is an exact fraction (for
// degrees, one with 60 digits of pi).
type name struct {
	text   string
	d      schema.Dimension
	factor *big.Rat
	offset *big.Rat // to kelvin, for degC alone
}

// pi60 is pi to 60 digits (OEIS A000796).
const pi60 = "3.14159265358979323846264338327950288419716939937510582097494"

// names is the list of units: the prefixes and the named derived units are
// those of the SI (BIPM, The International System of Units, 9th edition,
// 2019, tables 2 to 8); in and mil follow from 1 in = 25.4 mm, exact.
var names = []name{
	{"nm", length, decimal("1e-9"), nil},
	{"um", length, decimal("1e-6"), nil},
	{"mm", length, decimal("1e-3"), nil},
	{"cm", length, decimal("1e-2"), nil},
	{"m", length, decimal("1"), nil},
	{"km", length, decimal("1e3"), nil},
	{"in", length, decimal("25.4e-3"), nil},
	{"mil", length, decimal("25.4e-6"), nil},
	{"Hz", frequency, decimal("1"), nil},
	{"kHz", frequency, decimal("1e3"), nil},
	{"MHz", frequency, decimal("1e6"), nil},
	{"GHz", frequency, decimal("1e9"), nil},
	{"THz", frequency, decimal("1e12"), nil},
	{"deg", angle, new(big.Rat).Quo(decimal(pi60), decimal("180")), nil},
	{"rad", angle, decimal("1"), nil},
	{"K", temperature, decimal("1"), nil},
	{"degC", temperature, decimal("1"), decimal("273.15")},
	{"fs", time, decimal("1e-15"), nil},
	{"ps", time, decimal("1e-12"), nil},
	{"ns", time, decimal("1e-9"), nil},
	{"us", time, decimal("1e-6"), nil},
	{"ms", time, decimal("1e-3"), nil},
	{"s", time, decimal("1"), nil},
	{"kg", schema.Dimension{Mass: 1}, decimal("1"), nil},
	{"A", schema.Dimension{Current: 1}, decimal("1"), nil},
	{"V", volt, decimal("1"), nil},
	{"mW", watt, decimal("1e-3"), nil},
	{"W", watt, decimal("1"), nil},
	{"S", siemens, decimal("1"), nil},
	{"ohm", ohm, decimal("1"), nil},
	{"pF", farad, decimal("1e-12"), nil},
	{"F", farad, decimal("1"), nil},
	{"nH", henry, decimal("1e-9"), nil},
	{"H", henry, decimal("1"), nil},
}

// The dimensions of the units above.
var (
	length      = schema.Dimension{Length: 1}
	frequency   = schema.Dimension{Time: -1}
	time        = schema.Dimension{Time: 1}
	angle       = schema.Dimension{Angle: 1}
	temperature = schema.Dimension{Temperature: 1}
	volt        = schema.Dimension{Mass: 1, Length: 2, Time: -3, Current: -1}
	watt        = schema.Dimension{Mass: 1, Length: 2, Time: -3}
	siemens     = schema.Dimension{Mass: -1, Length: -2, Time: 3, Current: 2}
	ohm         = schema.Dimension{Mass: 1, Length: 2, Time: -3, Current: -2}
	farad       = schema.Dimension{Mass: -1, Length: -2, Time: 4, Current: 2}
	henry       = schema.Dimension{Mass: 1, Length: 2, Time: -2, Current: -2}
)

// decimal reads a number that is written in this file.
func decimal(s string) *big.Rat {
	r, ok := new(big.Rat).SetString(s)
	if !ok {
		panic("quantity: not a number in the table of units: " + s)
	}
	return r
}

// Names lists every unit name. A parameter may not carry one.
func Names() []string {
	all := make([]string, len(names))
	for i, n := range names {
		all[i] = n.text
	}
	return all
}

// IsName reports whether s is the name of a unit.
func IsName(s string) bool {
	_, ok := lookup(s)
	return ok
}

func lookup(s string) (name, bool) {
	for _, n := range names {
		if n.text == s {
			return n, true
		}
	}
	return name{}, false
}
