package quantity

import (
	"math"
	"math/big"
	"strconv"
	"strings"

	"betaloom/schema"
)

// Format writes a value in SI units (radians, kelvin) for people: in the
// prefix that suits it ("1.3 um", "193.1 THz"), angles in degrees, with the
// fewest digits that Parse reads back as the same value. v must be finite.
func Format(v float64, d schema.Dimension) string {
	unit := suited(v, d)
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return strings.TrimSpace(strconv.FormatFloat(v, 'g', -1, 64) + " " + unit)
	}
	if unit == "" {
		return layout(strconv.FormatFloat(v, 'e', -1, 64))
	}
	u, err := ParseUnit(unit)
	if err != nil {
		return layout(strconv.FormatFloat(v, 'e', -1, 64)) + " " + unit
	}
	return shortest(v, u) + " " + unit
}

// suited picks the unit for a value: the largest prefix that leaves at least
// 1 before the point.
func suited(v float64, d schema.Dimension) string {
	type step struct {
		least float64
		unit  string
	}
	var steps []step
	switch d {
	case length:
		steps = []step{{1, "m"}, {1e-3, "mm"}, {1e-6, "um"}, {0, "nm"}}
	case frequency:
		steps = []step{{1e12, "THz"}, {1e9, "GHz"}, {1e6, "MHz"}, {1e3, "kHz"}, {0, "Hz"}}
	default:
		_, unit, _ := siUnit(d)
		return unit
	}
	if v == 0 {
		return steps[len(steps)-2].unit
	}
	for _, s := range steps {
		if math.Abs(v) >= s.least {
			return s.unit
		}
	}
	return steps[0].unit // NaN
}

// shortest writes v in the unit with the fewest digits, from 15 up, that
// give it back. 17 always do where the unit is a power of ten; degrees and
// inches may need one more.
func shortest(v float64, u Unit) string {
	exact := new(big.Rat).SetFloat64(v)
	exact.Quo(exact, u.factor)
	x := new(big.Float).SetPrec(128).SetRat(exact)
	for n := 15; ; n++ {
		text := layout(x.Text('e', n-1))
		if back, err := u.Value(text); n == 20 || err == nil && back == v {
			return text
		}
	}
}

// layout rewrites d.ddde+xx as people write it: plain from 0.0001 to ten
// million, otherwise 1.5e7.
func layout(scientific string) string {
	mantissa, exp, _ := strings.Cut(scientific, "e")
	sign := ""
	if strings.HasPrefix(mantissa, "-") {
		sign, mantissa = "-", mantissa[1:]
	}
	digits := strings.TrimRight(strings.Replace(mantissa, ".", "", 1), "0")
	if digits == "" {
		return "0"
	}
	e, _ := strconv.Atoi(exp)
	switch {
	case e < -4 || e > 6:
		point := ""
		if len(digits) > 1 {
			point = "." + digits[1:]
		}
		return sign + digits[:1] + point + "e" + strconv.Itoa(e)
	case e < 0:
		return sign + "0." + strings.Repeat("0", -e-1) + digits
	case len(digits) <= e+1:
		return sign + digits + strings.Repeat("0", e+1-len(digits))
	}
	return sign + digits[:e+1] + "." + digits[e+1:]
}
