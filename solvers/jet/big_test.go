package jet

import (
	"math/big"
	"testing"
)

// composite is sqrt(w p + (w^2 - p)/(w + 2 p)) written for both arithmetics.
func composite(w, p Jet) Jet {
	q := Div(Sub(Mul(w, w), p), Add(w, Scale(p, 2)))
	return Sqrt(Add(Mul(w, p), q))
}

func compositeBig(w, p *big.Float) *big.Float {
	f := func() *big.Float { return new(big.Float).SetPrec(600) }
	num := f().Sub(f().Mul(w, w), p)
	den := f().Add(w, f().Mul(big.NewFloat(2), p))
	return f().Sqrt(f().Add(f().Mul(w, p), f().Quo(num, den)))
}

// TestAgainstHighPrecisionDifferences differences the same function at 600
// bits with a step of 2^-100: the error of central differences, of the order
// of the step squared (1e-60), and that of rounding (2^-600 over the step
// cubed) are both far below a float64.
func TestAgainstHighPrecisionDifferences(t *testing.T) {
	w, p := variables()
	got := composite(w, p)
	h := new(big.Float).SetMantExp(big.NewFloat(1), -100)
	at := func(i, j int64) *big.Float {
		step := func(x float64, n int64) *big.Float {
			d := new(big.Float).SetPrec(600).Mul(h, new(big.Float).SetInt64(n))
			return d.Add(d, big.NewFloat(x))
		}
		return compositeBig(step(w0, i), step(p0, j))
	}
	// stencil sums weight f(w + i h, p + j h), over weight/scale
	stencil := func(order int, scale float64, points ...[3]int64) float64 {
		sum := new(big.Float).SetPrec(600)
		for _, s := range points {
			sum.Add(sum, new(big.Float).SetPrec(600).Mul(at(s[1], s[2]), new(big.Float).SetInt64(s[0])))
		}
		sum.SetMantExp(sum, 100*order)
		v, _ := sum.Float64()
		return v / scale
	}
	want := closed(
		stencil(0, 1, [3]int64{1, 0, 0}),
		stencil(1, 2, [3]int64{1, 1, 0}, [3]int64{-1, -1, 0}),
		stencil(2, 1, [3]int64{1, 1, 0}, [3]int64{-2, 0, 0}, [3]int64{1, -1, 0}),
		stencil(3, 2, [3]int64{1, 2, 0}, [3]int64{-2, 1, 0}, [3]int64{2, -1, 0}, [3]int64{-1, -2, 0}),
		stencil(1, 2, [3]int64{1, 0, 1}, [3]int64{-1, 0, -1}),
		stencil(2, 4, [3]int64{1, 1, 1}, [3]int64{-1, 1, -1}, [3]int64{-1, -1, 1}, [3]int64{1, -1, -1}),
	)
	closeTo(t, got, want)
}
