package surface

import (
	"math"
	"slices"
	"testing"

	"betaloom/schema"
)

func TestSlice(t *testing.T) {
	axes := []schema.AxisBlock{wavelengths(7), thickness(9), shifts(3)}
	s := writeSlab(t, axes, 2)
	p := slabSweep(axes)
	t.Run("one axis", func(t *testing.T) {
		slice, err := s.Slice("TE0", "ng", []int{1}, []int{4, -1, 2})
		if err != nil || !slices.Equal(slice.Shape, []int{9}) {
			t.Fatalf("found %+v, %v", slice, err)
		}
		for j, v := range slice.Values {
			if want := slabTE(0, at(p, axes, []float64{axes[0].Values[4], axes[1].Values[j], axes[2].Values[2]})).ng; v != want {
				t.Errorf("node %d: found %g, expected %g", j, v, want)
			}
		}
	})
	t.Run("two axes", func(t *testing.T) {
		slice, err := s.Slice("TE1", "d_ps_per_nm_km", []int{1, 0}, []int{0, 0, 1})
		if err != nil || !slices.Equal(slice.Shape, []int{9, 7}) {
			t.Fatalf("found %+v, %v", slice, err)
		}
		absent := 0
		for k, v := range slice.Values {
			l := axes[0].Values[k%7]
			exact := slabTE(1, at(p, axes, []float64{l, axes[1].Values[k/7], axes[2].Values[1]}))
			d := -2 * math.Pi * schema.LightSpeed / (l * l) * exact.gvd * 1e-27 * 1e6
			if math.IsNaN(v) == exact.guided || exact.guided && math.Abs(v-d) > 1e-12*math.Abs(d) {
				t.Errorf("node %d: found %g, expected %g", k, v, d)
			}
			if !exact.guided {
				absent++
			}
		}
		if absent == 0 {
			t.Error("found TE1 everywhere, expected it cut off in a part")
		}
	})
	for name, f := range map[string]func() (Slice, error){
		"family":   func() (Slice, error) { return s.Slice("TE7", "ng", []int{0}, []int{0, 0, 0}) },
		"column":   func() (Slice, error) { return s.Slice("TE0", "width", []int{0}, []int{0, 0, 0}) },
		"axis":     func() (Slice, error) { return s.Slice("TE0", "ng", []int{3}, []int{0, 0, 0}) },
		"repeated": func() (Slice, error) { return s.Slice("TE0", "ng", []int{1, 1}, []int{0, 0, 0}) },
		"position": func() (Slice, error) { return s.Slice("TE0", "ng", []int{0}, []int{0, 9, 0}) },
		"count":    func() (Slice, error) { return s.Slice("TE0", "ng", []int{0}, []int{0}) },
	} {
		t.Run(name, func(t *testing.T) {
			if _, err := f(); err == nil {
				t.Error("found no error")
			}
		})
	}
}
