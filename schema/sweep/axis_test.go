package sweep_test

import (
	"math"
	"testing"

	"betaloom/schema/sweep"
)

// axis reads a sweep whose height is the given axis.
func axis(t *testing.T, text string) *sweep.Sweep {
	t.Helper()
	s, err := parse(slab(t, "height: 0.4 um", "height: "+text))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func TestAxisValues(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       []float64
	}{
		{"count", "{from: 0.2 um, to: 0.3 um, count: 5}", []float64{0.2e-6, 0.225e-6, 0.25e-6, 0.275e-6, 0.3e-6}},
		{"falling", "{from: 0.3 um, to: 0.2 um, count: 3}", []float64{0.3e-6, 0.25e-6, 0.2e-6}},
		{"one value", "{from: 0.3 um, to: 0.4 um, count: 1}", []float64{0.3e-6}},
		{"step that reaches the end", "{from: 0.1 um, to: 0.7 um, step: 0.2 um}", []float64{0.1e-6, 0.3e-6, 0.5e-6, 0.7e-6}},
		{"step that does not", "{from: 0.1 um, to: 0.65 um, step: 200 nm}", []float64{0.1e-6, 0.3e-6, 0.5e-6}},
		{"falling step", "{from: 0.5 um, to: 0.1 um, step: -0.2 um}", []float64{0.5e-6, 0.3e-6, 0.1e-6}},
		{"step beyond the end", "{from: 0.1 um, to: 0.2 um, step: 1 um}", []float64{0.1e-6}},
		{"values as given", "{values: [0.3 um, 200 nm, 0.25 um]}", []float64{0.3e-6, 0.2e-6, 0.25e-6}},
		{"from zero", "{from: 0 um, to: 0.3 um, count: 4}", []float64{0, 0.1e-6, 0.2e-6, 0.3e-6}},
	} {
		t.Run(c.name, func(t *testing.T) { equal(t, axis(t, c.text).Axes[1].Values, c.want) })
	}
}

// TestAxisThroughZero: the middle is zero, not what rounding leaves of it.
func TestAxisThroughZero(t *testing.T) {
	s, err := parse(slab(t, "height: 0.4 um", "height: 0.4 um, shift: {from: -0.3, to: 0.3, count: 7}"))
	if err != nil {
		t.Fatal(err)
	}
	equal(t, s.Axes[1].Values, []float64{-0.3, -0.2, -0.1, 0, 0.1, 0.2, 0.3})
	if math.Signbit(s.Axes[1].Values[3]) {
		t.Error("found a negative zero")
	}
}

// TestLongerAxisKeepsValues: tiles solved for a shorter axis serve a longer
// one only where their values are the same to the last bit.
func TestLongerAxisKeepsValues(t *testing.T) {
	short := axis(t, "{from: 0.2 um, to: 0.8 um, count: 601}").Axes[1].Values
	long := axis(t, "{from: 0.2 um, to: 1.2 um, count: 1001}").Axes[1].Values
	step := axis(t, "{from: 0.2 um, to: 1.2 um, step: 1 nm}").Axes[1].Values
	equal(t, long[:601], short)
	equal(t, step, long)
	thirds := axis(t, "{from: 0.1 um, to: 0.2 um, count: 4}").Axes[1].Values
	more := axis(t, "{from: 0.1 um, to: 0.3 um, count: 7}").Axes[1].Values
	equal(t, more[:3], thirds[:3])
}

// TestAxisRounding: fourteen digits are kept, so that a value strays from
// the exact one by at most half of the last of them.
func TestAxisRounding(t *testing.T) {
	const n = 1000
	for i, v := range axis(t, "{from: 0.123456789 um, to: 0.987654321 um, count: 1000}").Axes[1].Values {
		exact := 0.123456789e-6 + (0.987654321e-6-0.123456789e-6)*float64(i)/(n-1)
		if math.Abs(v-exact) > 0.51e-20 { // 14 digits of 0.98e-6, and the rounding of exact itself
			t.Fatalf("value %d: found %.17g, expected %.17g", i, v, exact)
		}
	}
}

// TestNearlyWholeStep: a step whose multiples miss the end by rounding alone
// reaches it.
func TestNearlyWholeStep(t *testing.T) {
	v := axis(t, "{from: 0.1 um, to: 1.1 um, step: 0.333333333333 um}").Axes[1].Values
	equal(t, len(v), 4)
	equal(t, v[3], 1.1e-6)
}
