package report

import (
	"math"
	"slices"
)

// span is an interval of values.
type span struct{ Lo, Hi float64 }

// spanOf is the range of the finite values, empty (Lo > Hi) if there are none.
func spanOf(values []float64) span {
	s := span{math.Inf(1), math.Inf(-1)}
	for _, v := range values {
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			s = span{min(s.Lo, v), max(s.Hi, v)}
		}
	}
	return s
}

func (s span) empty() bool    { return s.Lo > s.Hi }
func (s span) width() float64 { return s.Hi - s.Lo }

// at is where v lies: 0 at Lo, 1 at Hi.
func (s span) at(v float64) float64 { return (v - s.Lo) / (s.Hi - s.Lo) }

// padded widens an interval by a share of itself, and one without width to
// one that can be drawn.
func (s span) padded(share float64) span {
	if s.empty() {
		return span{0, 1}
	}
	pad := s.width() * share
	least := 1e-9 * max(math.Abs(s.Lo), math.Abs(s.Hi), 1e-300)
	if s.width() < least {
		pad = 0.5 * max(math.Abs(s.Lo), 1e-12) * 1e-3
	}
	return span{s.Lo - pad, s.Hi + pad}
}

// sturdy is the range to draw where a few extreme values (a mode near its
// cut-off) would flatten all others: it ends a quarter beyond the inner 90 %
// if the full range is over 2.5 times as wide. beyond is the share of values outside.
func sturdy(values []float64) (s span, beyond float64) {
	var sorted []float64
	for _, v := range values {
		if !math.IsNaN(v) && !math.IsInf(v, 0) {
			sorted = append(sorted, v)
		}
	}
	if len(sorted) == 0 {
		return span{0, -1}, 0
	}
	slices.Sort(sorted)
	n := len(sorted)
	full := span{sorted[0], sorted[n-1]}
	inner := span{sorted[n*5/100], sorted[n-1-n*5/100]}
	if inner.width() == 0 || full.width() <= 2.5*inner.width() {
		return full, 0
	}
	pad := inner.width() / 4
	s = span{max(full.Lo, inner.Lo-pad), min(full.Hi, inner.Hi+pad)}
	out := 0
	for _, v := range sorted {
		if v < s.Lo || v > s.Hi {
			out++
		}
	}
	return s, float64(out) / float64(n)
}

// ticks gives about n round values inside the interval, after Heckbert, Nice
// numbers for graph labels, in Graphics Gems (1990), and the decimals that tell
// them apart.
func (s span) ticks(n int) (values []float64, decimals int) {
	if s.empty() || s.width() <= 0 || n < 1 {
		return nil, 0
	}
	step := round125(s.width() / float64(n))
	first := math.Ceil(s.Lo/step - 1e-9)
	for i := 0; i <= 4*n+4; i++ {
		k := first + float64(i)
		v := k * step
		if v > s.Hi+1e-9*step {
			break
		}
		if k == 0 {
			v = 0
		}
		values = append(values, v)
	}
	decimals = max(0, -int(math.Floor(math.Log10(step)+1e-9)))
	return values, decimals
}

// round125 is the number of the form {1, 2, 5} times 10^k nearest to x in
// ratio, never much below it.
func round125(x float64) float64 {
	base := math.Pow(10, math.Floor(math.Log10(x)))
	switch f := x / base; {
	case f < 1.5:
		return base
	case f < 3:
		return 2 * base
	case f < 7:
		return 5 * base
	}
	return 10 * base
}

// labels writes tick values; large and tiny ones as powers of ten.
func labels(values []float64, decimals int) []string {
	out := make([]string, len(values))
	for i, v := range values {
		if m := max(math.Abs(values[0]), math.Abs(values[len(values)-1])); m >= 1e7 || m < 1e-4 {
			out[i] = short(v, 4)
			continue
		}
		out[i] = fixedPlain(v, decimals)
	}
	return out
}
