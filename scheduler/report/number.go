package report

import (
	"math"
	"strconv"
	"strings"

	"betaloom/schema"
)

// rounded writes v with no more digits than bound supports: one unit of the
// last digit is not smaller than the bound. most is the largest number of
// significant digits; a bound of 0 or NaN stands for one that is not known.
func rounded(v, bound float64, most int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "–"
	}
	if v == 0 && !(bound > 0) {
		return "0"
	}
	lead := bound
	if v != 0 {
		lead = math.Abs(v)
	}
	decimals := most - 1 - int(math.Floor(math.Log10(lead)))
	if bound > 0 {
		decimals = min(decimals, int(math.Floor(1e-9-math.Log10(bound))))
	}
	return fixedPoint(v, decimals)
}

// fixedPoint writes v with that many decimals; negative ones round to tens.
func fixedPoint(v float64, decimals int) string {
	if decimals < 0 {
		scale := math.Pow(10, float64(-decimals))
		v = math.Round(v/scale) * scale
	}
	if v != 0 && (math.Abs(v) >= 1e7 || math.Abs(v) < 1e-4) {
		digits := decimals + int(math.Floor(math.Log10(math.Abs(v))))
		return power(strconv.FormatFloat(v, 'e', max(0, min(digits, 16)), 64))
	}
	s := strconv.FormatFloat(v, 'f', max(0, min(decimals, 20)), 64)
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	return minus(s)
}

// short writes v with that many significant digits, without trailing zeros.
func short(v float64, digits int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return "–"
	}
	if v == 0 {
		return "0" // of either sign
	}
	if a := math.Abs(v); a >= 1e7 || a < 1e-4 {
		s := strconv.FormatFloat(v, 'e', digits-1, 64)
		mantissa, exponent, _ := strings.Cut(s, "e")
		return power(trimZeros(mantissa) + "e" + exponent)
	}
	r, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'e', digits-1, 64), 64)
	return minus(strconv.FormatFloat(r, 'f', -1, 64))
}

func trimZeros(s string) string {
	if !strings.Contains(s, ".") {
		return s
	}
	return strings.TrimRight(strings.TrimRight(s, "0"), ".")
}

// power turns 3e-06 into 3 × 10⁻⁶.
func power(s string) string {
	mantissa, exponent, ok := strings.Cut(s, "e")
	if !ok {
		return minus(s)
	}
	n, err := strconv.Atoi(exponent)
	if err != nil {
		return minus(s)
	}
	raised := strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴",
		"5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹").Replace(strconv.Itoa(n))
	if n == 0 {
		return minus(mantissa)
	}
	return minus(mantissa) + " × 10" + raised
}

// minus sets the true minus sign, which is as wide as a digit.
func minus(s string) string { return strings.ReplaceAll(s, "-", "−") }

// count writes a whole number in groups of three.
func count(n int) string {
	s := strconv.Itoa(n)
	digits := strings.TrimPrefix(s, "-")
	for i := len(digits) - 3; i > 0; i -= 3 {
		digits = digits[:i] + "\u202f" + digits[i:]
	}
	if n < 0 {
		return "−" + digits
	}
	return digits
}

// several is a count with its noun: 1 point, 2 points.
func several(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return count(n) + " " + noun + "s"
}

// unit is how values of a dimension are shown: Text after the number, which
// is the SI value times Scale.
type unit struct {
	Text  string
	Scale float64
}

// unitFor chooses a unit in which values up to most read well.
func unitFor(d schema.Dimension, most float64) unit {
	switch d {
	case schema.Dimension{}:
		return unit{"", 1}
	case schema.Dimension{Angle: 1}:
		return unit{"°", 180 / math.Pi}
	case schema.Dimension{Temperature: 1}:
		return unit{"K", 1}
	case schema.Dimension{Length: 1}:
		return prefixed(most, []unit{{"m", 1}, {"mm", 1e3}, {"µm", 1e6}, {"nm", 1e9}})
	case schema.Dimension{Time: -1}:
		return prefixed(most, []unit{{"THz", 1e-12}, {"GHz", 1e-9}, {"MHz", 1e-6}, {"kHz", 1e-3}, {"Hz", 1}})
	}
	return unit{product(d), 1}
}

// prefixed takes the first unit in which most is at least 1, else the last.
func prefixed(most float64, units []unit) unit {
	for _, u := range units {
		if math.Abs(most)*u.Scale >= 1-1e-9 {
			return u
		}
	}
	return units[len(units)-1]
}

// product writes a dimension as a product of SI units, S for siemens left out:
// it serves the few parameters that have no unit of their own.
func product(d schema.Dimension) string {
	var parts []string
	for _, f := range []struct {
		unit string
		n    int
	}{{"kg", d.Mass}, {"m", d.Length}, {"s", d.Time}, {"A", d.Current}, {"K", d.Temperature}, {"rad", d.Angle}} {
		switch {
		case f.n == 1:
			parts = append(parts, f.unit)
		case f.n != 0:
			raised := strings.TrimPrefix(power("1e"+strconv.Itoa(f.n)), "1 × 10")
			parts = append(parts, f.unit+raised)
		}
	}
	return strings.Join(parts, "·")
}

// with puts a number before its unit, with a space that does not break.
func (u unit) with(number string) string {
	switch u.Text {
	case "":
		return number
	case "°":
		return number + u.Text
	}
	return number + "\u00a0" + u.Text
}

// value writes an SI value in the unit that suits it.
func value(v float64, d schema.Dimension) string {
	u := unitFor(d, math.Abs(v))
	return u.with(short(v*u.Scale, 7))
}

// axisUnit is the unit for a set of values.
func axisUnit(d schema.Dimension, values []float64) unit {
	most := 0.0
	for _, v := range values {
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			most = max(most, math.Abs(v))
		}
	}
	return unitFor(d, most)
}

// fixedPlain writes v with that many decimals, never as a power of ten.
func fixedPlain(v float64, decimals int) string {
	return minus(strconv.FormatFloat(v+0, 'f', min(decimals, 20), 64))
}
