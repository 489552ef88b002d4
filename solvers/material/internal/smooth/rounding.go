package smooth

import "math"

// rounding is the standard deviation that samples have from being written
// with so many decimals, or from being floating-point numbers at all. Three
// decimals are the fewest that count.
func rounding(y []float64) float64 {
	largest := 0.0
	for _, v := range y {
		largest = max(largest, math.Abs(v))
	}
	unit := 4 * largest * 0x1p-52
	for q := 1e-3; q > unit; q /= 10 {
		if multiples(y, q) {
			unit = q
			break
		}
	}
	return unit / math.Sqrt(12)
}

// multiples says whether all values are whole multiples of q, as far as
// floating-point numbers can be.
func multiples(y []float64, q float64) bool {
	for _, v := range y {
		m := v / q
		if math.Abs(m-math.Round(m)) > 8*math.Abs(m)*0x1p-52 {
			return false
		}
	}
	return true
}
