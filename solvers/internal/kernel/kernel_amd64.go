package kernel

import "golang.org/x/sys/cpu"

// level is a set of instructions.
type level int

const (
	plain  level = iota
	avx2         // 256-bit vectors with fused multiply-add
	avx512       // 512-bit vectors with masks
)

// best is the widest set that the processor and the system have.
var best = detect()

func detect() level {
	x := &cpu.X86
	switch {
	case x.HasAVX512F && x.HasAVX512DQ && x.HasAVX512VL && x.HasFMA:
		return avx512
	case x.HasAVX2 && x.HasFMA:
		return avx2
	}
	return plain
}

func (l level) subReal(c, a, b *View[float64], m, n, k int) {
	switch {
	case l == avx512 && m == 1:
		sub512row(&c.Data[0], &a.Data[0], a.Step, &b.Data[0], b.Row, n, k)
	case l == avx512:
		sub512(&c.Data[0], c.Row, &a.Data[0], a.Row, a.Step, &b.Data[0], b.Row, m, n, k)
	case l == avx2:
		sub256(&c.Data[0], c.Row, &a.Data[0], a.Row, a.Step, &b.Data[0], b.Row, m, n, k)
	default:
		plainSub(c, a, b, m, n, k)
	}
}

func (l level) rowReal(y, a, b []float64, row int) {
	if l == avx512 {
		sub512row(&y[0], &a[0], 1, &b[0], row, len(y), len(a))
		return
	}
	l.subReal(&View[float64]{y, len(y), 1}, &View[float64]{a, len(a), 1}, &View[float64]{b, row, 1}, 1, len(y), len(a))
}

func (l level) subComplex(c, a, b *View[complex128], m, n, k int) {
	switch l {
	case avx512:
		sub512complex(&c.Data[0], c.Row, &a.Data[0], a.Row, a.Step, &b.Data[0], b.Row, m, n, k)
	case avx2:
		sub256complex(&c.Data[0], c.Row, &a.Data[0], a.Row, a.Step, &b.Data[0], b.Row, m, n, k)
	default:
		plainSubComplex(c, a, b, m, n, k)
	}
}

func (l level) solveReal(a, x *View[float64], m, n int) {
	if l == avx512 {
		solve512(&a.Data[0], a.Row, &x.Data[0], x.Row, m, n)
		return
	}
	blockSolve(l, a, x, m, n)
}

func (l level) solveComplex(a, x *View[complex128], m, n int) {
	if l == avx512 {
		solve512complex(&a.Data[0], a.Row, &x.Data[0], x.Row, m, n)
		return
	}
	rowSolve(l, a, x, m, n)
}

func (l level) turnReal(dst, src *View[float64], scale []float64, m, n int) {
	if l == avx512 {
		var first *float64
		if scale != nil {
			first = &scale[0]
		}
		turn512(&dst.Data[0], dst.Row, &src.Data[0], src.Row, first, m, n)
		return
	}
	plainTurn(dst, src, scale, m, n)
}

func (l level) turnComplex(dst, src *View[complex128], scale []complex128, m, n int) {
	if l == avx512 {
		var first *complex128
		if scale != nil {
			first = &scale[0]
		}
		turn512complex(&dst.Data[0], dst.Row, &src.Data[0], src.Row, first, m, n)
		return
	}
	plainTurn(dst, src, scale, m, n)
}

func (l level) dotsReal(y []float64, a *View[float64], x []float64) {
	switch l {
	case avx512:
		dots512(&y[0], &a.Data[0], a.Row, &x[0], len(y), len(x))
	case avx2:
		dots256(&y[0], &a.Data[0], a.Row, &x[0], len(y), len(x))
	default:
		plainDots(y, a, x)
	}
}

func (l level) dotComplex(x, y []complex128) (rr, ii, ri, ir float64) {
	switch {
	case l == avx512 && len(x) > 0:
		return dot512complex(&x[0], &y[0], len(x))
	case l == avx2 && len(x) > 0:
		return dot256complex(&x[0], &y[0], len(x))
	}
	return plainDotComplex(x, y)
}

func (l level) peakReal(x []float64) float64 {
	if l == avx512 && len(x) > 0 {
		return peak512(&x[0], len(x))
	}
	return plainPeak(x)
}

func (l level) peakComplex(x []complex128) float64 {
	if l == avx512 && len(x) > 0 {
		return peak512complex(&x[0], len(x))
	}
	return plainPeakComplex(x)
}

func (l level) pivotsReal(w, u []float64, row, n, t, end int, alpha float64) int {
	if l == avx512 {
		return pivots512(&w[0], &u[0], row, n, t, end, alpha)
	}
	return plainPivots(l, w, u, row, n, t, end, alpha)
}
