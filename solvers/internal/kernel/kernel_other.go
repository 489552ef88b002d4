//go:build !amd64

package kernel

// level is a set of instructions; here there is one.
type level int

const (
	plain level = iota
	best        = plain
)

func (level) subReal(c, a, b *View[float64], m, n, k int) { plainSub(c, a, b, m, n, k) }

func (level) rowReal(y, a, b []float64, row int) {
	plainSub(&View[float64]{y, len(y), 1}, &View[float64]{a, len(a), 1}, &View[float64]{b, row, 1}, 1, len(y), len(a))
}

func (level) subComplex(c, a, b *View[complex128], m, n, k int) { plainSubComplex(c, a, b, m, n, k) }

func (l level) solveReal(a, x *View[float64], m, n int) { blockSolve(l, a, x, m, n) }

func (l level) solveComplex(a, x *View[complex128], m, n int) { rowSolve(l, a, x, m, n) }

func (level) turnReal(dst, src *View[float64], scale []float64, m, n int) {
	plainTurn(dst, src, scale, m, n)
}

func (level) turnComplex(dst, src *View[complex128], scale []complex128, m, n int) {
	plainTurn(dst, src, scale, m, n)
}

func (level) dotsReal(y []float64, a *View[float64], x []float64) { plainDots(y, a, x) }

func (level) dotComplex(x, y []complex128) (rr, ii, ri, ir float64) { return plainDotComplex(x, y) }

func (level) peakReal(x []float64) float64 { return plainPeak(x) }

func (level) peakComplex(x []complex128) float64 { return plainPeakComplex(x) }

func (l level) pivotsReal(w, u []float64, row, n, t, end int, alpha float64) int {
	return plainPivots(l, w, u, row, n, t, end, alpha)
}
