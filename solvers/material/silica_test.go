package material

import (
	"math"
	"math/big"
	"testing"

	"betaloom/schema"
)

// silica is Malitson's formula once more, in numbers of 700 bits and in the
// wavelength rather than the frequency: another route to ng and D.
func silica(l *big.Float) *big.Float {
	l2, sum := mul(l, l), num(1)
	for _, t := range [][2]float64{{0.6961663, 0.0684043}, {0.4079426, 0.1162414}, {0.8974794, 9.896161}} {
		c := num(t[1])
		sum = add(sum, quo(mul(num(t[0]), l2), sub(l2, mul(c, c))))
	}
	return sqrt(sum)
}

// silicaSlope is the order-th derivative of silica in um^-order.
func silicaSlope(um float64, order int) float64 {
	h := new(big.Float).SetMantExp(num(1), step)
	sum := num(0)
	for k, c := range stencils[order] {
		sum = add(sum, mul(num(c), silica(add(num(um), mul(h, num(float64(k)))))))
	}
	for range order {
		sum = quo(sum, h)
	}
	v, _ := sum.Float64()
	return v
}

// dispersionOf gives n, ng and D in ps/(nm km) from the jet of an index.
func dispersionOf(t *testing.T, m *Material, um float64) (n, ng, d float64) {
	j, w := index(t, m, um), frequencyOf(um)
	n, n1, n2 := real(j.V), real(j.W), real(j.WW)
	gvd := (2*n1 + w*n2) / schema.LightSpeed
	l := um * 1e-6
	return n, n + w*n1, -2 * math.Pi * schema.LightSpeed / (l * l) * gvd * 1e6
}

func TestSilicaDispersion(t *testing.T) {
	m := compiled(t, schema.Material{Named: "fused-silica"})
	for _, um := range []float64{0.3, 0.8, 1.0, 1.2728, 1.31, 1.55, 2.2, 6} {
		n, ng, d := dispersionOf(t, m, um)
		// ng = n - L dn/dL and D = -(L/c) d2n/dL2, which is in s/m^2 after 1e-6 m and 1e12/m^2
		wantN, wantNg := silicaSlope(um, 0), silicaSlope(um, 0)-um*silicaSlope(um, 1)
		wantD := -um * 1e-6 / schema.LightSpeed * silicaSlope(um, 2) * 1e12 * 1e6
		// rounding; D cancels a few digits beside its parts of up to 1e3
		if math.Abs(n-wantN) > 1e-14 || math.Abs(ng-wantNg) > 1e-13 || math.Abs(d-wantD) > 1e-9*max(1, math.Abs(wantD)) {
			t.Errorf("%g um: n, ng, D = %v, %v, %v, want %v, %v, %v", um, n, ng, d, wantN, wantNg, wantD)
		}
	}
}

func TestSilicaPublishedValues(t *testing.T) {
	m := compiled(t, schema.Material{Named: "fused-silica"})
	n, ng, d := dispersionOf(t, m, 1.55)
	// from memory: n 1.44402 (Malitson), ng 1.4626, D about 22 ps/(nm km): half the last digit
	if math.Abs(n-1.44402) > 5e-6 || math.Abs(ng-1.4626) > 5e-5 || math.Abs(d-22) > 0.5 {
		t.Errorf("n, ng, D at 1.55 um = %v, %v, %v", n, ng, d)
	}
	lo, hi := 1.2, 1.35
	for hi-lo > 1e-9 {
		mid := (lo + hi) / 2
		if _, _, d := dispersionOf(t, m, mid); d < 0 {
			lo = mid
		} else {
			hi = mid
		}
	}
	if math.Abs(lo-1.2728) > 5e-5 { // from memory, Malitson: half the last digit
		t.Errorf("zero-dispersion wavelength %.6f um, want 1.2728", lo)
	}
}
